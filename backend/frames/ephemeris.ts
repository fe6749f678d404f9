import { add, scale, subtract, type Vec3 } from '#shared/relativity/vector';
import { type Instant, instantOf, PS_PER_S } from '#shared/time/instant';
import { earthBarycentricState, type EarthState } from './earth-series';

/** The series is summed at whole multiples of this many TAI seconds (6 hours); what lies between is interpolated. */
const GRID_S = 21_600;
/** Knots kept before the oldest is dropped, about 11 years; dropping one costs time and never changes a result. */
const MOST_KNOTS = 16_384;

const knots = new Map<number, EarthState>();

function knotAt(index: number): EarthState {
  const known = knots.get(index);
  if (known) return known;
  const state = earthBarycentricState(instantOf(index * GRID_S, 0));
  if (knots.size >= MOST_KNOTS) {
    const [oldest] = knots.keys();
    if (oldest !== undefined) knots.delete(oldest);
  }
  knots.set(index, state);
  return state;
}

/** The two knots about an instant and the share of the time between them that has passed. */
function knotsAbout({ taiS, ps }: Instant): readonly [EarthState, EarthState, number] {
  const index = Math.floor(taiS / GRID_S);
  return [knotAt(index), knotAt(index + 1), (taiS - index * GRID_S + ps / PS_PER_S) / GRID_S];
}

/**
 * Velocity of the Earth's centre against the solar-system barycentre.
 *
 * @param instant any between 1900 and 2100
 * @returns ICRS axes, m/s, within 5 mm/s (1.4 mm/s rms) of the ephemeris DE405: the rate of the place that `earthBarycentricPlaceM` gives.
 *   Interpolating between fixed instants adds less than 0.1 mm/s; the result depends on the instant alone and has no step
 *
 * Source: `earthBarycentricState`.
 */
export function earthBarycentricVelocityMS(instant: Instant): Vec3 {
  const [before, after, share] = knotsAbout(instant);
  const rest = 1 - share;
  const meanMS = scale(1 / GRID_S, subtract(after.placeM, before.placeM));
  const ends = add(scale(rest * (rest - 2 * share), before.velocityMS), scale(share * (share - 2 * rest), after.velocityMS));
  return add(scale(6 * share * rest, meanMS), ends);
}

/**
 * Place of the Earth's centre against the solar-system barycentre.
 *
 * @param instant any between 1900 and 2100
 * @returns ICRS axes, metres, within 14 km (5 km rms) of the ephemeris DE405; cubic (Hermite) between fixed instants, which adds less than 1 m
 *
 * Source: `earthBarycentricState`.
 */
export function earthBarycentricPlaceM(instant: Instant): Vec3 {
  const [before, after, share] = knotsAbout(instant);
  const rest = 1 - share;
  const places = add(scale(rest * rest * (1 + 2 * share), before.placeM), scale(share * share * (1 + 2 * rest), after.placeM));
  const slopes = add(scale(rest * rest * share * GRID_S, before.velocityMS), scale(-share * share * rest * GRID_S, after.velocityMS));
  return add(places, slopes);
}
