import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';
import { C_M_S } from '#shared/constants';

export type Row = Readonly<Record<string, string>>;
export const TABLES = ['events', 'coincidences', 'pairs', 'neighbours', 'orders', 'crowded', 'set-aside'] as const;
export type TableName = (typeof TABLES)[number];

/** The results of one reconciliation, all cells as text. */
export interface Results {
  readonly tables: Readonly<Record<TableName, readonly Row[]>>;
  /** By group and name, such as `set_aside.conflict`; what is 0 is left out. */
  readonly counts: ReadonlyMap<string, number>;
}

/** What the expected results say beyond those: the four-velocity of each frame at each set, by `set frame`. */
export interface Expected extends Results {
  readonly boosts: ReadonlyMap<string, readonly number[]>;
}

// Tolerances, from the accuracies that are stated for the product.

/** Earth-fixed to inertial, given UT1: stated is 1 arcsecond; the shortened series come to 1 mas (earth.test.ts), and this keeps it so. */
const ORIENTATION_RAD = (2e-3 * Math.PI) / 648_000;
/** Geodetic to Earth-fixed: 1e-6 m. A rotation adds the rounding of a double. */
const PLACE_M = 1e-6;
/** Distance between two events within 1 s, against the full IAU 2006/2000A model. */
const DISTANCE_M = 1e-3;
/** Standard errors, relative. */
const SIGMA = 1e-6;
/** Time scales are good to 1 ps: what is a millionth of that counts as no error, ns. */
const SIGMA_FLOOR_NS = 1e-9;
/** Boost of a pair's dt: 1 ps and so much of its terms, for gamma below 10 and up to a million. */
const BOOST_NS = 1e-3;
const BOOST = 1e-12;
const FAST_GAMMA = 10;
const FAST_BOOST = 1e-9;
/** The barycentric velocity: both programs sum one series, which the product interpolates to 0.1 mm/s (3.3e-13 c). */
const EARTH_VELOCITY_C = 1e-12;
/** A few roundings of a double. */
const ROUNDING = 4 * Number.EPSILON;
const NS_PER_M = 1e9 / C_M_S;

export function readTable(path: string): readonly Row[] {
  return Papa.parse<Row>(readFileSync(path, 'utf8').replace(/\n$/, ''), { header: true, newline: '\n', delimiter: ',' }).data;
}

/** Numbers of a nested object by their paths, zeros left out. */
function leaves(value: unknown, path = ''): [string, number][] {
  if (typeof value === 'number') return value === 0 ? [] : [[path, value]];
  if (typeof value !== 'object' || value === null) return [];
  return Object.entries(value).flatMap(([name, inner]) => leaves(inner, path === '' ? name : `${path}.${name}`));
}

const tablesOf = (folder: string): Results['tables'] => {
  const read = (name: TableName) => readTable(join(folder, `${name}.csv`));
  return {
    events: read('events'),
    coincidences: read('coincidences'),
    pairs: read('pairs'),
    neighbours: read('neighbours'),
    orders: read('orders'),
    crowded: read('crowded'),
    'set-aside': read('set-aside'),
  };
};

export function readExpected(folder: string): Expected {
  const boosts = readTable(join(folder, 'frames.csv')).map(
    ({ set, frame, ...numbers }) => [`${set!} ${frame!}`, Object.values(numbers).map(Number)] as const,
  );
  const summary: unknown = JSON.parse(readFileSync(join(folder, 'summary.json'), 'utf8'));
  return { tables: tablesOf(folder), counts: new Map(leaves(summary)), boosts: new Map(boosts) };
}

/** The product's results; its summary also holds the hash of each file, which is checked here. */
export function readResults(folder: string): Results {
  const summary = JSON.parse(readFileSync(join(folder, 'summary.json'), 'utf8')) as Record<string, Record<string, unknown> | null>;
  for (const [name, hash] of Object.entries(summary['files']!)) {
    if (
      createHash('sha256')
        .update(readFileSync(join(folder, name)))
        .digest('hex') !== hash
    )
      throw new Error(`${name} has another hash`);
  }
  const { lines, repeated, events, set_aside, coincidences, pairs, crowded, live_time } = summary;
  const counts = { lines, repeated, events, set_aside, coincidences, pairs, crowded, triggers_outside: live_time?.['triggers_outside'] };
  return { tables: tablesOf(folder), counts: new Map(leaves(counts).filter(([path]) => !path.endsWith('.total'))) };
}

/** How far a number may be from the expected one; 0 = not at all. */
type Tolerances = Readonly<Record<string, number>>;

/** A pair's columns: what the distance may be off goes into all that rest on it. */
function pairTolerances(row: Row): Tolerances {
  const [dtNs, d, gapNs, margin, reverse] = ['dt_ns', 'distance_m', 'sigma_gap_ns', 'margin_sigma', 'reverse_margin_sigma'].map((name) =>
    Number(row[name]),
  ) as [number, number, number, number, number];
  const distanceM = distanceTolerance(dtNs, d);
  const inSigmas = (value: number) =>
    gapNs === 0 ? 0 : (distanceM * NS_PER_M) / gapNs + (2 * SIGMA + SIGMA_FLOOR_NS / gapNs) * Math.abs(value);
  const cdt = dtNs / NS_PER_M;
  const interval = 2 * d * distanceM + distanceM ** 2 + ROUNDING * (cdt ** 2 + d ** 2);
  const proper = Math.min(Math.sqrt(interval), interval / Math.sqrt(Math.abs(Number(row['interval_m2']))));
  const relative = distanceM / d;
  return {
    dt_ns: 0,
    distance_m: distanceM,
    sigma_dt_ns: SIGMA * Number(row['sigma_dt_ns']) + SIGMA_FLOOR_NS,
    sigma_gap_ns: SIGMA * gapNs + SIGMA_FLOOR_NS,
    margin_sigma: inSigmas(margin),
    reverse_margin_sigma: inSigmas(reverse),
    interval_m2: interval,
    proper: row['class'] === 'timelike' ? proper / C_M_S : proper,
    turning_speed: (relative + ROUNDING) * Number(row['turning_speed']),
    turning_sigma: (SIGMA + 2 * relative) * Number(row['turning_sigma']),
    toward_x: ORIENTATION_RAD + 2 * relative,
    toward_y: ORIENTATION_RAD + 2 * relative,
    toward_z: ORIENTATION_RAD + 2 * relative,
  };
}

/** Beyond a second the orientation of the Earth at either event counts. */
const distanceTolerance = (dtNs: number, distanceM: number): number =>
  Math.abs(dtNs) <= 1e9 ? DISTANCE_M : DISTANCE_M + ORIENTATION_RAD * (distanceM + 2 * EARTH_RADIUS_M);
const EARTH_RADIUS_M = 6_378_137;

const boostTolerance = (gamma: number, termsNs: number): number =>
  BOOST_NS + (gamma < FAST_GAMMA ? BOOST : FAST_BOOST) * gamma * termsNs + 2 * gamma * PLACE_M * NS_PER_M;

const placeOf = (row: Row): readonly number[] => [Number(row['x_m']), Number(row['y_m']), Number(row['z_m'])];
const nameOf = ({ site, series, sequence }: Row): string => (series === '' ? `${site!}:${sequence!}` : `${site!}:${series!}:${sequence!}`);

/** Numbers of a row that are compared within a tolerance; all else is compared as text. */
function tolerancesOf(table: TableName, row: Row, expected: Expected, pairs: ReadonlyMap<string, Row>): Tolerances {
  switch (table) {
    case 'events': {
      const radiusM = Math.hypot(...placeOf(row));
      const placeM = ORIENTATION_RAD * radiusM + PLACE_M;
      return { sigma_ns: SIGMA * Number(row['sigma_ns']) + SIGMA_FLOOR_NS, x_m: placeM, y_m: placeM, z_m: placeM, amplitude: 0 };
    }
    case 'coincidences':
      return { span_ns: 0 };
    case 'pairs':
    case 'neighbours':
      return pairTolerances(row);
    case 'orders': {
      const pair = pairs.get(`${row['set']!} ${row['a']!} ${row['b']!}`)!;
      const [dtNs, d] = [Math.abs(Number(pair['dt_ns'])), Number(pair['distance_m'])];
      const gamma = expected.boosts.get(`${row['set']!} ${row['frame']!}`)?.[0] ?? 1;
      // The places may be turned against the frame, and in a chain a frame bound to the Earth against its children.
      const turnedNs = gamma * (ORIENTATION_RAD * (dtNs + d * NS_PER_M) + distanceTolerance(dtNs, d) * NS_PER_M);
      return {
        dt_ns: row['frame'] === 'geocentric' ? 0 : boostTolerance(gamma, dtNs + d * NS_PER_M) + turnedNs,
        sigma_ns: SIGMA * Number(row['sigma_ns']) + SIGMA_FLOOR_NS,
      };
    }
    default:
      return {};
  }
}

/** The differences of a table, row by row. */
function tableDifferences(table: TableName, expected: Expected, found: Results): string[] {
  const [rows, others] = [expected.tables[table], found.tables[table]];
  const pairs = new Map(expected.tables.pairs.map((row) => [`${row['set']!} ${row['a']!} ${row['b']!}`, row]));
  const differences = rows.length === others.length ? [] : [`${table}: ${others.length} rows, not ${rows.length}`];
  rows.slice(0, others.length).forEach((row, at) => {
    const tolerances = tolerancesOf(table, row, expected, pairs);
    for (const [column, value] of Object.entries(row)) {
      const other = others[at]![column] ?? '(no such column)';
      const tolerance = tolerances[column];
      // The search for sets may end anywhere beyond the limit.
      const isEnough = column === 'sets_at_least' && Number(other) >= Number(value);
      const isNear = tolerance !== undefined && value !== '' && other !== '' && Math.abs(Number(other) - Number(value)) <= tolerance;
      if (other !== value && Number(other) !== Number(value || NaN) && !isEnough && !isNear)
        differences.push(`${table}, row ${at + 1}, ${column}: ${other}, not ${value} within ${tolerance ?? 'its text'}`);
    }
  });
  return differences;
}

/** The Earth's turn leaves each place as far from its centre as it is. */
function radiusDifferences(expected: Expected, found: Results): string[] {
  return expected.tables.events.flatMap((row, at) => {
    const [radius, other] = [Math.hypot(...placeOf(row)), Math.hypot(...placeOf(found.tables.events[at] ?? row))];
    return Math.abs(radius - other) <= PLACE_M + ROUNDING * radius
      ? []
      : [`events, row ${at + 1}: ${other} m from the geocentre, not ${radius}`];
  });
}

/**
 * What the boost itself did: the expected frame, applied to the found places and times, against the found time in the frame.
 *
 * @param frames frames that do not turn with the Earth, and whether they follow its motion
 */
function boostDifferences(expected: Expected, found: Results, frames: ReadonlyMap<string, 'free' | 'barycentric'>): string[] {
  const events = new Map(found.tables.events.map((row) => [nameOf(row), row]));
  const pairs = new Map(found.tables.pairs.map((row) => [`${row['set']!} ${row['a']!} ${row['b']!}`, row]));
  return found.tables.orders.flatMap((row) => {
    const [kind, boost] = [frames.get(row['frame']!), expected.boosts.get(`${row['set']!} ${row['frame']!}`)];
    const pair = pairs.get(`${row['set']!} ${row['a']!} ${row['b']!}`);
    const [a, b] = [events.get(row['a']!), events.get(row['b']!)];
    if (!kind || !boost || !pair || !a || !b) return [];
    const [gamma = 1, ...gammaBeta] = boost;
    const dx = placeOf(b).map((x, axis) => x - placeOf(a)[axis]!);
    const dtNs = Number(pair['dt_ns']);
    const frameNs = gamma * dtNs - gammaBeta.reduce((sum, u, axis) => sum + u * dx[axis]!, 0) * NS_PER_M;
    const termsNs = Math.abs(dtNs) + Math.hypot(...dx) * NS_PER_M;
    const tolerance = boostTolerance(gamma, termsNs) + (kind === 'barycentric' ? 2 * EARTH_VELOCITY_C * gamma ** 2 * termsNs : 0);
    return Math.abs(frameNs - Number(row['dt_ns'])) <= tolerance
      ? []
      : [`orders, ${row['a']!} ${row['b']!} in ${row['frame']!}: ${row['dt_ns']!} ns, not ${frameNs} within ${tolerance}`];
  });
}

function countDifferences(expected: Expected, found: Results): string[] {
  return [...new Set([...expected.counts.keys(), ...found.counts.keys()])].flatMap((path) => {
    const [value = 0, other = 0] = [expected.counts.get(path), found.counts.get(path)];
    return value === other ? [] : [`summary, ${path}: ${other}, not ${value}`];
  });
}

/** Everything in which results are not what was expected, a line each. */
export function differencesOf(expected: Expected, found: Results, frames: ReadonlyMap<string, 'free' | 'barycentric'>): readonly string[] {
  return [
    ...TABLES.flatMap((table) => tableDifferences(table, expected, found)),
    ...radiusDifferences(expected, found),
    ...boostDifferences(expected, found, frames),
    ...countDifferences(expected, found),
  ];
}
