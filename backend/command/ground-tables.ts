import { createHash } from 'node:crypto';
import { constantOrientation } from '#shared/earth/earth-orientation';
import { readFinalsFile } from '#shared/earth/finals-file';
import { type OrientationRow, type OrientationTable } from '#shared/earth/orientation-table';
import { type EarthRotation, earthRotation } from '#shared/earth/rotation';
import { createTaiWriter } from '#shared/time/format';
import { compareInstants, type Instant } from '#shared/time/instant';
import { type LeapSecondTable, parseLeapSeconds, taiMinusUtcAt, taiMinusUtcOnDay } from '#shared/time/leap-seconds';
import { SHIPPED_LEAP_SECONDS_LIST } from '#shared/time/shipped-leap-seconds';
import { readOption } from './readable-file';
import { UsageProblem } from './usage-problem';

/** The stretch of time that is reconciled: from the start of the run to its end or the last event, whichever is later. */
export interface RunSpan {
  readonly from: Instant;
  readonly end: Instant;
}

/** What `summary.json` says of the leap-second list. */
export interface LeapSecondsAccount {
  readonly sha256: string;
  readonly sha1: string;
  readonly expires_tai: string;
  /** The list expires before the end of the run. */
  readonly expired: boolean;
}

/** What `summary.json` says of the Earth-orientation table. */
export type OrientationAccount =
  | { readonly loaded: false }
  | {
      readonly loaded: true;
      readonly sha256: string;
      readonly first_tai: string;
      readonly last_tai: string;
      /** The run begins before the table. */
      readonly before: boolean;
      /** The run ends after the table. */
      readonly expired: boolean;
      /** Some value used is a prediction. */
      readonly predicted: boolean;
    };

/** What is to be said of the tables that a run rests on. */
export interface GroundAccount {
  readonly leapSeconds: LeapSecondsAccount;
  readonly orientation: OrientationAccount;
  /** What is doubtful, a text each. */
  readonly warnings: readonly string[];
}

/** The tables of time and Earth that a reconciliation rests on, and what is to be said of them. */
export interface GroundTables {
  readonly leapSeconds: LeapSecondTable;
  readonly rotationFor: (runFrom: Instant) => EarthRotation;
  /** How far the tables cover a run; it depends on nothing but its two ends. */
  readonly accountOf: (run: RunSpan) => GroundAccount;
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
  return {
    leapSeconds: table,
    rotationFor: (runFrom) => earthRotation(orientation?.table ?? constantOrientation(-taiMinusUtcAt(table, runFrom))),
    accountOf: (run) => {
      const ofLeapSeconds = leapSecondsAccount(table, sha256(list), run);
      const ofOrientation = orientation ? orientationAccount(orientation, run) : { account: { loaded: false } as const, warnings: [] };
      return {
        leapSeconds: ofLeapSeconds.account,
        orientation: ofOrientation.account,
        warnings: [...ofLeapSeconds.warnings, ...ofOrientation.warnings],
      };
    },
  };
}

function leapSecondsAccount(table: LeapSecondTable, hash: string, { end }: RunSpan): { account: LeapSecondsAccount; warnings: string[] } {
  const taiText = createTaiWriter();
  const expires = taiText(table.expires);
  const expired = compareInstants(end, table.expires) > 0;
  return {
    account: { sha256: hash, sha1: table.sha1, expires_tai: expires, expired },
    warnings: expired
      ? [
          `leap seconds: the list expires at ${toSecond(table.expires)} TAI, the run ends at ${toSecond(end)} TAI: leap seconds after that are unknown; ` +
            'give a newer list with --leap-seconds',
        ]
      : [],
  };
}

interface LoadedOrientation {
  readonly table: OrientationTable;
  readonly sha256: string;
}

function orientationAccount(
  { table, sha256: hash }: LoadedOrientation,
  { from, end }: RunSpan,
): { account: OrientationAccount; warnings: string[] } {
  const taiText = createTaiWriter();
  const [first, last] = [taiText(startOf(table.rows[0])), taiText(startOf(table.rows.at(-1)))];
  const before = compareInstants(from, startOf(table.rows[0])) < 0;
  const expired = compareInstants(end, startOf(table.rows.at(-1))) > 0;
  const predicted = predictionIn(table.rows, { from, end });
  const warnings: string[] = [];
  if (before) {
    const begins = `the table begins at ${toSecond(startOf(table.rows[0]))} TAI, the run at ${toSecond(from)} TAI`;
    warnings.push(`earth orientation: ${begins}: before the table its first values are held`);
  }
  if (expired) {
    const ends = `the table ends at ${toSecond(startOf(table.rows.at(-1)))} TAI, the run at ${toSecond(end)} TAI`;
    warnings.push(`earth orientation: ${ends}: after the table its last values are held`);
  }
  if (predicted) {
    const ofRun = `the run ends at ${toSecond(end)} TAI`;
    warnings.push(`earth orientation: the values are a prediction from ${toSecond(startOf(predicted))} TAI on, ${ofRun}`);
  }
  return {
    account: { loaded: true, sha256: hash, first_tai: first, last_tai: last, before, expired, predicted: predicted !== undefined },
    warnings,
  };
}

/** An instant without the decimals of its second, for a message. */
const toSecond = (instant: Instant): string => createTaiWriter()(instant).slice(0, 'YYYY-MM-DDThh:mm:ss'.length);

const startOf = (row: OrientationRow | undefined): Instant => ({ taiS: row?.taiS ?? 0, ps: 0 });

/** The first predicted row that the values between two instants rest on; between two rows they rest on both. */
const predictionIn = (rows: readonly OrientationRow[], { from, end }: RunSpan): OrientationRow | undefined =>
  rows.find(
    (row, at) =>
      row.kind === 'predicted' &&
      (at === 0 || compareInstants(end, startOf(rows[at - 1])) > 0) &&
      (at === rows.length - 1 || compareInstants(from, startOf(rows[at + 1])) < 0),
  );

function loadOrientation(path: string | undefined, table: LeapSecondTable): LoadedOrientation | undefined {
  if (path === undefined) return undefined;
  const text = readOption('--earth-orientation', path);
  const read = readFinalsFile(text, (day) => taiMinusUtcOnDay(table, day) ?? 0);
  if (!read.ok) throw UsageProblem.of(read.problem, path);
  return { table: read.value, sha256: sha256(text) };
}
