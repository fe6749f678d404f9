import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { C_M_S } from '#shared/constants';
import { coincidenceKernel } from '#shared/coincidence/kernel';
import { windowBounds } from '#shared/coincidence/window-bounds';
import { boostEvent } from '#shared/relativity/boost';
import { type ErrorTables, type EventColumns } from '#shared/relativity/events';
import { transform } from '#shared/relativity/four-vector';
import { compose, GEOCENTRIC, type InertialFrame } from '#shared/relativity/frame';
import { intervalM2 } from '#shared/relativity/interval';
import { frameDtNs, frameSigmaNs, orderFrom, turningOf } from '#shared/relativity/order';
import { type Pair, pairOf } from '#shared/relativity/pair';
import { differenceVarianceNs2, errorTerms, gapSigmaNs, timeVarianceNs2 } from '#shared/relativity/time-error';
import { dot, norm, opposite, scale, unitOf, type Vec3 } from '#shared/relativity/vector';
import { gapRoundingNs, verdictOf } from '#shared/relativity/verdict';
import { fourVelocity, type FourVelocity } from '#shared/relativity/velocity';
import { type Worldline } from '#shared/relativity/worldline';
import { addPicoseconds, type Instant, instantOf } from '#shared/time/instant';
import { errorFree, eventColumns, type EventRow } from '../support/events';

/** Rounding of a few dozen operations on doubles. */
const ROUNDING = 1e-14;
/** The exact algebra of covariances, a few hundred products added in another order. */
const ALGEBRA = 1e-12;
/** Promised for standard errors. */
const PROMISED_SIGMA = 1e-6;

const NS_PER_LIGHT_M = 1e9 / C_M_S;
const START: Instant = { taiS: 1_772_323_237, ps: 0 };
const SITES = 3;
const SEGMENTS = 4;
const REFERENCES = 2;
const MOST_RADIUS_M = 7e6;

/** An even spread of numbers with both ends: doubles by bit pattern would be nearly all next to 0. */
const between = (min: number, max: number): fc.Arbitrary<number> =>
  fc.integer({ min: 0, max: 1e9 }).map((k) => min + ((max - min) * k) / 1e9);
/** An even spread of magnitudes. */
const magnitude = (minPower: number, maxPower: number): fc.Arbitrary<number> => between(minPower, maxPower).map((power) => 10 ** power);
const unitVector: fc.Arbitrary<Vec3> = fc
  .tuple(between(-1, 1), between(0, 2 * Math.PI))
  .map(([z, angle]) => [Math.sqrt(1 - z * z) * Math.cos(angle), Math.sqrt(1 - z * z) * Math.sin(angle), z]);

/** A standard error that is often 0. */
const sigma = fc.oneof(fc.constant(0), magnitude(-3, 6));
const manySigmas = (length: number): fc.Arbitrary<Float64Array> =>
  fc.array(sigma, { minLength: length, maxLength: length }).map((values) => Float64Array.from(values));

/** Sites, clock segments and references at random; segments may share a reference, or name none, and correlate offset and rate. */
const tables: fc.Arbitrary<ErrorTables> = fc
  .record({
    siteDelaySigmaNs: manySigmas(SITES),
    sitePositionSigmaM: manySigmas(SITES),
    segmentOffsetSigmaNs: manySigmas(SEGMENTS),
    segmentRateSigmaNsPerDay: manySigmas(SEGMENTS),
    correlation: fc.array(between(-1, 1), { minLength: SEGMENTS, maxLength: SEGMENTS }),
    references: fc.array(fc.integer({ min: -1, max: REFERENCES - 1 }), { minLength: SEGMENTS, maxLength: SEGMENTS }),
    referenceSigmaNs: manySigmas(REFERENCES),
  })
  .map(({ correlation, references, ...given }) => ({
    ...given,
    segmentCovarianceNs2PerDay: Float64Array.from(
      correlation,
      (r, k) => r * given.segmentOffsetSigmaNs[k]! * given.segmentRateSigmaNsPerDay[k]!,
    ),
    segmentReference: Int32Array.from(references),
  }));

/** Places are drawn from a few, so that events often lie at one place. */
const places: fc.Arbitrary<readonly Vec3[]> = fc.array(
  fc.tuple(magnitude(0, Math.log10(MOST_RADIUS_M)), unitVector).map(([size, unit]) => scale(size, unit)),
  { minLength: SITES, maxLength: SITES },
);
type Body = EventRow & { readonly site: number };
const body = (at: readonly Vec3[]): fc.Arbitrary<Body> =>
  fc
    .record({
      site: fc.integer({ min: 0, max: SITES - 1 }),
      readingSigmaNs: sigma,
      segment: fc.integer({ min: -1, max: SEGMENTS - 1 }),
      sinceEpochDays: between(-30, 30),
    })
    .map((row) => ({ ...row, placeM: at[row.site]! }));
const bodies = (count: number): fc.Arbitrary<readonly Body[]> =>
  places.chain((at) => fc.array(body(at), { minLength: count, maxLength: count }));
const sigmas = fc.oneof(fc.constantFrom(0, 1, 3, 5), between(0, 6));

/** How far beyond the edge of a decision an event is put, ps: most of the interest lies at 0 and 1. */
const beyondPs = fc.oneof(
  fc.constantFrom(0, 1, 2),
  magnitude(0, 15).map((ps) => Math.floor(ps)),
);

const seen = (row: Body, instant: Instant): EventRow => ({ ...row, taiS: instant.taiS, ps: instant.ps });

/** The first whole picosecond at which the gap of b after a reaches `sigmas` of its standard errors. */
function edgePs(a: Body, b: Body, t: ErrorTables, k: number): number {
  const events = eventColumns([a, b]);
  const { distanceM } = pairOf(events, t, 0, 1);
  return Math.ceil((distanceM * NS_PER_LIGHT_M + k * gapSigmaNs(events, t, 0, 1)) * 1000);
}

/** Events that follow one another, each put where its pair with the one before is timelike, or just about. */
const chainOf = (
  count: number,
): fc.Arbitrary<{ readonly events: EventColumns; readonly tables: ErrorTables; readonly k: number; readonly rows: readonly EventRow[] }> =>
  fc.tuple(bodies(count), tables, sigmas, fc.array(beyondPs, { minLength: count, maxLength: count })).map(([drawn, t, k, beyond]) => {
    let instant = START;
    const rows = drawn.map((row, i) => {
      if (i > 0) instant = addPicoseconds(instant, Math.min(edgePs(drawn[i - 1]!, row, t, k) + beyond[i]!, 5e15));
      return seen(row, instant);
    });
    return { events: eventColumns(rows), tables: t, k, rows };
  });

/** A frame at the end of one to three boosts, up to gamma 1e6. */
const frame: fc.Arbitrary<InertialFrame> = fc
  .array(fc.tuple(between(0, 14.5), unitVector), { minLength: 1, maxLength: 3 })
  .map((links) =>
    links.reduce((parent, [rapidity, unit]) => compose(parent, fourVelocity(scale(Math.sinh(rapidity / links.length), unit))), GEOCENTRIC),
  );

/** Timelike at k standard errors, by the verdict. */
const isBefore = (e: EventColumns, t: ErrorTables, a: number, b: number, k: number): boolean =>
  verdictOf(pairOf(e, t, a, b), k).class === 'timelike';

describe('timelike at k standard errors', () => {
  it('is transitive', () => {
    fc.assert(
      fc.property(chainOf(3), ({ events, tables: t, k }) => {
        fc.pre(isBefore(events, t, 0, 1, k) && isBefore(events, t, 1, 2, k));
        expect(isBefore(events, t, 0, 2, k)).toBe(true);
      }),
      { numRuns: 2_000 },
    );
  });

  it('is never true both ways, and never of an event and itself', () => {
    fc.assert(
      fc.property(chainOf(2), ({ events, tables: t, k }) => {
        fc.pre(isBefore(events, t, 0, 1, k));
        expect(isBefore(events, t, 1, 0, k)).toBe(false);
        expect(isBefore(events, t, 0, 0, k)).toBe(false);
      }),
    );
  });

  it('has one order, and never a tie, in 10,000 random frames', () => {
    const FRAMES = 10_000;
    fc.assert(
      fc.property(chainOf(2), frame, unitVector, between(0, 14.5), ({ events, tables: t, k }, end, unit, rapidity) => {
        const pair = pairOf(events, t, 0, 1);
        fc.pre(verdictOf(pair, k).class === 'timelike');
        // A frame that follows a signal from a to b sees the least of the time between them.
        const along = pair.distanceM > 0 ? unitOf(pair.dxM) : unit;
        const chase = fourVelocity(scale(Math.sinh(rapidity), along));
        for (const velocity of [end.velocity, chase, fourVelocity(opposite(chase.gammaBeta))]) {
          expect(orderFrom(frameDtNs(pair, velocity), frameSigmaNs(pair, velocity), k)).toBe('a');
        }
      }),
      { numRuns: FRAMES },
    );
  });

  it('has that order in the coordinates of both events too, boosted one by one', () => {
    fc.assert(
      fc.property(chainOf(2), frame, ({ events, tables: t, k, rows }, end) => {
        const pair = pairOf(events, t, 0, 1);
        fc.pre(verdictOf(pair, k).class === 'timelike');
        const [a, b] = rows.map((row) => {
          const sinceStartS = row.taiS! - START.taiS + row.ps! / 1e12;
          return { ctM: C_M_S * sinceStartS, xM: row.placeM! };
        });
        for (const [seenA, seenB] of [
          [transform(end.lorentz, a!), transform(end.lorentz, b!)],
          [boostEvent(end.velocity, a!), boostEvent(end.velocity, b!)],
        ] as const) {
          const dtNs = (seenB.ctM - seenA.ctM) * NS_PER_LIGHT_M;
          const lostNs = ROUNDING * end.velocity.gamma * (pair.dtNs + pair.radiiM * NS_PER_LIGHT_M);
          expect(Math.abs(dtNs - frameDtNs(pair, end.velocity))).toBeLessThanOrEqual(lostNs);
          expect(dtNs).toBeGreaterThan(-lostNs);
        }
      }),
    );
  });
});

/** A spacelike pair, by verdict; the earlier one first. */
const spacelike = fc
  .tuple(bodies(2), tables, sigmas, fc.oneof(fc.constant(0), between(0, 1)))
  .filter(([drawn]) => drawn[0]!.site !== drawn[1]!.site)
  .map(([drawn, t, k, part]) => {
    const distanceM = pairOf(eventColumns(drawn), t, 0, 1).distanceM;
    const dtPs = Math.floor(part * distanceM * NS_PER_LIGHT_M * 1000);
    const events = eventColumns([seen(drawn[0]!, START), seen(drawn[1]!, addPicoseconds(START, dtPs))]);
    return { pair: pairOf(events, t, 0, 1), k };
  })
  .filter(({ pair, k }) => verdictOf(pair, k).class === 'spacelike');

/** A velocity of a speed in c along a unit vector. */
function towardAt(betaC: number, unit: Vec3): FourVelocity {
  return fourVelocity(scale(betaC / Math.sqrt((1 - betaC) * (1 + betaC)), unit));
}

describe('a spacelike pair', () => {
  /** Relative step to either side of the turning speed; rounding of speed and time stays a thousand times below. */
  const STEP = 1e-9;
  const orderAt = (pair: Pair, velocity: FourVelocity): string => orderFrom(frameDtNs(pair, velocity), 0, 0);
  /** What rounding can make of a time in a frame. */
  const lostNs = (pair: Pair, velocity: FourVelocity): number =>
    8 * Number.EPSILON * velocity.gamma * (pair.dtNs + pair.distanceM * NS_PER_LIGHT_M);

  it('turns at its turning speed along its direction: before it a is first, beyond it b, at it neither', () => {
    fc.assert(
      fc.property(spacelike, ({ pair }) => {
        const { speedC, toward } = turningOf(pair);
        fc.pre(speedC * (1 + STEP) < 1);
        const at = towardAt(speedC, toward);
        expect(Math.abs(frameDtNs(pair, at))).toBeLessThanOrEqual(lostNs(pair, at));
        expect(orderAt(pair, towardAt(speedC * (1 + STEP) + STEP * 1e-3, toward))).toBe('b');
        if (speedC > 0) expect(orderAt(pair, towardAt(speedC * (1 - STEP), toward))).toBe('a');
      }),
    );
  });

  it('turns at no lower speed in any direction', () => {
    fc.assert(
      fc.property(spacelike, unitVector, between(0, 1 - STEP), ({ pair }, unit, part) => {
        const { speedC, toward } = turningOf(pair);
        fc.pre(speedC > 0);
        for (const direction of [unit, toward, opposite(toward), unitOf([toward[0] + unit[0] / 1e3, toward[1], toward[2]])]) {
          expect(orderAt(pair, towardAt(part * speedC, direction))).toBe('a');
        }
      }),
    );
  });

  it('has, in its turning frame, a tie at any number of standard errors once there is one', () => {
    fc.assert(
      fc.property(spacelike, ({ pair }) => {
        fc.pre(pair.sigmaDtNs > 0.001);
        const { speedC, toward } = turningOf(pair);
        const at = towardAt(speedC, toward);
        expect(orderFrom(frameDtNs(pair, at), frameSigmaNs(pair, at), 1)).toBe('tie');
      }),
    );
  });
});

/** All error terms of a network as one vector: readings, delays, offsets, rates, references, places; their covariance matrix. */
function covarianceOf(e: EventColumns, t: ErrorTables): { readonly matrix: readonly (readonly number[])[]; readonly at: Terms } {
  const at: Terms = {
    reading: (i) => i,
    delay: (site) => e.count + site,
    offset: (segment) => e.count + SITES + segment,
    rate: (segment) => e.count + SITES + SEGMENTS + segment,
    reference: (reference) => e.count + SITES + 2 * SEGMENTS + reference,
    place: (site, axis) => e.count + SITES + 2 * SEGMENTS + REFERENCES + 3 * site + axis,
  };
  const size = e.count + SITES + 2 * SEGMENTS + REFERENCES + 3 * SITES;
  const matrix = Array.from({ length: size }, () => new Array<number>(size).fill(0));
  const setSigma = (term: number, value: number): void => {
    matrix[term]![term] = value * value;
  };
  for (let i = 0; i < e.count; i++) setSigma(at.reading(i), e.readingSigmaNs[i]!);
  for (let site = 0; site < SITES; site++) {
    setSigma(at.delay(site), t.siteDelaySigmaNs[site]!);
    for (const axis of [0, 1, 2]) setSigma(at.place(site, axis), t.sitePositionSigmaM[site]!);
  }
  for (let segment = 0; segment < SEGMENTS; segment++) {
    setSigma(at.offset(segment), t.segmentOffsetSigmaNs[segment]!);
    setSigma(at.rate(segment), t.segmentRateSigmaNsPerDay[segment]!);
    matrix[at.offset(segment)]![at.rate(segment)] = t.segmentCovarianceNs2PerDay[segment]!;
    matrix[at.rate(segment)]![at.offset(segment)] = t.segmentCovarianceNs2PerDay[segment]!;
  }
  for (let reference = 0; reference < REFERENCES; reference++) setSigma(at.reference(reference), t.referenceSigmaNs[reference]!);
  return { matrix, at };
}

interface Terms {
  readonly reading: (event: number) => number;
  readonly delay: (site: number) => number;
  readonly offset: (segment: number) => number;
  readonly rate: (segment: number) => number;
  readonly reference: (reference: number) => number;
  readonly place: (site: number, axis: number) => number;
}

/** How the time of an event answers to each term: event time = reading - delay - offset - rate x tau - reference. */
function timeRow(e: EventColumns, t: ErrorTables, at: Terms, i: number, size: number): number[] {
  const row = new Array<number>(size).fill(0);
  row[at.reading(i)] = 1;
  row[at.delay(e.site[i]!)] = -1;
  const segment = e.segment[i]!;
  if (segment < 0) return row;
  row[at.offset(segment)] = -1;
  row[at.rate(segment)] = -e.sinceEpochDays[i]!;
  const reference = t.segmentReference[segment]!;
  if (reference >= 0) row[at.reference(reference)] = -1;
  return row;
}

/** How a component along `unit` of the step from event 0 to event 1 answers to each term. */
function stepRow(e: EventColumns, at: Terms, unit: Vec3, size: number): number[] {
  const row = new Array<number>(size).fill(0);
  for (const axis of [0, 1, 2] as const) {
    row[at.place(e.site[0]!, axis)]! -= unit[axis];
    row[at.place(e.site[1]!, axis)]! += unit[axis];
  }
  return row;
}

/** r P r, and the same with every product counted as positive: what rounding is measured against. */
function variance(row: readonly number[], matrix: readonly (readonly number[])[]): { value: number; size: number } {
  let value = 0;
  let size = 0;
  for (const [i, left] of row.entries()) {
    for (const [j, right] of row.entries()) {
      const product = left * matrix[i]![j]! * right;
      value += product;
      size += Math.abs(product);
    }
  }
  return { value, size };
}

const combine = (a: readonly number[], ka: number, b: readonly number[], kb: number): number[] =>
  a.map((value, i) => ka * value + kb * b[i]!);

/** Two events with the covariance of all their terms, and how dt and the step between them answer to each. */
const propagated = fc.tuple(bodies(2), tables, magnitude(3, 15)).map(([drawn, t, dtPs]) => {
  const e = eventColumns([seen(drawn[0]!, START), seen(drawn[1]!, addPicoseconds(START, Math.floor(dtPs)))]);
  const { matrix, at } = covarianceOf(e, t);
  const times = [timeRow(e, t, at, 0, matrix.length), timeRow(e, t, at, 1, matrix.length)] as const;
  const dt = combine(times[1], 1, times[0], -1);
  return { e, t, matrix, times, dt, step: (unit: Vec3) => stepRow(e, at, unit, matrix.length), pair: pairOf(e, t, 0, 1) };
});

describe('standard errors against the covariance of all terms', () => {
  it('are those of one time', () => {
    fc.assert(
      fc.property(propagated, ({ e, t, matrix, times }) => {
        for (const [i, row] of times.entries()) {
          const { value, size } = variance(row, matrix);
          expect(Math.abs(timeVarianceNs2(e, t, i) - value)).toBeLessThanOrEqual(ALGEBRA * size);
          const terms = errorTerms(e, t, i).reduce((sum, { sigmaNs }) => sum + sigmaNs ** 2, 0);
          expect(Math.abs(terms - value)).toBeLessThanOrEqual(ALGEBRA * size);
        }
      }),
    );
  });

  it('are those of a time difference, whatever two events share', () => {
    fc.assert(
      fc.property(propagated, ({ e, t, matrix, dt, pair }) => {
        const { value, size } = variance(dt, matrix);
        const expected = differenceVarianceNs2(e, t, 0, 1);
        expect(Math.abs(expected - value)).toBeLessThanOrEqual(ALGEBRA * size);
        expect(Math.abs(differenceVarianceNs2(e, t, 1, 0) - expected)).toBeLessThanOrEqual(ROUNDING * expected);
        expect(Math.abs(pair.sigmaDtNs ** 2 - expected)).toBeLessThanOrEqual(ALGEBRA * expected);
      }),
      { numRuns: 1_000 },
    );
  });

  it('are those of the distance from the light cone', () => {
    fc.assert(
      fc.property(propagated, ({ e, t, matrix, dt, step, pair }) => {
        fc.pre(pair.distanceM > 0);
        const gap = combine(dt, 1, step(unitOf(pair.dxM)), -NS_PER_LIGHT_M);
        const { value, size } = variance(gap, matrix);
        const { sigmaGapNs } = verdictOf(pair, 3);
        expect(Math.abs(sigmaGapNs ** 2 - value)).toBeLessThanOrEqual(ALGEBRA * size);
        expect(Math.abs(gapSigmaNs(e, t, 0, 1) - sigmaGapNs)).toBeLessThanOrEqual(ROUNDING * sigmaGapNs);
        expect(Math.abs(sigmaGapNs - Math.sqrt(Math.max(0, value)))).toBeLessThanOrEqual(
          PROMISED_SIGMA * sigmaGapNs + Math.sqrt(ALGEBRA * size),
        );
      }),
    );
  });

  it('are those of the time in a frame', () => {
    fc.assert(
      fc.property(propagated, frame, ({ matrix, dt, step, pair }, { velocity }) => {
        const seenDt = combine(dt, velocity.gamma, step(velocity.gammaBeta), -NS_PER_LIGHT_M);
        const { value, size } = variance(seenDt, matrix);
        expect(Math.abs(frameSigmaNs(pair, velocity) ** 2 - value)).toBeLessThanOrEqual(ALGEBRA * size);
      }),
      { numRuns: 1_000 },
    );
  });

  it('are those of the turning speed, by the slope of c dt / distance', () => {
    fc.assert(
      fc.property(propagated, ({ matrix, dt, step, pair }) => {
        fc.pre(pair.distanceM > 1 && pair.dtNs < 10 * pair.distanceM * NS_PER_LIGHT_M);
        const speedOf = (dtNs: number, dxM: Vec3): number => dtNs / NS_PER_LIGHT_M / norm(dxM);
        const unit = unitOf(pair.dxM);
        // Central differences over a thousandth of either length: good to 1e-6 of the slope.
        const stepNs = pair.distanceM * NS_PER_LIGHT_M * 1e-3;
        const stepM = pair.distanceM * 1e-3;
        const longer = scale(1 + 1e-3, pair.dxM);
        const shorter = scale(1 - 1e-3, pair.dxM);
        const byTime = (speedOf(pair.dtNs + stepNs, pair.dxM) - speedOf(pair.dtNs - stepNs, pair.dxM)) / (2 * stepNs);
        const byStep = (speedOf(pair.dtNs, longer) - speedOf(pair.dtNs, shorter)) / (2 * stepM);
        const { value } = variance(combine(dt, byTime, step(unit), byStep), matrix);
        const { sigmaC } = turningOf(pair);
        expect(Math.abs(sigmaC ** 2 - value)).toBeLessThanOrEqual(4 * PROMISED_SIGMA * sigmaC ** 2);
      }),
    );
  });

  it('obey the triangle inequality, and what two events share only lessens them', () => {
    fc.assert(
      fc.property(bodies(3), tables, (drawn, t) => {
        const e = eventColumns(drawn);
        const own = [0, 1, 2].map((i) =>
          Math.hypot(Math.sqrt(timeVarianceNs2(e, t, i)), t.sitePositionSigmaM[e.site[i]!]! * NS_PER_LIGHT_M),
        );
        for (const [i, j, via] of [
          [0, 1, 2],
          [1, 2, 0],
          [0, 2, 1],
        ] as const) {
          const slack = ROUNDING * (own[i]! + own[j]! + own[via]!);
          expect(gapSigmaNs(e, t, i, j)).toBeLessThanOrEqual(gapSigmaNs(e, t, i, via) + gapSigmaNs(e, t, via, j) + slack);
          const throughTime = Math.sqrt(differenceVarianceNs2(e, t, i, via)) + Math.sqrt(differenceVarianceNs2(e, t, via, j));
          expect(Math.sqrt(differenceVarianceNs2(e, t, i, j))).toBeLessThanOrEqual(throughTime + slack);
          expect(gapSigmaNs(e, t, i, j)).toBeLessThanOrEqual(own[i]! + own[j]! + slack);
        }
      }),
      { numRuns: 1_000 },
    );
  });
});

/** Two events at any distance from the light cone, many of them at the edge of a decision. */
const anyPair = fc
  .tuple(bodies(2), tables, sigmas, fc.integer({ min: -2, max: 2 }), beyondPs, fc.constantFrom(-1, 1))
  .map(([drawn, t, k, side, beyond, sign]) => {
    const dtPs = Math.max(0, edgePs(drawn[0]!, drawn[1]!, t, (k * side) / 2) + sign * Math.min(beyond, 5e15));
    const later = addPicoseconds(START, dtPs);
    return { drawn, t, k, rows: [seen(drawn[0]!, START), seen(drawn[1]!, later)] as const };
  });

describe('the verdict', () => {
  it('does not depend on which row holds which event, nor on a mirror', () => {
    fc.assert(
      fc.property(anyPair, ({ rows, t, k }) => {
        const verdict = verdictOf(pairOf(eventColumns(rows), t, 0, 1), k);
        expect(verdictOf(pairOf(eventColumns(rows.toReversed()), t, 1, 0), k)).toEqual(verdict);
        const mirrored = rows.map((row) => ({ ...row, placeM: opposite(row.placeM!) }));
        expect(verdictOf(pairOf(eventColumns(mirrored), t, 0, 1), k)).toEqual(verdict);
      }),
    );
  });

  it('is the same for both orders of one instant', () => {
    fc.assert(
      fc.property(bodies(2), tables, sigmas, (drawn, t, k) => {
        const e = eventColumns(drawn.map((row) => seen(row, START)));
        const [one, other] = [verdictOf(pairOf(e, t, 0, 1), k), verdictOf(pairOf(e, t, 1, 0), k)];
        expect(other.gapNs).toBe(one.gapNs);
        expect(Math.abs(other.sigmaGapNs - one.sigmaGapNs)).toBeLessThanOrEqual(ROUNDING * one.sigmaGapNs);
        fc.pre(Math.abs(-one.gapNs - k * one.sigmaGapNs) > ROUNDING * k * one.sigmaGapNs);
        expect(other.class).toBe(one.class);
      }),
    );
  });

  it('has as reverse margin the margin of the exchanged pair, sign turned', () => {
    fc.assert(
      fc.property(anyPair, ({ rows, t, k }) => {
        const e = eventColumns(rows);
        const [there, back] = [verdictOf(pairOf(e, t, 0, 1), k), verdictOf(pairOf(e, t, 1, 0), k)];
        if (Number.isFinite(back.marginSigma))
          expect(Math.abs(there.reverseMarginSigma + back.marginSigma)).toBeLessThanOrEqual(ROUNDING * there.reverseMarginSigma);
        else expect([there.reverseMarginSigma, back.marginSigma]).toEqual([Infinity, -Infinity]);
        expect(there.reverseMarginSigma).toBeGreaterThanOrEqual(there.marginSigma);
      }),
    );
  });

  it('agrees with its margin wherever rounding cannot decide', () => {
    fc.assert(
      fc.property(anyPair, ({ rows, t, k }) => {
        const pair = pairOf(eventColumns(rows), t, 0, 1);
        const verdict = verdictOf(pair, k);
        fc.pre(Math.abs(Math.abs(verdict.gapNs) - k * verdict.sigmaGapNs) > 2 * gapRoundingNs(pair));
        const byMargin = verdict.marginSigma > k ? 'timelike' : verdict.marginSigma < -k ? 'spacelike' : 'undecided';
        expect(verdict.class).toBe(byMargin);
      }),
    );
  });

  it('is never timelike of a pair that a light-time window holds, and timelike of every other', () => {
    const worldline: Worldline = { placeAt: () => [0, 0, 0], mostSpeedMS: 500, mostRadiusM: MOST_RADIUS_M };
    const worldlines = Array.from({ length: SITES }, () => worldline);
    const window = { kind: 'light-time', speedC: 1, marginNs: 0 } as const;
    const bounds = windowBounds(window, worldlines, () => ({ leastM: 0, mostM: 2 * MOST_RADIUS_M }));
    fc.assert(
      fc.property(
        anyPair.filter(({ drawn }) => drawn[0]!.site !== drawn[1]!.site),
        ({ rows, t, k }) => {
          const e = eventColumns(rows);
          for (const i of [0, 1]) e.sigmaNs[i] = Math.sqrt(timeVarianceNs2(e, t, i));
          const rule = { code: 'light', minimumFold: 2, sigmas: k, window };
          const isNear = coincidenceKernel({ events: e, errors: t, rule, bounds }).near(0, 1);
          const pair = pairOf(e, t, 0, 1);
          const verdict = verdictOf(pair, k);
          expect(isNear && verdict.class === 'timelike').toBe(false);
          if (Math.abs(verdict.gapNs - k * verdict.sigmaGapNs) > 2 * gapRoundingNs(pair)) expect(isNear).toBe(verdict.class !== 'timelike');
        },
      ),
      { numRuns: 1_000 },
    );
  });
});

describe('the interval of a pair', () => {
  it('is the same in every frame', () => {
    fc.assert(
      fc.property(anyPair, frame, ({ rows, t }, { velocity, lorentz }) => {
        const pair = pairOf(eventColumns(rows), t, 0, 1);
        const step = { ctM: pair.dtNs / NS_PER_LIGHT_M, xM: pair.dxM };
        const here = intervalM2(pair.dtNs, pair.distanceM);
        const scaleM = velocity.gamma * (step.ctM + pair.distanceM);
        for (const there of [boostEvent(velocity, step), transform(lorentz, step)]) {
          const interval = intervalM2(there.ctM * NS_PER_LIGHT_M, norm(there.xM));
          expect(Math.abs(interval - here)).toBeLessThanOrEqual(ROUNDING * scaleM * scaleM);
        }
        expect(Math.abs(frameDtNs(pair, velocity) / NS_PER_LIGHT_M - boostEvent(velocity, step).ctM)).toBeLessThanOrEqual(
          ROUNDING * scaleM,
        );
      }),
    );
  });

  it('has the sign of the class where the class is certain', () => {
    fc.assert(
      fc.property(anyPair, ({ rows, t, k }) => {
        const pair = pairOf(eventColumns(rows), t, 0, 1);
        const { class: kind } = verdictOf(pair, k);
        fc.pre(kind !== 'undecided');
        expect(Math.sign(intervalM2(pair.dtNs, pair.distanceM))).toBe(kind === 'timelike' ? 1 : -1);
      }),
    );
  });

  it('is that of exact arithmetic to the rounding of its two lengths', () => {
    // Whole metres and whole light-metres: everything is a whole number below 2^53.
    const whole = fc.integer({ min: -9_000_000, max: 9_000_000 });
    fc.assert(
      fc.property(whole, whole, whole, fc.integer({ min: 0, max: 30 }), (x, y, z, seconds) => {
        const dx: Vec3 = [x, y, z];
        const e = eventColumns([
          { ...START, placeM: [0, 0, 0] },
          { ...instantOf(START.taiS + seconds, 0), placeM: dx },
        ]);
        const pair = pairOf(e, errorFree(1), 0, 1);
        const exact = BigInt(seconds * C_M_S) ** 2n - BigInt(x) ** 2n - BigInt(y) ** 2n - BigInt(z) ** 2n;
        const lengthM = seconds * C_M_S + Math.sqrt(dot(dx, dx));
        const error = Math.abs(intervalM2(pair.dtNs, pair.distanceM) - Number(exact));
        expect(error).toBeLessThanOrEqual(4 * Number.EPSILON * lengthM * lengthM);
      }),
    );
  });
});
