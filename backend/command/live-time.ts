import { type Network } from '#shared/reconcile/network';
import { compareInstants, type Instant, secondsBetween } from '#shared/time/instant';
import { type LeapSecondTable } from '#shared/time/leap-seconds';
import { parseStatedTime } from '#shared/time/stated-time';
import { readRecords } from './log-file';
import { checkReadable } from './readable-file';
import { type Pace } from './pace';
import { UsageProblem } from './usage-problem';

/** A span in which a site could trigger; both ends belong to it. */
interface Span {
  readonly from: Instant;
  readonly to: Instant;
}

/** Live time of each site, in the order of the network's sites: spans sorted and without overlap. */
export type LiveTime = readonly (readonly Span[])[];

/** Spans sorted, with those that touch or overlap made one. */
function merged(spans: readonly Span[]): readonly Span[] {
  const result: Span[] = [];
  for (const span of spans.toSorted((a, b) => compareInstants(a.from, b.from))) {
    const last = result.at(-1);
    if (last && compareInstants(span.from, last.to) <= 0) {
      if (compareInstants(span.to, last.to) > 0) result[result.length - 1] = { from: last.from, to: span.to };
    } else result.push(span);
  }
  return result;
}

/** Seconds that a site was live in all. */
export const liveSeconds = (spans: readonly Span[]): number => spans.reduce((sum, { from, to }) => sum + secondsBetween(from, to), 0);

/** Whether a site was live at an instant. */
export function isLiveAt(spans: readonly Span[], instant: Instant): boolean {
  let low = 0;
  let high = spans.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    const span = spans[middle];
    if (span && compareInstants(span.from, instant) <= 0) low = middle + 1;
    else high = middle;
  }
  const span = spans[low - 1];
  return span !== undefined && compareInstants(instant, span.to) <= 0;
}

/**
 * Reads the spans in which sites could trigger: a CSV file with the columns site, from, to.
 *
 * @param path the file
 * @returns the live time of each of the network's sites; a fault in the file is a usage problem that names its line
 */
export async function readLiveTime(path: string, network: Network, table: LeapSecondTable, pace: Pace): Promise<LiveTime> {
  const rows = new Map(network.sites.map(({ code }, row) => [code, row]));
  const spans = network.sites.map((): Span[] => []);
  let columns: Record<'site' | 'from' | 'to', number> | undefined;
  let width = 0;

  const timeOf = (text: string, line: number, column: string): Instant => {
    const time = parseStatedTime(text, `line ${line}, ${column}`, table);
    if (!time.ok) throw UsageProblem.of(time.problem, path);
    return time.value.instant;
  };
  checkReadable(path, '--live: ');
  await readRecords(
    path,
    (fields, { line }, isWhole) => {
      if (!isWhole) throw new UsageProblem(`${path}: line ${line}: a quote is not closed, or followed by something else than a comma`);
      if (!columns) {
        columns = headerOf(fields, path);
        width = fields.length;
        return;
      }
      if (fields.length !== width) throw new UsageProblem(`${path}: line ${line}: ${fields.length} fields; the header has ${width}`);
      const site = fields[columns.site] ?? '';
      const row = rows.get(site);
      if (row === undefined)
        throw new UsageProblem(`${path}: line ${line}, site: ${JSON.stringify(site)}; it must be a site of the network`);
      const from = timeOf(fields[columns.from] ?? '', line, 'from');
      const to = timeOf(fields[columns.to] ?? '', line, 'to');
      if (compareInstants(to, from) < 0)
        throw new UsageProblem(
          `${path}: line ${line}, to: ${JSON.stringify(fields[columns.to])}; it must not be before from (${fields[columns.from] ?? ''})`,
        );
      spans[row]?.push({ from, to });
    },
    { pace, onBytes: () => undefined },
  );
  if (!columns) throw new UsageProblem(`${path}: is empty; its first line must be a header: site,from,to`);
  return spans.map(merged);
}

function headerOf(fields: readonly string[], path: string): Record<'site' | 'from' | 'to', number> {
  const at = (name: string): number => {
    const column = fields.indexOf(name);
    if (column < 0)
      throw new UsageProblem(`${path}: line 1: no column ${name} in ${JSON.stringify(fields.join(','))}; needed are site,from,to`);
    return column;
  };
  return { site: at('site'), from: at('from'), to: at('to') };
}
