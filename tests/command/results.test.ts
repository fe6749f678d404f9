import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { skewline } from '../support/command';
import { newFolder } from '../support/folder';
import { finalsFile } from '../support/finals';
import { filesOf, RESULT_FILES, type ResultFileName, type Row, rowsOf, sha256 } from '../support/results';
import { smallNetwork } from '../support/small-network';

/** Exact (SI Brochure, 9th edition, 2.3.1). */
const C_M_PER_NS = 0.299792458;
const SIGMAS = 3;
/** Relative; printed numbers are doubles, and what is computed from them here has some ten roundings of 1.1e-16, times cancellation. */
const CLOSE = 1e-12;
/** Of a distance, m: coordinates of 6.4e6 m are rounded to 1e-9 m. */
const PLACE_M = 1e-8;

const T = '2020-01-02T00:00';
const LOG = [
  'site,sequence,reading,sigma_ns,amplitude,series,kind,note',
  // three sites within the time that light takes between any two
  `A,1,${T}:00,10,2.5,,,`,
  `B,1,${T}:00.010,,,,trigger,`,
  `C,1,${T}:00.020,10,,,,`,
  // two sites, and a test that belongs to no coincidence but is a neighbour
  `B,2,${T}:01.005,10,1e-3,,,`,
  `A,002,${T}:01.000,10,,,,`,
  `C,7,${T}:01.0005,10,,,test,`,
  // alone
  `A,3,${T}:02,10,,,,`,
  `B,3,${T}:02.5,10,,,reference,`,
  // another series, and two events of C that are near it but not each other's
  `A,1,${T}:03,10,,b,,`,
  `C,5,${T}:03.015,10,,,,`,
  `C,4,${T}:03.030037244,10,,,,`,
  // at one time: sorted by site, series and sequence as a number
  `B,10,${T}:30,0,,,,`,
  `B,9,${T}:30,0,,,,`,
  `B,9,${T}:30,0,,b,,`,
  `A,12345678901234567890,${T}:30.5,0,,,,`,
  `A,9999999999999999,${T}:30.5,0,,,,`,
  // said again, in conflict, and at fault
  `A,3,${T}:02,10,,,,`,
  `C,9,${T}:05,10,,,,one`,
  `C,9,${T}:05,10,,,,another`,
  `X,1,${T}:00,10,,,,`,
  `A,4,${T}:61,10,,,,`,
  `A,5,${T}:06,-1,,,,`,
  `A,6,2019-12-31T23:59:59,10,,,,`,
  `A,7`,
  `"A",8,${T}:07,10,,"a b",,"two\nlines"`,
];
/** From A to C light needs sqrt(6378137^2 + 6356752^2) / 299792458 s = 0.03003724352 s: C:4 comes within the error of the two readings of that. */
const UNDECIDED = ['A:b:1', 'C:4'];

const network = smallNetwork({
  frames: [
    { code: 'fast', velocity: { beta: [0.6, 0, 0] } },
    { code: 'still', velocity: { beta: [0, 0, 0] } },
  ],
  neighbours: { within_ns: 1e6 },
  selections: [
    { code: 'over', events: ['B:2', 'A:1', 'A:2'] },
    { code: 'one', events: ['B:3'] },
  ],
});

let files: Readonly<Record<string, string>>;
const tables: Partial<Record<ResultFileName, readonly Row[]>> = {};
const table = (name: ResultFileName): readonly Row[] => (tables[name] ??= rowsOf(files[name] ?? ''));

beforeAll(async () => {
  const folder = newFolder('results');
  writeFileSync(join(folder, 'network.json'), JSON.stringify(network));
  writeFileSync(join(folder, 'log.csv'), `${LOG.join('\n')}\n`);
  writeFileSync(
    join(folder, 'live.csv'),
    `site,from,to\nA,${T}:00 TAI,${T}:02 TAI\nB,${T}:00 TAI,${T}:30 TAI\nB,${T}:20 TAI,${T}:40 TAI\n`,
  );
  const args = ['reconcile', '--network', 'network.json', '--live', 'live.csv', '--out', 'out', 'log.csv'];
  const { code, stderr } = await skewline(args, folder);
  expect(stderr).toBe('16 events, 4 coincidences; 8 records set aside, 1 repeated\n');
  expect(code).toBe(0);
  files = filesOf(join(folder, 'out'));
});

const nameOf = ({ site = '', series = '', sequence = '' }: Row): string =>
  series === '' ? `${site}:${sequence}` : `${site}:${series}:${sequence}`;

const SETS = [['A:1', 'B:1', 'C:1'], ['A:2', 'B:2'], ['A:b:1', 'C:5'], UNDECIDED];

describe('the folder of results', () => {
  it('holds these files and no other, in UTF-8 with LF at the end of each line', () => {
    expect(Object.keys(files).sort()).toEqual([...RESULT_FILES]);
    for (const [name, text] of Object.entries(files)) {
      expect(text, name).not.toContain('\r');
      expect(text, name).toMatch(/[^\n]\n$/);
    }
  });

  it.each([
    ['events.csv', 'site,series,sequence,kind,tai,sigma_ns,sigma_from,x_m,y_m,z_m,amplitude'],
    ['coincidences.csv', 'set,fold,sites,first_tai,span_ns,events'],
    [
      'pairs.csv',
      'set,a,b,dt_ns,distance_m,sigma_dt_ns,sigma_gap_ns,margin_sigma,reverse_margin_sigma,interval_m2,class,proper,turning_speed,turning_sigma,toward_x,toward_y,toward_z',
    ],
    [
      'neighbours.csv',
      'a,b,dt_ns,distance_m,sigma_dt_ns,sigma_gap_ns,margin_sigma,reverse_margin_sigma,interval_m2,class,proper,turning_speed,turning_sigma,toward_x,toward_y,toward_z',
    ],
    ['orders.csv', 'set,a,b,frame,dt_ns,sigma_ns,order'],
    ['crowded.csv', 'event,sites,events,sets_at_least'],
    ['set-aside.csv', 'file,line,reason,text'],
  ])('has its columns in %s', (name, header) => {
    expect(files[name]!.split('\n')[0]).toBe(header);
  });
});

describe('events.csv', () => {
  it('is sorted by time, then site, series and sequence as a number', () => {
    expect(table('events.csv').map(nameOf)).toEqual([
      ...['A:1', 'B:1', 'C:1', 'A:2', 'C:7', 'B:2', 'A:3', 'B:3', 'A:b:1', 'C:5', 'C:4'],
      ...['B:9', 'B:10', 'B:b:9', 'A:9999999999999999', 'A:12345678901234567890'],
    ]);
  });

  it('has times with 12 decimals, kinds, amplitudes as given, and where the error comes from', () => {
    const cells = (name: string): unknown[] => {
      const { tai, kind, sigma_ns, sigma_from, amplitude } = table('events.csv').find((row) => nameOf(row) === name)!;
      return [tai, kind, sigma_ns, sigma_from, amplitude];
    };
    expect(cells('A:1')).toEqual([`${T}:00.000000000000`, 'trigger', '10', 'record', '2.5']);
    expect(cells('B:1')).toEqual([`${T}:00.010000000000`, 'trigger', '10', 'site', '']);
    expect(cells('B:2')).toEqual([`${T}:01.005000000000`, 'trigger', '10', 'record', '0.001']);
    expect(cells('C:7')).toEqual([`${T}:01.000500000000`, 'test', '10', 'record', '']);
    expect(cells('B:3')).toEqual([`${T}:02.500000000000`, 'reference', '10', 'record', '']);
  });

  it('has places on the sphere of their sites, which turn with the Earth', () => {
    for (const row of table('events.csv')) {
      const radiusM = Math.hypot(Number(row['x_m']), Number(row['y_m']), Number(row['z_m']));
      expect(Math.abs(radiusM - (row['site'] === 'C' ? 6356752 : 6378137)), nameOf(row)).toBeLessThan(PLACE_M);
    }
    const [first, , , second] = table('events.csv');
    // A site on the equator moves 2 pi 6378137 m in a sidereal day of 86164.1 s (Explanatory Supplement, 2013, 3.3): 465.1 m in a second.
    const movedM = Math.hypot(...['x_m', 'y_m', 'z_m'].map((axis) => Number(second![axis]) - Number(first![axis])));
    expect(movedM).toBeCloseTo(465.1, 1);
  });
});

describe('coincidences.csv', () => {
  it('has each set once, in the order of its events, with its stable name', () => {
    expect(table('coincidences.csv').map(({ events }) => events)).toEqual(SETS.map((set) => set.join(' ')));
    expect(table('coincidences.csv').map(({ set }) => set)).toEqual(SETS.map((set) => sha256(['light2', ...set].join('\n')).slice(0, 12)));
  });

  it('has fold, sites, first time and span', () => {
    const cells = table('coincidences.csv').map(({ fold, sites, first_tai, span_ns }) => [fold, sites, first_tai, span_ns]);
    expect(cells).toEqual([
      ['3', 'A B C', `${T}:00.000000000000`, '20000000'],
      ['2', 'A B', `${T}:01.000000000000`, '5000000'],
      ['2', 'A C', `${T}:03.000000000000`, '15000000'],
      ['2', 'A C', `${T}:03.000000000000`, '30037244'],
    ]);
  });
});

/** What the columns of a pair must be, from the events alone: exact clocks, places without error. */
function expectedPair(a: Row, b: Row) {
  const secondsOf = (row: Row): [number, number] => [Date.parse(`${row['tai']!.slice(0, 19)}Z`) / 1000, Number(row['tai']!.slice(20))];
  const [[aS, aPs], [bS, bPs]] = [secondsOf(a), secondsOf(b)];
  const dtNs = (bS - aS) * 1e9 + (bPs - aPs) / 1e3;
  const delta = ['x_m', 'y_m', 'z_m'].map((axis) => Number(b[axis]) - Number(a[axis]));
  const distanceM = Math.hypot(...delta);
  const sigmaNs = Math.hypot(Number(a['sigma_ns']), Number(b['sigma_ns']));
  const over = (gapM: number): number => gapM / (C_M_PER_NS * sigmaNs);
  const margin = over(C_M_PER_NS * dtNs - distanceM);
  const interval = (C_M_PER_NS * dtNs - distanceM) * (C_M_PER_NS * dtNs + distanceM);
  return { dtNs, delta, distanceM, sigmaNs, margin, reverse: over(C_M_PER_NS * dtNs + distanceM), interval };
}

function checkPair(row: Row): void {
  const label = `${row['a']!} ${row['b']!}`;
  const event = (name: string | undefined): Row => table('events.csv').find((one) => nameOf(one) === name)!;
  const expected = expectedPair(event(row['a']), event(row['b']));
  const isNear = (column: string, value: number, within = CLOSE * Math.abs(value)): void => {
    expect(Math.abs(Number(row[column]) - value), `${label} ${column} ${row[column]!}`).toBeLessThanOrEqual(within);
  };
  const { dtNs, distanceM, sigmaNs, margin, reverse, interval } = expected;
  isNear('dt_ns', dtNs);
  isNear('distance_m', distanceM, PLACE_M);
  isNear('sigma_dt_ns', sigmaNs);
  isNear('sigma_gap_ns', sigmaNs);
  const sigmasWithin = (4 * PLACE_M) / (C_M_PER_NS * sigmaNs);
  isNear('margin_sigma', margin, sigmasWithin + CLOSE * Math.abs(margin));
  isNear('reverse_margin_sigma', reverse, sigmasWithin + CLOSE * reverse);
  const intervalWithin = 4 * PLACE_M * (C_M_PER_NS * Math.abs(dtNs) + distanceM) + CLOSE * ((C_M_PER_NS * dtNs) ** 2 + distanceM ** 2);
  isNear('interval_m2', interval, intervalWithin);
  const kind = margin > SIGMAS ? 'timelike' : margin < -SIGMAS ? 'spacelike' : 'undecided';
  expect(row['class'], label).toBe(kind);
  const turning = ['turning_speed', 'turning_sigma', 'toward_x', 'toward_y', 'toward_z'];
  if (kind === 'undecided') expect(row['proper'], label).toBe('');
  if (kind === 'timelike') isNear('proper', Math.sqrt(interval) / (C_M_PER_NS * 1e9));
  if (kind !== 'spacelike') {
    expect(
      turning.map((column) => row[column]),
      label,
    ).toEqual(['', '', '', '', '']);
    return;
  }
  isNear('proper', Math.sqrt(-interval), intervalWithin / Math.sqrt(-interval));
  isNear('turning_speed', (C_M_PER_NS * dtNs) / distanceM);
  isNear('turning_sigma', (C_M_PER_NS * sigmaNs) / distanceM);
  expected.delta.forEach((m, at) => isNear(turning[2 + at]!, m / distanceM, (2 * PLACE_M) / distanceM));
}

describe('pairs.csv', () => {
  it('has every pair of every set, coincidences first and then selections, in the order of events', () => {
    const names = table('coincidences.csv').map(({ set }) => set!);
    expect(table('pairs.csv').map(({ set, a, b }) => [set, a, b])).toEqual([
      [names[0], 'A:1', 'B:1'],
      [names[0], 'A:1', 'C:1'],
      [names[0], 'B:1', 'C:1'],
      [names[1], 'A:2', 'B:2'],
      [names[2], 'A:b:1', 'C:5'],
      [names[3], 'A:b:1', 'C:4'],
      ['over', 'A:1', 'A:2'],
      ['over', 'A:1', 'B:2'],
      ['over', 'A:2', 'B:2'],
    ]);
  });

  it('has columns that follow from the events', () => {
    for (const row of table('pairs.csv')) checkPair(row);
  });

  it('has all three classes', () => {
    expect(table('pairs.csv').map(({ class: kind }) => kind)).toEqual([
      ...['spacelike', 'spacelike', 'spacelike', 'spacelike', 'spacelike', 'undecided'],
      ...['timelike', 'timelike', 'spacelike'],
    ]);
  });
});

describe('orders.csv', () => {
  it('has each pair in each frame, geocentric first, then as listed', () => {
    const pairs = table('pairs.csv').flatMap(({ set, a, b }) => ['geocentric', 'fast', 'still'].map((frame) => [set, a, b, frame]));
    expect(table('orders.csv').map(({ set, a, b, frame }) => [set, a, b, frame])).toEqual(pairs);
  });

  it('has the time between a and b in that frame, by the Lorentz transformation, and the order that it decides', () => {
    const gamma = 1.25; // of 0.6 c, exactly
    const pairs = new Map(table('pairs.csv').map((row) => [`${row['set']!} ${row['a']!} ${row['b']!}`, row]));
    for (const row of table('orders.csv')) {
      const pair = pairs.get(`${row['set']!} ${row['a']!} ${row['b']!}`)!;
      const dtNs = Number(pair['dt_ns']);
      const event = (name: string | undefined) => table('events.csv').find((one) => nameOf(one) === name)!;
      const deltaXM = Number(event(row['b'])['x_m']) - Number(event(row['a'])['x_m']);
      const isFast = row['frame'] === 'fast';
      const expected = isFast ? gamma * (dtNs - (0.6 * deltaXM) / C_M_PER_NS) : dtNs;
      const sigmaNs = (isFast ? gamma : 1) * Number(pair['sigma_dt_ns']);
      const label = Object.values(row).join();
      expect(Math.abs(Number(row['dt_ns']) - expected), label).toBeLessThanOrEqual(2 * (PLACE_M / C_M_PER_NS) + CLOSE * Math.abs(expected));
      expect(Math.abs(Number(row['sigma_ns']) - sigmaNs), label).toBeLessThanOrEqual(CLOSE * sigmaNs);
      expect(row['order'], label).toBe(Math.abs(expected) <= SIGMAS * sigmaNs ? 'tie' : expected > 0 ? 'a' : 'b');
    }
  });
});

describe('neighbours.csv', () => {
  it('has pairs of every kind within the time asked for, of which one is in a coincidence', () => {
    expect(table('neighbours.csv').map(({ a, b }) => [a, b])).toEqual([['A:2', 'C:7']]);
    for (const row of table('neighbours.csv')) checkPair(row);
  });
});

describe('set-aside.csv', () => {
  it('has file, line, reason and record of each, sorted by line', () => {
    expect(table('set-aside.csv').map((row) => Object.values(row))).toEqual([
      ['log.csv', '19', 'conflict', LOG[18]],
      ['log.csv', '20', 'conflict', LOG[19]],
      ['log.csv', '21', 'site', LOG[20]],
      ['log.csv', '22', 'time-of-day', LOG[21]],
      ['log.csv', '23', 'sigma', LOG[22]],
      ['log.csv', '24', 'outside-run', LOG[23]],
      ['log.csv', '25', 'columns', LOG[24]],
      ['log.csv', '26', 'series', LOG[25]],
    ]);
  });
});

describe('summary.json', () => {
  it('counts what the other files hold', () => {
    const summary = JSON.parse(files['summary.json']!) as Record<string, Record<string, unknown>>;
    expect(summary).toMatchObject({
      network: 'Three axes',
      run: { name: 'first', from_tai: '2020-01-01T00:00:00.000000000000', to_tai: null },
      rule: { code: 'light2', sigmas: 3, minimum_fold: 2 },
      lines: 25,
      events: { trigger: 14, reference: 1, test: 1 },
      repeated: 1,
      crowded: 0,
      neighbours: 1,
      span: { first_tai: `${T}:00.000000000000`, last_tai: `${T}:30.500000000000` },
    });
    expect(summary['set_aside']).toEqual({
      total: 8,
      columns: 1,
      site: 1,
      series: 1,
      'time-of-day': 1,
      sigma: 1,
      'outside-run': 1,
      conflict: 2,
    });
    expect(summary['coincidences']).toEqual({ total: 4, 2: 3, 3: 1 });
    expect(summary['pairs']).toEqual({ timelike: 2, spacelike: 6, undecided: 1 });
  });

  it('has the same of each site, and what was live', () => {
    const { sites, live_time } = JSON.parse(files['summary.json']!) as { sites: Record<string, unknown>; live_time: unknown };
    expect(Object.keys(sites)).toEqual(['A', 'B', 'C']);
    expect(sites['A']).toEqual({
      lines: 11,
      events: { trigger: 6, reference: 0, test: 0 },
      repeated: 1,
      set_aside: { total: 4, series: 1, 'time-of-day': 1, sigma: 1, 'outside-run': 1 },
      first_tai: `${T}:00.000000000000`,
      last_tai: `${T}:30.500000000000`,
      live_s: 2,
      triggers_outside_live: 3,
    });
    expect(sites['B']).toMatchObject({ lines: 6, events: { trigger: 5, reference: 1, test: 0 }, live_s: 40, triggers_outside_live: 0 });
    expect(sites['C']).toMatchObject({ lines: 6, set_aside: { total: 2, conflict: 2 }, live_s: 0, triggers_outside_live: 3 });
    expect(live_time).toEqual({ total_s: 42, triggers_outside: 6 });
  });

  it('has the SHA-256 of every other file', () => {
    const { files: hashes } = JSON.parse(files['summary.json']!) as { files: Record<string, string> };
    const others = RESULT_FILES.filter((name) => name !== 'summary.json');
    expect(hashes).toEqual(Object.fromEntries(others.map((name) => [name, sha256(files[name]!)])));
  });

  it('says which tables were used, and whether they held to the end', () => {
    const summary = JSON.parse(files['summary.json']!) as Record<string, unknown>;
    expect(summary['leap_seconds']).toEqual({
      sha256: expect.stringMatching(/^[0-9a-f]{64}$/) as string,
      sha1: expect.stringMatching(/^[0-9a-f]{40}$/) as string,
      expires_tai: expect.stringMatching(/^20\d\d-\d\d-\d\dT/) as string,
      expired: false,
    });
    expect(summary['earth_orientation']).toEqual({ loaded: false });
  });
});

describe('tables that do not cover the run', () => {
  const SHORT = ['site,sequence,reading', `A,1,${T}:00`, 'B,1,2027-12-01T00:00:00'];

  async function ranOver(finals: string, log: readonly string[] = SHORT) {
    const folder = newFolder('tables');
    writeFileSync(join(folder, 'network.json'), JSON.stringify(smallNetwork()));
    writeFileSync(join(folder, 'finals.txt'), finals);
    writeFileSync(join(folder, 'log.csv'), `${log.join('\n')}\n`);
    const args = ['reconcile', '--network', 'network.json', '--earth-orientation', 'finals.txt', '--out', 'out', 'log.csv'];
    const { code, stderr } = await skewline(args, folder);
    expect(code).toBe(0);
    const summary = JSON.parse(filesOf(join(folder, 'out'))['summary.json']!) as Record<string, unknown>;
    return { warnings: stderr.trim().split('\n').slice(0, -1), summary };
  }

  it('are told on stderr and in the summary, at both ends of the run', async () => {
    const finals = finalsFile('2020-01-02', 2, 1);
    const { warnings, summary } = await ranOver(finals);
    expect(warnings).toEqual([
      expect.stringMatching(
        /^warning: leap seconds: the list expires at 2027-06-28T00:00:37 TAI, the run ends at 2027-12-01T00:00:00 TAI: /,
      ),
      expect.stringMatching(
        /^warning: earth orientation: the table begins at 2020-01-02T00:00:37 TAI, the run at 2020-01-01T00:00:00 TAI: /,
      ),
      expect.stringMatching(/^warning: earth orientation: the table ends at 2020-01-04T00:00:37 TAI, the run at 2027-12-01T00:00:00 TAI: /),
      expect.stringMatching(/^warning: earth orientation: the values are a prediction from 2020-01-04T00:00:37 TAI on, /),
    ]);
    expect(summary['leap_seconds']).toMatchObject({ expired: true });
    expect(summary['earth_orientation']).toEqual({
      loaded: true,
      sha256: sha256(finals),
      first_tai: '2020-01-02T00:00:37.000000000000',
      last_tai: '2020-01-04T00:00:37.000000000000',
      before: true,
      expired: true,
      predicted: true,
    });
    const [header = '', ...lines] = SHORT;
    expect((await ranOver(finals, [header, ...lines.toReversed()])).summary).toEqual(summary);
  });

  it('or do, without a word', async () => {
    const { warnings, summary } = await ranOver(finalsFile('2019-12-30', 10, 5), SHORT.slice(0, 2));
    expect(warnings).toEqual([]);
    expect(summary['earth_orientation']).toMatchObject({ loaded: true, before: false, expired: false, predicted: false });
  });
});
