import fc from 'fast-check';
import { type FrozenInputs } from '#shared/contract/certificate';
import { SHIPPED_LEAP_SECONDS_LIST } from '#shared/time/shipped-leap-seconds';
import { finalsFile } from './finals';

type Network = FrozenInputs['network'];

/** An even spread of numbers with few digits. */
const between = (min: number, max: number, digits = 3): fc.Arbitrary<number> =>
  fc.integer({ min: Math.ceil(min * 10 ** digits), max: Math.floor(max * 10 ** digits) }).map((k) => k / 10 ** digits);
const sometimes = <T>(value: fc.Arbitrary<T>): fc.Arbitrary<T | undefined> => fc.option(value, { nil: undefined, freq: 2 });
const without = <T extends object>(value: T): T => Object.fromEntries(Object.entries(value).filter(([, part]) => part !== undefined)) as T;

const SCALES = ['UTC', 'TAI', 'GPS', 'TT'] as const;
const SITES = ['ALP', 'BET', 'GAM', 'DEL'];

const segment = (reference: string | undefined, from: string): fc.Arbitrary<NonNullable<Network['clocks']>[number]['segments'][number]> =>
  fc
    .record({
      offset_ns: between(-5_000, 5_000),
      offset_sigma_ns: between(0, 200),
      rate_ns_per_day: between(-100, 100),
      rate_sigma_ns_per_day: between(0.001, 10),
      correlation: between(-1, 1, 2),
    })
    .map(({ correlation, ...numbers }) =>
      without({
        ...{ from, at: '2026-02-27T12:00:00.123456789012 TAI' },
        ...numbers,
        covariance_ns2_per_day: correlation * numbers.offset_sigma_ns * numbers.rate_sigma_ns_per_day,
        reference,
      }),
    );

const clocks = fc.tuple(
  fc
    .tuple(segment('maser', '2026-02-01T00:00:00Z'), segment('maser', '2026-03-01T12:00:02 GPS'))
    .map((segments) => ({ code: 'c1', segments })),
  segment('maser', '2026-02-01T00:00:00Z').map((only) => ({ code: 'c2', segments: [only] })),
  segment(undefined, '2026-02-01T00:00:00Z').map((only) => ({ code: 'c3', segments: [only] })),
);

const site = (code: string) =>
  fc
    .record({
      scale: fc.constantFrom(...SCALES),
      clock: fc.constantFrom('exact', 'c1', 'c2', 'c3'),
      itrs: fc.boolean(),
      latitude_deg: between(-90, 90),
      longitude_deg: between(-180, 180),
      height_m: between(-100, 4000),
      position_sigma_m: sometimes(between(0, 5)),
      delay_ns: between(0, 500),
      delay_sigma_ns: between(0, 10),
      reading_sigma_ns: sometimes(between(0, 100)),
    })
    .map(({ itrs, latitude_deg, longitude_deg, height_m, ...rest }) =>
      without({
        code,
        ...rest,
        position: itrs
          ? { itrs_m: [latitude_deg * 6e4, longitude_deg * 3e4, height_m * 1e3] as [number, number, number] }
          : { geodetic: { latitude_deg, longitude_deg, height_m } },
      }),
    );

const FRAMES: Network['frames'] = [
  { code: 'bary', kind: 'barycentric' },
  { code: 'fast', velocity: { speed_c: 0.8, toward: { ra_deg: 40, dec_deg: -20 } } },
  { code: 'along', velocity: { rapidity: 0.3, toward: { baseline: ['ALP', 'BET'] } } },
  { code: 'fixed', at: 'origin', velocity: { speed_km_s: 1000, toward: { baseline: ['BET', 'ALP'] } } },
  { code: 'chain', parent: 'bary', velocity: { beta: [0.1, 0.2, -0.9] } },
];

const RULE: Network['rule'] = { code: 'light', sigmas: 3, window: { kind: 'light-time' } };

/** A reading within 40 ms about the noon at which the clock of c1 has another segment, with 3 to 12 decimals. */
const reading = fc.tuple(fc.integer({ min: 0, max: 4e10 - 1 }), fc.integer({ min: 3, max: 12 })).map(
  ([ps, decimals]) =>
    `2026-03-01T12:00:00.${String(ps + 98e10)
      .padStart(12, '0')
      .slice(0, decimals)}`,
);

const recordOf = (sites: number) =>
  fc
    .record({
      site: fc.constantFrom(...SITES.slice(0, sites)),
      series: fc.constantFrom('', '', 'b'),
      kind: fc.constantFrom('', 'trigger', 'test'),
      reading,
      sigmaNs: fc.oneof(fc.constant(''), between(0, 50).map(String)),
      amplitude: fc.constantFrom('', '4.5'),
    })
    .map((texts) => ({ ...texts, readingForm: 'iso' as const }));

/**
 * Inputs of small networks: two to four sites in all four scales, exact clocks and ones with segments that share a reference, events near to and
 * far from each other's light cones, with and without an Earth-orientation table, and every kind of frame.
 */
export const randomInputs: fc.Arbitrary<FrozenInputs> = fc
  .integer({ min: 2, max: SITES.length })
  .chain((count) =>
    fc.record({
      sites: fc.tuple(...SITES.slice(0, count).map(site)),
      clocks,
      records: fc.array(recordOf(count), { minLength: 2, maxLength: 6 }),
      orientation: fc.constantFrom(null, finalsFile('2026-02-25', 8, 4)),
      frames: fc.subarray(['bary', 'fast', 'along', 'fixed']),
      maser_ns: between(0, 20),
    }),
  )
  .map(({ sites, clocks: all, records, orientation, frames, maser_ns }) => ({
    network: {
      network: 'Random sites',
      run: { name: 'first', from: '2026-02-26T00:00:00Z', to: '2026-03-02T00:00:00Z' },
      origin: { time: '2026-02-28T06:00:00Z' },
      references: [{ code: 'maser', sigma_ns: maser_ns }],
      clocks: all,
      sites,
      frames: FRAMES.filter(({ code, parent }) => frames.includes(code) || (parent !== undefined && frames.includes(parent))),
      rule: RULE,
    },
    records: records.map((record, at) => ({ ...record, sequence: String(at + 1) })),
    leapSeconds: SHIPPED_LEAP_SECONDS_LIST,
    orientation,
    sigmas: 3,
  }));
