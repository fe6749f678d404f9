import { add, apply, scale, type Vec3 } from '#shared/relativity/vector';
import { type Instant, PS_PER_S } from '#shared/time/instant';
import { BARYCENTRE_TO_SUN, type EarthTerms, ECLIPTIC_TO_ICRS, SUN_TO_EARTH, type TermsByPower } from './earth-terms';

/** The Earth's centre against the solar-system barycentre, ICRS axes. */
export interface EarthState {
  readonly placeM: Vec3;
  readonly velocityMS: Vec3;
}

/** Source: IAU 2012 Resolution B2. */
const M_PER_AU = 149_597_870_700;
const S_PER_JULIAN_YEAR = 365.25 * 86_400;
/** J2000.0 in seconds since 1970-01-01T00:00:00, both TT. */
const J2000_S = 946_728_000;
const TT_MINUS_TAI_S = 32.184;

/** A sum of terms, au, and its rate, au a year. */
function sumOf(byPower: TermsByPower, years: number): readonly [number, number] {
  let sumAu = 0;
  let rateAu = 0;
  byPower.forEach((terms, power) => {
    const factor = years ** power;
    const factorRate = power === 0 ? 0 : power * years ** (power - 1);
    for (const [amplitudeAu, phaseRad, rateRad] of terms) {
      const angleRad = phaseRad + rateRad * years;
      const cosine = Math.cos(angleRad);
      sumAu += amplitudeAu * factor * cosine;
      rateAu += amplitudeAu * (factorRate * cosine - factor * rateRad * Math.sin(angleRad));
    }
  });
  return [sumAu, rateAu];
}

function stateOf(terms: EarthTerms, years: number): EarthState {
  const [x, y, z] = [sumOf(terms[0], years), sumOf(terms[1], years), sumOf(terms[2], years)];
  return {
    placeM: scale(M_PER_AU, apply(ECLIPTIC_TO_ICRS, [x[0], y[0], z[0]])),
    velocityMS: scale(M_PER_AU / S_PER_JULIAN_YEAR, apply(ECLIPTIC_TO_ICRS, [x[1], y[1], z[1]])),
  };
}

/**
 * Place and velocity of the Earth's centre against the solar-system barycentre, summed from the series at one instant.
 *
 * @param instant any between 1900 and 2100; outside the error grows, to twice its size by 1800 and 2200
 * @returns ICRS axes, metres and m/s; velocity within 5 mm/s (1.4 mm/s rms) and place within 14 km (5 km rms) of the ephemeris DE405.
 *   TT stands for TDB, which is 2 ms at most: 50 m and 1e-5 m/s
 *
 * Source: VSOP2000, Moisson and Bretagnon 2001, Celestial Mechanics and Dynamical Astronomy 80, 205, as simplified for IAU SOFA; the
 * accuracy is that published with it.
 */
export function earthBarycentricState({ taiS, ps }: Instant): EarthState {
  // The large part is exact in whole seconds.
  const years = (taiS - J2000_S + (ps / PS_PER_S + TT_MINUS_TAI_S)) / S_PER_JULIAN_YEAR;
  const [earth, sun] = [stateOf(SUN_TO_EARTH, years), stateOf(BARYCENTRE_TO_SUN, years)];
  return { placeM: add(earth.placeM, sun.placeM), velocityMS: add(earth.velocityMS, sun.velocityMS) };
}
