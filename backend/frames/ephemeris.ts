import { AstroTime, BaryState, Body, GeoMoonState, HelioState, type StateVector } from 'astronomy-engine';
import { add, scale, type Vec3 } from '#shared/relativity/vector';
import { type Instant, PS_PER_S } from '#shared/time/instant';
import { missingMonthlyMotion, type State } from './monthly-motion';

/** The Earth's centre against the solar-system barycentre, ICRS axes. */
interface EarthState {
  readonly placeM: Vec3;
  readonly velocityMS: Vec3;
}

const M_PER_AU = 149_597_870_700;
const S_PER_DAY = 86_400;
/** J2000.0 (TT) in TAI seconds since 1970-01-01T00:00:00 TAI: 946,728,000 less TT - TAI. */
const J2000_TAI_S = 946_728_000 - 32.184;

/** The ephemeris is asked at whole multiples of this many TAI seconds; what lies between is interpolated. */
const GRID_S = 3600;
/** Hours kept before the oldest is dropped, about 700 days; dropping one costs time and never changes a result. */
const MOST_HOURS = 16_384;

const stateOf = (vector: StateVector): State => ({
  au: [vector.x, vector.y, vector.z],
  auPerDay: [vector.vx, vector.vy, vector.vz],
});

/** TT is handed over as days, so that the package's own extrapolated difference of TT and UT has no part in it. */
function earthAtHour(index: number): EarthState {
  const ttDays = (index * GRID_S - J2000_TAI_S) / S_PER_DAY;
  const time = AstroTime.FromTerrestrialTime(ttDays);
  const earth = stateOf(BaryState(Body.Earth, time));
  const missing = missingMonthlyMotion(ttDays, stateOf(HelioState(Body.Earth, time)), stateOf(GeoMoonState(time)));
  return {
    placeM: scale(M_PER_AU, add(earth.au, missing.au)),
    velocityMS: scale(M_PER_AU / S_PER_DAY, add(earth.auPerDay, missing.auPerDay)),
  };
}

const hours = new Map<number, EarthState>();

function hourAt(index: number): EarthState {
  const known = hours.get(index);
  if (known) return known;
  const state = earthAtHour(index);
  if (hours.size >= MOST_HOURS) {
    const [oldest] = hours.keys();
    if (oldest !== undefined) hours.delete(oldest);
  }
  hours.set(index, state);
  return state;
}

/** The two grid hours about an instant and the share of the hour that has passed. */
function hoursAbout({ taiS, ps }: Instant): readonly [EarthState, EarthState, number] {
  const index = Math.floor(taiS / GRID_S);
  return [hourAt(index), hourAt(index + 1), (taiS - index * GRID_S + ps / PS_PER_S) / GRID_S];
}

/**
 * Velocity of the Earth's centre against the solar-system barycentre.
 *
 * @param instant any between 1900 and 2100
 * @returns ICRS axes, m/s, within 0.8 m/s of IAU SOFA's Earth ephemeris from 1980 to 2040; linear between fixed whole hours of TAI, which
 *   adds up to 3 mm/s, so that it depends on the instant alone and has no step
 *
 * Source: VSOP87 (Bretagnon and Francou 1988) as astronomy-engine 2.1.19 has it, with its monthly motion made whole.
 */
export function earthBarycentricVelocityMS(instant: Instant): Vec3 {
  const [before, after, share] = hoursAbout(instant);
  return add(scale(1 - share, before.velocityMS), scale(share, after.velocityMS));
}

/**
 * Place of the Earth's centre against the solar-system barycentre.
 *
 * @param instant any between 1900 and 2100
 * @returns ICRS axes, metres, within 4,000 km of IAU SOFA's Earth ephemeris from 1980 to 2040; cubic (Hermite) between fixed whole hours
 */
export function earthBarycentricPlaceM(instant: Instant): Vec3 {
  const [before, after, share] = hoursAbout(instant);
  const rest = 1 - share;
  const places = add(scale(rest * rest * (1 + 2 * share), before.placeM), scale(share * share * (1 + 2 * rest), after.placeM));
  const slopes = add(scale(rest * rest * share * GRID_S, before.velocityMS), scale(-share * share * rest * GRID_S, after.velocityMS));
  return add(places, slopes);
}
