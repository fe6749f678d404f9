import { S_PER_DAY } from '../constants';
import { type Mat3 } from '../relativity/vector';
import { LOCATOR_POLYNOMIAL_UAS, LOCATOR_TERMS, type LocatorTerm, NUTATION_TERMS, type NutationTerm } from './nutation-terms';

/** Where the celestial intermediate pole and origin stand: the pole's X and Y in GCRS axes and the CIO locator s, radians. */
export interface CelestialPole {
  readonly xRad: number;
  readonly yRad: number;
  readonly locatorRad: number;
}

const RAD_PER_ARCSEC = Math.PI / 648_000;
const RAD_PER_UAS = RAD_PER_ARCSEC * 1e-6;

/** TT of J2000.0 (2000-01-01T12:00:00 TT) in seconds since 1970-01-01T00:00:00 TT. */
const J2000_S = 946_728_000;
const S_PER_JULIAN_CENTURY = 36_525 * S_PER_DAY;
const TT_MINUS_TAI_S = 32.184;

/**
 * Julian centuries of TT since J2000.0.
 *
 * @param taiS TAI seconds since 1970-01-01T00:00:00 TAI
 */
export function ttCenturies(taiS: number): number {
  return (taiS - J2000_S + TT_MINUS_TAI_S) / S_PER_JULIAN_CENTURY;
}

/** Coefficients of t^0, t^1, ... with t in Julian centuries. */
function polynomial(t: number, coefficients: readonly number[]): number {
  return coefficients.reduceRight((sum, coefficient) => sum * t + coefficient, 0);
}

// Delaunay arguments, arcseconds: IERS Conventions 2010, equation 5.43.
const MOON_ANOMALY = [485_868.249036, 1_717_915_923.2178, 31.8792, 0.051635, -0.0002447];
const SUN_ANOMALY = [1_287_104.793048, 129_596_581.0481, -0.5532, 0.000136, -0.00001149];
const MOON_LATITUDE_ARGUMENT = [335_779.526232, 1_739_527_262.8478, -12.7512, -0.001037, 0.00000417];
const MOON_ELONGATION = [1_072_260.703692, 1_602_961_601.209, -6.3706, 0.006593, -0.00003169];
const MOON_NODE = [450_160.398036, -6_962_890.5431, 7.4722, 0.007702, -0.00005939];

/** The Delaunay arguments of one moment, radians. */
interface DelaunayArguments {
  readonly moonAnomaly: number;
  readonly sunAnomaly: number;
  readonly latitudeArgument: number;
  readonly elongation: number;
  readonly node: number;
}

function delaunayArguments(t: number): DelaunayArguments {
  const angleRad = (coefficients: readonly number[]): number => (polynomial(t, coefficients) % 1_296_000) * RAD_PER_ARCSEC;
  return {
    moonAnomaly: angleRad(MOON_ANOMALY),
    sunAnomaly: angleRad(SUN_ANOMALY),
    latitudeArgument: angleRad(MOON_LATITUDE_ARGUMENT),
    elongation: angleRad(MOON_ELONGATION),
    node: angleRad(MOON_NODE),
  };
}

function phaseRad(term: NutationTerm | LocatorTerm, at: DelaunayArguments): number {
  return term[0] * at.moonAnomaly + term[1] * at.sunAnomaly + term[2] * at.latitudeArgument + term[3] * at.elongation + term[4] * at.node;
}

// Fukushima-Williams angles of the IAU 2006 precession, arcseconds: Hilton et al. 2006, Celestial Mechanics and Dynamical Astronomy
// 94, 351; Capitaine, Wallace and Chapront 2003, Astronomy and Astrophysics 412, 567. They hold the frame bias.
const GAMMA_BAR = [-0.052928, 10.556378, 0.4932044, -0.00031238, -0.000002788, 0.000000026];
const PHI_BAR = [84_381.412819, -46.811016, 0.0511268, 0.00053289, -0.00000044, -0.0000000176];
const PSI_BAR = [-0.041775, 5038.481484, 1.5584175, -0.00018522, -0.000026452, -0.0000000148];
const OBLIQUITY = [84_381.406, -46.836769, -0.0001831, 0.0020034, -0.000000576, -0.0000000434];

// What the planets add to nutation in the years around 2000, as a constant: Luzum 2001, as used with precession and bias apart.
const PLANETARY_LONGITUDE_UAS = -135;
const PLANETARY_OBLIQUITY_UAS = 388;

// The nutation of 2000 brought onto the precession of 2006: Wallace and Capitaine 2006, Astronomy and Astrophysics 459, 981, equation 5.
const ADJUSTED_LONGITUDE = 4.697e-7;
const ADJUSTED_FLATTENING_PER_CENTURY = -2.7774e-6;

/** Nutation in longitude and obliquity, radians, adjusted to the IAU 2006 precession. */
function nutation(t: number, at: DelaunayArguments): { readonly longitudeRad: number; readonly obliquityRad: number } {
  let longitudeUas = PLANETARY_LONGITUDE_UAS;
  let obliquityUas = PLANETARY_OBLIQUITY_UAS;
  for (const term of NUTATION_TERMS) {
    const [, , , , , sine, sineRate, cosine, obliquityCosine, obliquityCosineRate, obliquitySine] = term;
    const phase = phaseRad(term, at);
    const sin = Math.sin(phase);
    const cos = Math.cos(phase);
    longitudeUas += ((sine + sineRate * t) * sin + cosine * cos) / 10;
    obliquityUas += ((obliquityCosine + obliquityCosineRate * t) * cos + obliquitySine * sin) / 10;
  }
  const flattening = 1 + ADJUSTED_FLATTENING_PER_CENTURY * t;
  return {
    longitudeRad: longitudeUas * RAD_PER_UAS * (flattening + ADJUSTED_LONGITUDE),
    obliquityRad: obliquityUas * RAD_PER_UAS * flattening,
  };
}

/** s + XY/2 in microarcseconds: IERS Conventions 2010, table 5.2d, what is left out is below 4 uas. */
function locatorSeriesUas(t: number, at: DelaunayArguments): number {
  return LOCATOR_TERMS.reduce(
    (sum, term) => {
      const [, , , , , power, sine, cosine] = term;
      const phase = phaseRad(term, at);
      return sum + t ** power * (sine * Math.sin(phase) + cosine * Math.cos(phase));
    },
    polynomial(t, LOCATOR_POLYNOMIAL_UAS),
  );
}

/**
 * Direction of the celestial intermediate pole and place of the celestial intermediate origin, by the IAU 2006 precession and the 77
 * largest luni-solar terms of the IAU 2000 nutation.
 *
 * @param t Julian centuries of TT since J2000.0, see `ttCenturies`; meant for 1900 to 2100
 * @returns X, Y and s, radians, in GCRS axes; X and Y within 1.5 mas of the full IAU 2006/2000A model from 1980 to 2050 (the observed
 *   celestial pole offsets, below 1 mas, are in neither)
 *
 * Source: Wallace and Capitaine 2006, Astronomy and Astrophysics 459, 981 (X and Y from the Fukushima-Williams angles).
 */
export function celestialPole(t: number): CelestialPole {
  const at = delaunayArguments(t);
  const nutationNow = nutation(t, at);
  const gamma = polynomial(t, GAMMA_BAR) * RAD_PER_ARCSEC;
  const phi = polynomial(t, PHI_BAR) * RAD_PER_ARCSEC;
  const psi = polynomial(t, PSI_BAR) * RAD_PER_ARCSEC + nutationNow.longitudeRad;
  const obliquity = polynomial(t, OBLIQUITY) * RAD_PER_ARCSEC + nutationNow.obliquityRad;

  const towardsNode = Math.sin(obliquity) * Math.sin(psi);
  const acrossNode = Math.sin(obliquity) * Math.cos(psi) * Math.cos(phi) - Math.cos(obliquity) * Math.sin(phi);
  const xRad = towardsNode * Math.cos(gamma) - acrossNode * Math.sin(gamma);
  const yRad = towardsNode * Math.sin(gamma) + acrossNode * Math.cos(gamma);
  return { xRad, yRad, locatorRad: locatorSeriesUas(t, at) * RAD_PER_UAS - (xRad * yRad) / 2 };
}

/**
 * The rotation that takes GCRS components to celestial intermediate ones (pole along z, intermediate origin along x).
 *
 * @param pole X, Y and s, radians
 * @returns orthonormal to rounding: Z is the root of 1 - X^2 - Y^2, not a series
 *
 * Source: IERS Conventions 2010, equations 5.6 and 5.10 (transposed).
 */
export function gcrsToIntermediate(pole: CelestialPole): Mat3 {
  const { xRad: x, yRad: y } = pole;
  const z = Math.sqrt(1 - x * x - y * y);
  const a = 1 / (1 + z);
  const sin = Math.sin(pole.locatorRad);
  const cos = Math.cos(pole.locatorRad);
  const first = [1 - a * x * x, -a * x * y, -x] as const;
  const second = [-a * x * y, 1 - a * y * y, -y] as const;
  return [
    [cos * first[0] - sin * second[0], cos * first[1] - sin * second[1], cos * first[2] - sin * second[2]],
    [sin * first[0] + cos * second[0], sin * first[1] + cos * second[1], sin * first[2] + cos * second[2]],
    [x, y, z],
  ];
}
