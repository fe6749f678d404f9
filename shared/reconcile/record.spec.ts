import { describe, expect, it } from 'vitest';
import { type ClockSegment, EXACT_CLOCK } from '../time/clock-record';
import { prepareClock } from '../time/correction';
import { type Instant } from '../time/instant';
import { type Scale } from '../time/scales';
import { shippedLeapSeconds } from '../time/shipped-leap-seconds';
import { parseStatedTime } from '../time/stated-time';
import { type NetworkSite } from './network';
import { createReconciler, emptyRecord, KINDS, type ReconciledRecord, type RecordLayout, SET_ASIDE_REASONS, SIGMA_SOURCES } from './record';

const leapSeconds = shippedLeapSeconds();

function instant(text: string): Instant {
  const time = parseStatedTime(text, '', leapSeconds);
  if (!time.ok) throw new Error(time.problem.text);
  return time.value.instant;
}

const segment = (from: string, offsetNs: number, rateNsPerDay = 0): ClockSegment => ({
  from: instant(from),
  at: instant(from),
  offsetNs,
  offsetSigmaNs: 1,
  rateNsPerDay,
  rateSigmaNsPerDay: 0,
  covarianceNs2PerDay: 0,
});

function site(code: string, scale: Scale, more: Partial<NetworkSite> = {}): NetworkSite {
  return {
    code,
    name: '',
    scale,
    itrsM: [0, 0, 0],
    worldline: { placeAt: () => [0, 0, 0], mostSpeedMS: 0, mostRadiusM: 0 },
    readingSigmaNs: undefined,
    clock: prepareClock(EXACT_CLOCK, 0),
    firstSegmentRow: -1,
    ...more,
  };
}

/** ORL in UTC, whose clock has two segments; TAU in TAI, exact, with an error of its own; ZED in TAI, said to have none. */
const network = {
  from: instant('2016-12-31T00:00:00Z'),
  to: instant('2017-01-02T00:00:00Z'),
  sites: [
    site('ORL', 'UTC', {
      clock: prepareClock([segment('2016-12-31T12:00:00Z', 100), segment('2017-01-01T12:00:00Z', 0, 864_000)], 10),
      firstSegmentRow: 5,
    }),
    site('TAU', 'TAI', { readingSigmaNs: 20 }),
    site('ZED', 'TAI', { readingSigmaNs: 0 }),
  ],
};

const COLUMNS = ['site', 'sequence', 'reading', 'sigma_ns', 'amplitude', 'series', 'kind'] as const;
type Fields = Partial<Record<(typeof COLUMNS)[number], string>>;

const layout: RecordLayout = { width: 7, site: 0, sequence: 1, reading: 2, sigma: 3, amplitude: 4, series: 5, kind: 6, ofSite: undefined };
const good: Fields = { site: 'TAU', sequence: '1', reading: '2017-01-01T00:00:00' };

const reconcile = createReconciler(network, leapSeconds);
const cells = (fields: Fields): string[] => COLUMNS.map((name) => fields[name] ?? '');

const faultOf = (fields: Fields): string | undefined => reconcile(cells({ ...good, ...fields }), layout, emptyRecord());

function recordOf(fields: Fields): ReconciledRecord {
  const record = emptyRecord();
  expect(reconcile(cells({ ...good, ...fields }), layout, record)).toBeUndefined();
  return record;
}

describe('a record is set aside', () => {
  it.each<[string, Fields]>([
    ['site', { site: '' }],
    ['site', { site: 'XXX' }],
    ['site', { site: 'orl' }],
    ['site', { site: ' TAU' }],
    ['site', { site: 'constructor' }],
    ['sequence', { sequence: '' }],
    ['sequence', { sequence: '-1' }],
    ['sequence', { sequence: '+7' }],
    ['sequence', { sequence: '7.0' }],
    ['sequence', { sequence: '1e3' }],
    ['sequence', { sequence: ' 7' }],
    ['sequence', { sequence: '0x7' }],
    ['sequence', { sequence: '\u0667' }], // a digit, but not of ASCII
    ['series', { series: 'a b' }],
    ['series', { series: '\u00e9' }],
    ['series', { series: 'a'.repeat(25) }],
    ['kind', { kind: 'Trigger' }],
    ['kind', { kind: ' test' }],
    ['kind', { kind: 'pulse' }],
    ['reading-empty', { reading: '' }],
    ['reading-form', { reading: '2017-01-01' }],
    ['reading-form', { reading: '2017-01-01T00:00:00Z' }], // TAU keeps TAI
    ['reading-form', { site: 'ORL', reading: '2017-01-01T00:00:00+00:00' }],
    ['date', { reading: '2017-02-29T00:00:00' }],
    ['time-of-day', { reading: '2017-01-01T24:00:00' }],
    ['no-leap-second', { site: 'ORL', reading: '2017-01-01T23:59:60' }],
    ['no-leap-second', { reading: '2016-12-31T23:59:60' }], // none on TAU's scale
    ['before-1972', { site: 'ORL', reading: '1971-12-31T23:59:59' }],
    ['sigma', { sigma_ns: '-1' }],
    ['sigma', { sigma_ns: 'NaN' }],
    ['sigma', { sigma_ns: 'Infinity' }],
    ['sigma', { sigma_ns: '1e400' }],
    ['sigma', { sigma_ns: '1,5' }],
    ['sigma', { sigma_ns: '0x10' }],
    ['sigma', { sigma_ns: ' 5' }],
    ['amplitude', { amplitude: 'high' }],
    ['amplitude', { amplitude: '-Infinity' }],
    ['amplitude', { amplitude: '1_000' }],
    ['before-clock-record', { site: 'ORL', reading: '2016-12-31T11:59:59.999999999' }],
    ['before-clock-record', { site: 'ORL', reading: '2016-12-31T12:00:00.000000009999' }], // its delay is 10 ns
    ['outside-run', { reading: '2016-12-31T00:00:35.999999999999' }], // TAI - UTC is 36 s there (IERS Bulletin C 49)
    ['outside-run', { reading: '2017-01-02T00:00:37.000000000001' }], // and 37 s here (IERS Bulletin C 52)
  ])('as %s: %j', (reason, fields) => {
    expect(faultOf(fields)).toBe(reason);
  });

  it('when it has other than the columns of its header', () => {
    const fields = cells(good);
    expect(reconcile([...fields, ''], layout, emptyRecord())).toBe('columns');
    expect(reconcile(fields.slice(0, -1), layout, emptyRecord())).toBe('columns');
    expect(reconcile([], layout, emptyRecord())).toBe('columns');
  });

  const faults: readonly (readonly [reason: string, fields: Fields])[] = [
    ['site', { site: 'XXX' }],
    ['sequence', { sequence: 'x' }],
    ['series', { series: '?' }],
    ['kind', { kind: 'x' }],
    ['reading-empty', { reading: '' }],
    ['sigma', { sigma_ns: 'x' }],
    ['amplitude', { amplitude: 'x' }],
    ['before-clock-record', { site: 'ORL', reading: '2000-01-01T00:00:00' }], // which is outside the run too
  ];
  const pairs = faults.flatMap(([first, one], at) =>
    faults.slice(at + 1).map(([second, other]) => [first, second, { ...other, ...one }] as const),
  );
  it.each(pairs)('as %s, although it could be as %s', (reason, _other, fields) => {
    expect(faultOf(fields)).toBe(reason);
  });

  it.each<[string, string, Fields]>([
    ['reading-form', 'date', { reading: '2017-02-30T00:00' }],
    ['date', 'time-of-day', { reading: '2017-02-30T25:00:00' }],
    ['time-of-day', 'sigma', { reading: '2017-01-01T25:00:00', sigma_ns: 'x' }],
    ['no-leap-second', 'before-1972', { site: 'ORL', reading: '1971-12-31T23:59:60' }],
    ['before-1972', 'sigma', { site: 'ORL', reading: '1971-01-01T00:00:00', sigma_ns: 'x' }],
    ['sigma', 'outside-run', { reading: '2000-01-01T00:00:00', sigma_ns: 'x' }],
    ['amplitude', 'outside-run', { reading: '2000-01-01T00:00:00', amplitude: 'x' }],
  ])('as %s, although it could be as %s, within its reading and after', (reason, _other, fields) => {
    expect(faultOf(fields)).toBe(reason);
  });

  it('as having other columns before anything else', () => {
    expect(reconcile(cells({ site: 'XXX', sequence: 'x' }).slice(1), layout, emptyRecord())).toBe('columns');
  });

  it('with its site known from there on, so that it can be counted there', () => {
    const record = { ...emptyRecord(), site: -1 };
    reconcile(cells({ ...good, site: 'XXX' }), layout, record);
    expect(record.site).toBe(-1);
    reconcile(cells({ ...good, sequence: 'x' }), layout, record);
    expect(record.site).toBe(1);
  });

  it('for a reason that has its place in the list, which ends with the conflict', () => {
    expect(SET_ASIDE_REASONS.at(-1)).toBe('conflict');
    expect(new Set(SET_ASIDE_REASONS).size).toBe(16);
  });
});

describe('a record is accepted', () => {
  it.each<[Fields, keyof ReconciledRecord, string | number]>([
    [{ site: 'ORL' }, 'site', 0],
    [{ sequence: '007' }, 'sequence', '7'],
    [{ sequence: '000' }, 'sequence', '0'],
    [{ sequence: '9007199254740993' }, 'sequence', '9007199254740993'],
    [{ sequence: `0${'9'.repeat(40)}` }, 'sequence', '9'.repeat(40)],
    [{ series: 'b-2_x' }, 'series', 'b-2_x'],
    [{ series: '007' }, 'series', '007'],
    [{ amplitude: '' }, 'amplitude', NaN],
    [{ amplitude: '-4.5e-3' }, 'amplitude', -0.0045],
    [{ amplitude: '.5' }, 'amplitude', 0.5],
    [{ amplitude: '5.' }, 'amplitude', 5],
    [{ sigma_ns: '+5' }, 'readingSigmaNs', 5],
    [{ sigma_ns: '1e3' }, 'readingSigmaNs', 1000],
    [{ sigma_ns: '0' }, 'readingSigmaNs', 0],
    [{ sigma_ns: '-0' }, 'readingSigmaNs', 0],
    [{ site: 'ORL' }, 'segment', 5],
    [{ site: 'ORL', reading: '2017-01-01T12:00:00.00000001' }, 'segment', 6], // the delay of 10 ns is taken off first
    [{ site: 'ORL', reading: '2017-01-01T12:00:00.000000009999' }, 'segment', 5],
    [{}, 'segment', -1],
    [{}, 'sinceEpochDays', 0],
    [{ site: 'ORL', reading: '2017-01-01T18:00:00.00000001' }, 'sinceEpochDays', 0.25],
  ])('%j with %s %j', (fields, name, value) => {
    expect(recordOf(fields)[name]).toBe(value);
  });

  it.each([
    ['', 'trigger'],
    ['trigger', 'trigger'],
    ['reference', 'reference'],
    ['test', 'test'],
  ])('with kind %j as a %s', (kind, name) => {
    expect(KINDS[recordOf({ kind }).kind]).toBe(name);
  });

  // The standard deviation of a uniform distribution one unit wide is 1 / sqrt(12) (JCGM 100:2008, 4.3.7).
  it.each<[Fields, number, string]>([
    [{ sigma_ns: '7' }, 7, 'record'],
    [{ sigma_ns: '0' }, 0, 'record'],
    [{}, 20, 'site'],
    [{ site: 'ZED' }, 0, 'site'],
    [{ site: 'ZED', sigma_ns: '7' }, 7, 'record'],
    [{ site: 'ORL' }, 1e9 / Math.sqrt(12), 'resolution'],
    [{ site: 'ORL', reading: '2017-01-01T00:00:00.50' }, 1e7 / Math.sqrt(12), 'resolution'],
    [{ site: 'ORL', reading: '2017-01-01T00:00:00.500000000000' }, 1e-3 / Math.sqrt(12), 'resolution'],
  ])('%j with a standard error of %d ns, from the %s', (fields, sigmaNs, source) => {
    const record = recordOf(fields);
    expect(record.readingSigmaNs / (sigmaNs || 1)).toBeCloseTo(sigmaNs ? 1 : 0, 14); // a few roundings of 1.1e-16
    expect(SIGMA_SOURCES[record.sigmaSource]).toBe(source);
  });

  // By hand: TAI - UTC is 36 s before the leap second of 31 December 2016 and 37 s after it (IERS Bulletin C 52).
  it.each<[Fields, string]>([
    [{}, '2017-01-01T00:00:00 TAI'],
    [{ reading: '2017-01-01 00:00:00' }, '2017-01-01T00:00:00 TAI'],
    [{ site: 'ORL', reading: '2016-12-31T23:59:60.000000110Z' }, '2017-01-01T00:00:36 TAI'], // delay 10 ns, clock 100 ns ahead
    [{ site: 'ORL', reading: '2017-01-01T00:00:00.000000110' }, '2017-01-01T00:00:37 TAI'],
    // 864,000 ns a day are 10 ns a second: 21,600 s after the segment's start the clock is 216,000 ns ahead.
    [{ site: 'ORL', reading: '2017-01-01T18:00:00.00000001' }, '2017-01-01T18:00:36.999784 TAI'],
    [{ reading: '2016-12-31T00:00:36' }, '2016-12-31T00:00:00 UTC'], // both ends of the run
    [{ reading: '2017-01-02T00:00:37' }, '2017-01-02T00:00:00 UTC'],
  ])('%j at its time', (fields, text) => {
    const { taiS, ps } = recordOf(fields);
    expect({ taiS, ps }).toEqual(instant(text));
  });

  it('at a site that the log names once, with or without a column for it', () => {
    const of = (ofSite: string, text: string): string | undefined =>
      reconcile(cells({ ...good, site: text }), { ...layout, ofSite }, emptyRecord());
    expect(of('TAU', 'TAU')).toBeUndefined();
    expect(of('ORL', 'TAU')).toBe('site');
    const without: RecordLayout = {
      ...layout,
      site: -1,
      width: 6,
      sequence: 0,
      reading: 1,
      sigma: 2,
      amplitude: 3,
      series: 4,
      kind: 5,
      ofSite: 'TAU',
    };
    const record = emptyRecord();
    expect(reconcile(cells(good).slice(1), without, record)).toBeUndefined();
    expect(record.site).toBe(1);
  });

  it('without the columns that may be missing', () => {
    const few: RecordLayout = {
      width: 2,
      site: -1,
      sequence: 0,
      reading: 1,
      sigma: -1,
      amplitude: -1,
      series: -1,
      kind: -1,
      ofSite: 'TAU',
    };
    const record = emptyRecord();
    expect(reconcile(['5', '2017-01-01T00:00:00'], few, record)).toBeUndefined();
    expect(record).toEqual({
      ...emptyRecord(),
      site: 1,
      sequence: '5',
      taiS: instant('2017-01-01T00:00:00 TAI').taiS,
      readingSigmaNs: 20,
      sigmaSource: 1,
    });
  });

  it('although nothing bounds the run at its end', () => {
    const open = createReconciler({ ...network, to: undefined }, leapSeconds);
    expect(open(cells({ ...good, reading: '2999-01-01T00:00:00' }), layout, emptyRecord())).toBeUndefined();
  });

  it('the same whatever came before it', () => {
    const lines = [
      {},
      { site: 'ORL', reading: '2016-12-31T23:59:60' },
      { reading: '2016-12-31T23:59:60' },
      { site: 'ORL', reading: '2017-01-01T23:59:60' },
      { site: 'ORL', reading: '2017-01-01T00:00:00', series: 'b', amplitude: '3' },
    ];
    const alone = lines.map((fields) => outcomeOf(createReconciler(network, leapSeconds), fields));
    for (const order of [lines, lines.toReversed()]) {
      const one = createReconciler(network, leapSeconds);
      for (const fields of order) expect(outcomeOf(one, fields)).toEqual(alone[lines.indexOf(fields)]);
    }
  });

  function outcomeOf(one: typeof reconcile, fields: Fields) {
    const record = emptyRecord();
    return { fault: one(cells({ ...good, ...fields }), layout, record), record };
  }
});
