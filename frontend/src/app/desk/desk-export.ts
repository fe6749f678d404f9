import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { type EventBrief } from '#shared/contract/event-routes';
import { createTaiWriter } from '#shared/time/format';
import { type Instant } from '#shared/time/instant';
import { type PairSeen } from './desk-events';

/** A cell of a table: a text, a number with all its digits, or nothing. */
export type Cell = string | number | null;

export interface Sheet {
  readonly columns: readonly string[];
  readonly rows: readonly (readonly Cell[])[];
}

/**
 * A table as CSV (RFC 4180). A text that a spreadsheet would take for a formula gets an apostrophe before it, and one that begins with an
 * apostrophe another, so that `readCsv` gives back what was written; numbers stand with all their digits.
 */
export const csvOf = ({ columns, rows }: Sheet): string =>
  `${[columns, ...rows].map((row) => row.map(cellText).join(',')).join('\r\n')}\r\n`;

function cellText(cell: Cell): string {
  if (cell === null) return '';
  if (typeof cell === 'number') return String(cell);
  const safe = /^[=+\-@\t\r']/.test(cell) ? `'${cell}` : cell;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/** The texts of a table that `csvOf` wrote, its head first. */
export function readCsv(csv: string): string[][] {
  const rows: string[][] = [[]];
  let cell = '';
  let isQuoted = false;
  const end = (): unknown => rows.at(-1)?.push(cell.startsWith("'") ? cell.slice(1) : cell) && (cell = '');
  for (let i = 0; i < csv.length; i++) {
    const c = csv.charAt(i);
    if (isQuoted && c === '"' && csv.charAt(i + 1) === '"') {
      cell += '"';
      i++;
    } else if (c === '"') isQuoted = !isQuoted;
    else if (isQuoted) cell += c;
    else if (c === ',') end();
    else if (c === '\n') {
      end();
      rows.push([]);
    } else if (c !== '\r') cell += c;
  }
  rows.pop();
  return rows;
}

/** The same as JSON: one object a row. */
export const jsonOf = ({ columns, rows }: Sheet): string =>
  `${JSON.stringify(
    rows.map((row) => Object.fromEntries(columns.map((column, i) => [column, row[i] ?? null]))),
    null,
    2,
  )}\n`;

const TAI_DECIMALS = 12;
const tai = createTaiWriter(TAI_DECIMALS);
const taiText = (instant: Instant): string => tai(instant);

/** Coincidences as a table. */
export const setSheet = (sets: readonly CoincidenceBrief[]): Sheet => ({
  columns: [
    'set',
    'rule',
    'fold',
    'sites',
    'first_tai',
    'span_ns',
    'class',
    'nearest_margin_sigma',
    'least_turning_speed',
    'state',
    'amplitude',
    'events',
  ],
  rows: sets.map((set) => [
    set.name,
    set.rule,
    set.fold,
    set.members.map(({ site }) => site).join(' '),
    taiText(set.first),
    set.spanNs,
    set.class,
    set.nearestMarginSigma,
    set.leastTurningSpeedC,
    set.state,
    set.amplitude,
    set.members.map(({ name }) => name).join(' '),
  ]),
});

/** Events against one of them as a table: signs of dt as seen from that event. */
export const eventSheet = (rows: readonly { readonly brief: EventBrief; readonly seen: PairSeen | undefined }[]): Sheet => ({
  columns: [
    'event',
    'site',
    'kind',
    'tai',
    'sigma_ns',
    'amplitude',
    'dt_ns',
    'distance_m',
    'class',
    'margin_sigma',
    'turning_speed',
    'turning_sigma',
  ],
  rows: rows.map(({ brief, seen }) => [
    brief.name,
    brief.site,
    brief.kind,
    taiText(brief.at),
    brief.sigmaNs,
    brief.amplitude,
    seen ? (seen.isFirst ? 1 : -1) * seen.pair.dtNs : null,
    seen?.pair.distanceM ?? null,
    seen?.pair.class ?? null,
    seen?.pair.marginSigma ?? null,
    seen?.pair.turning?.speedC ?? null,
    seen?.pair.turning?.sigmaC ?? null,
  ]),
});
