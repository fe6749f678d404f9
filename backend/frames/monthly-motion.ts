import { add, cross, dot, norm, scale, subtract, type Vec3 } from '#shared/relativity/vector';

/** Position in au and velocity in au a day, mean equator and equinox of J2000. */
export interface State {
  readonly au: Vec3;
  readonly auPerDay: Vec3;
}

/** One term A cos(phase + rate T): radians or au, radians, radians in a Julian millennium. */
type Term = readonly [amplitude: number, phaseRad: number, rateRadPerMillennium: number];

// What the ephemeris package keeps of the Earth's monthly motion: the largest of some dozen terms, and none of latitude.
// Source: Bretagnon and Francou 1988, Astronomy and Astrophysics 202, 309 (VSOP87D, Earth); the terms are those of astronomy-engine 2.1.19.
const KEPT_LONGITUDE: readonly Term[] = [[0.00003135899, 3.62767041756, 77_713.7714681205]];
const KEPT_RADIUS: readonly Term[] = [
  [0.0000308372, 5.19846674381, 77_713.7714681205],
  [0.00000085831, 1.27079125277, 161_000.6857376741],
  [0.00000057056, 2.01374292245, 83_996.84731811189],
  [0.00000055736, 5.2415979917, 71_430.69561812909],
];

/** Mass of the Earth over that of the Moon. Source: IAU 2009 system of constants (81.300568), as the package has it. */
const EARTH_TO_MOON = 81.30056;
const DAYS_PER_MILLENNIUM = 365_250;

/** Obliquity of the ecliptic at J2000, arcseconds. Source: IAU 2006 precession, Hilton et al. 2006. */
const OBLIQUITY_RAD = (84_381.406 * Math.PI) / 648_000;
const ECLIPTIC_NORTH: Vec3 = [0, -Math.sin(OBLIQUITY_RAD), Math.cos(OBLIQUITY_RAD)];

/** A sum of terms and its change in a day. */
function sumOf(terms: readonly Term[], millennia: number): readonly [number, number] {
  return terms.reduce<readonly [number, number]>(
    ([sum, rate], [amplitude, phaseRad, rateRad]) => {
      const angle = phaseRad + rateRad * millennia;
      return [sum + amplitude * Math.cos(angle), rate - (amplitude * rateRad * Math.sin(angle)) / DAYS_PER_MILLENNIUM];
    },
    [0, 0],
  );
}

/** The monthly motion that the package's Earth holds, as a displacement along and across the line from the Sun in the ecliptic. */
function keptMotion(ttDays: number, heliocentric: State): State {
  const millennia = ttDays / DAYS_PER_MILLENNIUM;
  const radiusAu = norm(heliocentric.au);
  const out = scale(1 / radiusAu, heliocentric.au);
  const ahead = cross(ECLIPTIC_NORTH, out);
  const outAuPerDay = dot(heliocentric.auPerDay, out);
  const turnRadPerDay = dot(heliocentric.auPerDay, ahead) / radiusAu;
  const [longitudeRad, longitudeRate] = sumOf(KEPT_LONGITUDE, millennia);
  const [radialAu, radialRate] = sumOf(KEPT_RADIUS, millennia);
  const acrossAu = radiusAu * longitudeRad;
  return {
    au: add(scale(radialAu, out), scale(acrossAu, ahead)),
    auPerDay: add(
      scale(radialRate - acrossAu * turnRadPerDay, out),
      scale(radialAu * turnRadPerDay + radiusAu * longitudeRate + outAuPerDay * longitudeRad, ahead),
    ),
  };
}

/**
 * What must be added to the package's Earth so that its monthly motion about the common centre of mass with the Moon is whole.
 *
 * @param ttDays TT days since J2000.0
 * @param heliocentric the package's Earth against the Sun
 * @param moon the package's Moon against the Earth
 * @returns position, au, and velocity, au a day (some 1.5 m/s): without it the Earth's velocity is up to 1.9 m/s off, with it 0.8 m/s
 */
export function missingMonthlyMotion(ttDays: number, heliocentric: State, moon: State): State {
  const kept = keptMotion(ttDays, heliocentric);
  const share = -1 / (1 + EARTH_TO_MOON);
  return {
    au: subtract(scale(share, moon.au), kept.au),
    auPerDay: subtract(scale(share, moon.auPerDay), kept.auPerDay),
  };
}
