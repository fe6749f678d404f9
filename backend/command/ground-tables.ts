import { createHash } from 'node:crypto';
import { constantOrientation, type EarthOrientation } from '#shared/earth/earth-orientation';
import { readFinalsFile } from '#shared/earth/finals-file';
import { type EarthRotation, earthRotation } from '#shared/earth/rotation';
import { type Problem } from '#shared/outcome';
import { createTaiWriter } from '#shared/time/format';
import { compareInstants, type Instant } from '#shared/time/instant';
import { type LeapSecondTable, parseLeapSeconds, taiMinusUtcOnDay, utcDayAt } from '#shared/time/leap-seconds';
import { SHIPPED_LEAP_SECONDS_LIST } from '#shared/time/shipped-leap-seconds';
import { readOption } from './readable-file';
import { UsageProblem } from './usage-problem';

/** The tables of time and Earth that a reconciliation rests on, and what is to be said of them. */
export interface GroundTables {
  readonly leapSeconds: LeapSecondTable;
  readonly leapSecondsSha256: string;
  /** Whether the list had expired at an instant. */
  readonly leapSecondsAt: (end: Instant) => { readonly expires_tai: string; readonly expired: boolean };
  readonly rotationFor: (runFrom: Instant) => EarthRotation;
  /** Whether an orientation table was used, and whether it had ended or was a prediction at an instant; null where none is loaded. */
  readonly orientationAt: (end: Instant) => { readonly sha256: string; readonly expired: boolean; readonly predicted: boolean } | null;
}

const sha256 = (text: string): string => createHash('sha256').update(text).digest('hex');

/**
 * Loads the leap-second list (the shipped one unless a file is named) and the Earth-orientation table, if one is named.
 *
 * Without an orientation table UT1 - TAI is minus (TAI - UTC) at the start of the run, and the pole is at the origin.
 */
export function loadGroundTables(options: { leapSeconds?: string | undefined; earthOrientation?: string | undefined }): GroundTables {
  const list = options.leapSeconds === undefined ? SHIPPED_LEAP_SECONDS_LIST : readOption('--leap-seconds', options.leapSeconds);
  const leapSeconds = parseLeapSeconds(list);
  if (!leapSeconds.ok) throw UsageProblem.of(leapSeconds.problem, options.leapSeconds);
  const table = leapSeconds.value;
  const orientation = loadOrientation(options.earthOrientation, table);
  const taiText = createTaiWriter();
  return {
    leapSeconds: table,
    leapSecondsSha256: sha256(list),
    leapSecondsAt: (end) => ({ expires_tai: taiText(table.expires), expired: compareInstants(end, table.expires) > 0 }),
    rotationFor: (runFrom) => earthRotation(orientation?.table ?? constantOrientation(-taiMinusUtcAt(table, runFrom))),
    orientationAt: (end) => {
      if (!orientation) return null;
      const warning: Problem | undefined = orientation.table.warningAt(end.taiS);
      return {
        sha256: orientation.sha256,
        expired: warning?.code === 'orientation-after',
        predicted: warning?.code === 'orientation-predicted',
      };
    },
  };
}

function loadOrientation(path: string | undefined, table: LeapSecondTable): { table: EarthOrientation; sha256: string } | undefined {
  if (path === undefined) return undefined;
  const text = readOption('--earth-orientation', path);
  const read = readFinalsFile(text, (day) => taiMinusUtcOnDay(table, day) ?? 0);
  if (!read.ok) throw UsageProblem.of(read.problem, path);
  return { table: read.value, sha256: sha256(text) };
}

/** TAI - UTC at an instant; before 1972 the first value, since no list says another. */
function taiMinusUtcAt(table: LeapSecondTable, { taiS }: Instant): number {
  const utc = utcDayAt(table, taiS);
  return (utc && taiMinusUtcOnDay(table, utc.day)) ?? table.steps[0]?.taiMinusUtcS ?? 0;
}
