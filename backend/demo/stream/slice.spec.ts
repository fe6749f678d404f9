import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildNetwork } from '#shared/contract/build-network';
import { networkFileSchema } from '#shared/contract/network-file';
import { constantOrientation } from '#shared/earth/earth-orientation';
import { earthRotation } from '#shared/earth/rotation';
import { type Network } from '#shared/reconcile/network';
import { createReconciler, emptyRecord, type ReconciledRecord, type RecordLayout } from '#shared/reconcile/record';
import { emptyEvents } from '#shared/relativity/events';
import { timeVarianceNs2 } from '#shared/relativity/time-error';
import { dot, norm, subtract } from '#shared/relativity/vector';
import { picosecondsBetween, secondsBetween } from '#shared/time/instant';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { demoNetworkFile, HISTORY_S } from '../scenario';
import { SLICE_S } from './plan';
import { countBetween, startOfSlice, writeSlice, type Written } from './slice';
import { lightTimeS, makeWorld, type World } from './world';

const C_M_S = 299_792_458; // CGPM 1983, resolution 1
const leapSeconds = shippedLeapSeconds();
const FIRST_TAI_S = 1_790_000_000; // 2026-09-21, in UTC with TAI - UTC of 37 s (IERS Bulletin C)
const SLICES_A_DAY = 86_400 / SLICE_S;
/** Two times, each rounded to a picosecond. */
const ROUNDING_S = 1.01e-12;

const slices = (world: World, count: number): Written[] => {
  const counts = new Map<string, number>();
  return Array.from({ length: count }, (_, slice) => writeSlice(world, slice, counts)).flat();
};

function networkAt(firstTaiS: number): Network {
  const built = buildNetwork(networkFileSchema.parse(demoNetworkFile(firstTaiS)), {
    leapSeconds,
    rotationFor: () => earthRotation(constantOrientation(-37)),
    earthBarycentricVelocityMS: () => [0, 0, 0],
  });
  if (!built.ok) throw new Error(`${built.problem.where} ${built.problem.text}`);
  return built.value;
}

const LAYOUT: RecordLayout = { width: 7, site: 0, sequence: 1, reading: 2, sigma: 3, amplitude: 4, series: 5, kind: 6, ofSite: undefined };
const fieldsOf = ({ site, record }: Written): string[] => [
  site,
  record.sequence,
  record.reading,
  record.sigmaNs,
  record.amplitude,
  record.series,
  record.kind,
];

describe('the stream of the demo', () => {
  it('is the same for one seed, and another for another', () => {
    fc.assert(
      fc.property(fc.nat(), fc.nat(1000), (seed, from) => {
        const once = writeSlice(makeWorld(seed, FIRST_TAI_S, leapSeconds), from, new Map());
        expect(writeSlice(makeWorld(seed, FIRST_TAI_S, leapSeconds), from, new Map())).toEqual(once);
        expect(writeSlice(makeWorld(seed + 1, FIRST_TAI_S, leapSeconds), from, new Map())).not.toEqual(once);
      }),
    );
  });

  it('goes on after a restart with the records and numbers that it would have had', () => {
    const world = makeWorld(7, FIRST_TAI_S, leapSeconds);
    const inOneGo = slices(world, 40);
    const counts = countBetween(world, 0, 30);
    const resumed = Array.from({ length: 10 }, (_, slice) => writeSlice(world, 30 + slice, counts)).flat();
    expect(resumed).toEqual(inOneGo.slice(-resumed.length));
  });

  it('numbers the records of each site without a gap', () => {
    const written = slices(makeWorld(8, FIRST_TAI_S, leapSeconds), 40);
    for (const site of new Set(written.map((one) => one.site))) {
      const numbers = written.filter((one) => one.site === site).map(({ record }) => Number(record.sequence));
      expect(numbers, site).toEqual(numbers.map((_, i) => i + 1));
    }
  });

  it('has nothing happen outside its slice', () => {
    const world = makeWorld(9, FIRST_TAI_S, leapSeconds);
    for (let slice = 0; slice < 500; slice += 1) {
      for (const { at } of writeSlice(world, slice, new Map())) {
        const afterS = secondsBetween(startOfSlice(world, slice), at);
        expect(afterS).toBeGreaterThanOrEqual(0);
        expect(afterS).toBeLessThan(SLICE_S);
      }
    }
  });

  it('is of a rate that a person can watch, with everything in it that the demo is to show', () => {
    const minutes = 60;
    const written = slices(makeWorld(10, FIRST_TAI_S, leapSeconds), minutes * (60 / SLICE_S));
    expect(written.length / minutes).toBeGreaterThan(150);
    expect(written.length / minutes).toBeLessThan(600);
    const rate = (site: string): number => written.filter((one) => one.site === site).length;
    for (const site of ['TRK', 'TRL', 'SVB', 'SVH', 'OMB', 'GIL', 'KTS']) expect(rate('ILC')).toBeGreaterThan(2.5 * rate(site));
    const fronts = new Set(written.map(({ cause }) => cause).filter((cause) => cause.kind === 'front'));
    expect(fronts.size / minutes).toBeGreaterThan(4);
    expect(fronts.size / minutes).toBeLessThan(12);
    expect([...fronts].filter(({ seen }) => seen.length >= 7).length).toBeGreaterThan(minutes / 4);
    expect(written.some(({ lateS }) => lateS > 0)).toBe(true);
    expect(new Set(written.map(({ record }) => record.kind))).toEqual(new Set(['', 'reference', 'noise']));
  });
});

describe('what truly happens', () => {
  const world = makeWorld(11, FIRST_TAI_S, leapSeconds);
  const written = slices(world, 360);
  const placeOf = ({ site, at }: Written) => world.sites.get(site)!.worldline.placeAt(at);
  const byCause = new Map<Written['cause'], Written[]>();
  for (const one of written) byCause.set(one.cause, [...(byCause.get(one.cause) ?? []), one]);

  it('is a front on one plane that moves at the speed of light, no two triggers of it timelike', () => {
    let pairs = 0;
    for (const [cause, seen] of byCause) {
      if (cause.kind !== 'front') continue;
      for (const [i, a] of seen.entries())
        for (const b of seen.slice(i + 1)) {
          const dxM = subtract(placeOf(b), placeOf(a));
          const dtS = secondsBetween(a.at, b.at);
          expect(Math.abs(dtS + dot(cause.toSource, dxM) / C_M_S)).toBeLessThan(ROUNDING_S);
          expect(dtS).toBeLessThanOrEqual(norm(dxM) / C_M_S + ROUNDING_S);
          pairs += 1;
        }
    }
    expect(pairs).toBeGreaterThan(1000);
  });

  it('is a disturbance slower than light, its triggers timelike', () => {
    let pairs = 0;
    for (const [cause, [a, b]] of byCause) {
      if (cause.kind !== 'disturbance' || !a || !b) continue;
      expect([a.site, b.site]).toEqual([cause.from, cause.to]);
      expect(C_M_S * secondsBetween(a.at, b.at)).toBeGreaterThan(1.2 * norm(subtract(placeOf(b), placeOf(a))));
      pairs += 1;
    }
    expect(pairs).toBeGreaterThan(100);
  });

  it('is a reference pulse that light carries from the emitter on its second', () => {
    let pulses = 0;
    for (const { cause, ...one } of written) {
      if (cause.kind !== 'pulse') continue;
      const emitted = { taiS: world.emitter.firstTaiS + cause.number * world.emitter.periodS, ps: 0 };
      const distanceM = norm(subtract(placeOf({ cause, ...one }), world.emitterWorldline.placeAt(emitted)));
      expect(Math.abs(secondsBetween(emitted, one.at) - distanceM / C_M_S)).toBeLessThan(ROUNDING_S);
      pulses += 1;
    }
    expect(pulses).toBeGreaterThan(1000);
  });
});

describe('the network of the demo', () => {
  const network = networkAt(FIRST_TAI_S);
  const site = (code: string) => network.sites.find((one) => one.code === code)!;

  it('has at least seven sites, and every scale somewhere', () => {
    expect(network.sites.length).toBeGreaterThanOrEqual(7);
    expect(new Set(network.sites.map(({ scale }) => scale))).toEqual(new Set(['UTC', 'TAI', 'GPS', 'TT']));
  });

  it('has two sites 400 m apart, two that share a clock, and one whose clock record has several segments', () => {
    expect(norm(subtract(site('TRL').itrsM, site('TRK').itrsM))).toBeCloseTo(400, 0);
    expect(site('SVB').firstSegmentRow).toBe(site('SVH').firstSegmentRow);
    expect(site('TRK').firstSegmentRow).not.toBe(site('TRL').firstSegmentRow);
    expect(site('OMB').clock.length).toBeGreaterThanOrEqual(4);
    expect(lightTimeS(makeWorld(1, FIRST_TAI_S, leapSeconds).sites.get('SVB')!, makeWorld(1, FIRST_TAI_S, leapSeconds).sites.get('SVH')!)).toBeGreaterThan(1e-4); // prettier-ignore
  });
});

/**
 * The pull of a measured value is its difference from the true one in units of its stated error: over many worlds, of mean 0 and variance 1.
 * Source: common practice; the variance of a sample's variance of normal values is 2 / (n - 1).
 */
describe('readings, reconciled', () => {
  const WORLDS = 400;
  const BOUND = 4.5; // standard errors of the mean and of the variance: with 32 looks, one run in a thousand fails by chance at most
  const network = networkAt(FIRST_TAI_S);
  const reconcile = createReconciler(network, leapSeconds);

  function pullOf(one: Written): number {
    const record = emptyRecord();
    expect(reconcile(fieldsOf(one), LAYOUT, record)).toBeUndefined();
    return picosecondsBetween(one.at, record) / 1e3 / sigmaNs(record);
  }

  function sigmaNs(record: ReconciledRecord): number {
    const events = { ...emptyEvents(1), count: 1 };
    events.site[0] = record.site;
    events.segment[0] = record.segment;
    events.readingSigmaNs[0] = record.readingSigmaNs;
    events.sinceEpochDays[0] = record.sinceEpochDays;
    return Math.sqrt(timeVarianceNs2(events, network.errors, 0));
  }

  it.each([
    ['in the first minutes', (HISTORY_S - 60) / SLICE_S],
    ['after three days, when the rates have had their say', 3 * SLICES_A_DAY],
  ])('give the true times back within their stated errors %s', (_when, slice) => {
    const pulls = new Map<string, number[]>();
    for (let seed = 1; seed <= WORLDS; seed += 1) {
      const world = makeWorld(seed, FIRST_TAI_S, leapSeconds);
      const first = new Map<string, Written>();
      // One a site and world: all others of the site share most of their error with it.
      for (const one of [0, 1, 2, 3].flatMap((more) => writeSlice(world, slice + more, new Map())))
        if (!first.has(one.site) && reconcile(fieldsOf(one), LAYOUT, emptyRecord()) === undefined) first.set(one.site, one);
      for (const [site, one] of first) pulls.set(site, [...(pulls.get(site) ?? []), pullOf(one)]);
    }
    expect(pulls.size).toBe(8);
    for (const [site, values] of pulls) {
      const n = values.length;
      const mean = values.reduce((sum, pull) => sum + pull, 0) / n;
      const variance = values.reduce((sum, pull) => sum + (pull - mean) ** 2, 0) / (n - 1);
      expect(Math.abs(mean), `mean of ${site}`).toBeLessThan(BOUND / Math.sqrt(n));
      expect(Math.abs(variance - 1), `variance of ${site}`).toBeLessThan(BOUND * Math.sqrt(2 / (n - 1)));
    }
  });
});
