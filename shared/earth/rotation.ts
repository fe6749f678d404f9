import { type Instant, PS_PER_S } from '../time/instant';
import { type Mat3, type Vec3 } from '../relativity/vector';
import { type EarthOrientation } from './earth-orientation';
import { EARTH_ROTATION_RAD_S, earthRotationAngleRad } from './earth-rotation-angle';
import { celestialPole, ttCenturies } from './precession-nutation';

/** The rotation from Earth-fixed (ITRS) to geocentric inertial (GCRS) axes as a function of the instant, and of nothing else. */
export interface EarthRotation {
  readonly orientation: EarthOrientation;
  /** The matrix that takes ITRS components to GCRS ones; orthonormal to rounding. */
  readonly rotationAt: (instant: Instant) => Mat3;
  /**
   * Turns one Earth-fixed place into the inertial axes, without allocating.
   *
   * ITRS x, y, z in metres and the instant's two whole numbers go in; GCRS x, y, z in metres are written to out[offset] and the two
   * after it.
   */
  readonly placeInto: (
    itrsXM: number,
    itrsYM: number,
    itrsZM: number,
    taiS: number,
    ps: number,
    outM: Float64Array,
    offset: number,
  ) => void;
}

/** The slow part is computed at whole multiples of this many TAI seconds and linear in between. */
const GRID_S = 3600;

/** Hours kept before the oldest is dropped, about 700 days; dropping one costs time and never changes a result. */
const MOST_HOURS = 16_384;

const RAD_PER_UAS = Math.PI / 648_000e6;

/** The TIO locator s', microarcseconds per Julian century. Source: IERS Conventions 2010, equation 5.13. */
const TIO_LOCATOR_UAS_PER_CENTURY = -47;

/** The slow angles at the start of one hour and their change until its end, radians. */
interface Hour {
  readonly xRad: number;
  readonly xChangeRad: number;
  readonly yRad: number;
  readonly yChangeRad: number;
  readonly turnRad: number;
  readonly turnChangeRad: number;
  readonly poleXRad: number;
  readonly poleXChangeRad: number;
  readonly poleYRad: number;
  readonly poleYChangeRad: number;
}

/** All that the grid interpolates, at one whole TAI second. R3(s) R3(-ERA) R3(-s') turn about one axis: by ERA - s + s' in all. */
function slowAngles(taiS: number, orientation: EarthOrientation) {
  const t = ttCenturies(taiS);
  const pole = celestialPole(t);
  const beyondRotationRad = TIO_LOCATOR_UAS_PER_CENTURY * t * RAD_PER_UAS - pole.locatorRad;
  return { xRad: pole.xRad, yRad: pole.yRad, beyondRotationRad, ...orientation.valuesAt(taiS) };
}

function hourFrom(taiS: number, orientation: EarthOrientation): Hour {
  const start = slowAngles(taiS, orientation);
  const end = slowAngles(taiS + GRID_S, orientation);
  const ut1S = GRID_S + (end.ut1MinusTaiS - start.ut1MinusTaiS);
  return {
    xRad: start.xRad,
    xChangeRad: end.xRad - start.xRad,
    yRad: start.yRad,
    yChangeRad: end.yRad - start.yRad,
    turnRad: earthRotationAngleRad(taiS, start.ut1MinusTaiS) + start.beyondRotationRad,
    turnChangeRad: EARTH_ROTATION_RAD_S * ut1S + (end.beyondRotationRad - start.beyondRotationRad),
    poleXRad: start.poleXRad,
    poleXChangeRad: end.poleXRad - start.poleXRad,
    poleYRad: start.poleYRad,
    poleYChangeRad: end.poleYRad - start.poleYRad,
  };
}

/** Hours by their number since 1970 (TAI), the latest one at hand, the oldest dropped beyond the limit. */
function hourStore(orientation: EarthOrientation): (index: number) => Hour {
  const hours = new Map<number, Hour>();
  let latest = { index: 0, hour: hourFrom(0, orientation) };
  return (index) => {
    if (index === latest.index) return latest.hour;
    let hour = hours.get(index);
    if (hour === undefined) {
      hour = hourFrom(index * GRID_S, orientation);
      if (hours.size >= MOST_HOURS) {
        const [oldest] = hours.keys();
        if (oldest !== undefined) hours.delete(oldest);
      }
      hours.set(index, hour);
    }
    latest = { index, hour };
    return hour;
  };
}

/**
 * Makes the Earth's rotation from an orientation: polar motion, Earth rotation angle, precession and nutation.
 *
 * @param orientation UT1 - TAI and the pole
 * @returns the rotation: within 2 mas of the full IAU 2006/2000A model with the same orientation between 1980 and 2050, distances
 *   between places within 1 s of each other within 1e-5 m of it. The slow angles are linear between fixed whole hours of TAI (which
 *   adds 0.02 mas), so that a result depends on the instant alone and has no step anywhere
 *
 * Source: IERS Conventions 2010, equations 5.1 to 5.10 (the transformation based on the celestial intermediate origin).
 */
export function earthRotation(orientation: EarthOrientation): EarthRotation {
  const hourAt = hourStore(orientation);

  const placeInto: EarthRotation['placeInto'] = (itrsXM, itrsYM, itrsZM, taiS, ps, outM, offset) => {
    const index = Math.floor(taiS / GRID_S);
    const hour = hourAt(index);
    const share = (taiS - index * GRID_S + ps / PS_PER_S) / GRID_S;

    // Polar motion R2(xp) R1(yp). Angles below 1e-5, so that two terms of sine and cosine are exact to rounding.
    const py = hour.poleYRad + share * hour.poleYChangeRad;
    const px = hour.poleXRad + share * hour.poleXChangeRad;
    const sinPy = py - (py * py * py) / 6;
    const cosPy = 1 - (py * py) / 2;
    const sinPx = px - (px * px * px) / 6;
    const cosPx = 1 - (px * px) / 2;
    const uY = cosPy * itrsYM + sinPy * itrsZM;
    const uZ = cosPy * itrsZM - sinPy * itrsYM;
    const uX = cosPx * itrsXM - sinPx * uZ;
    const vZ = sinPx * itrsXM + cosPx * uZ;

    const turn = hour.turnRad + share * hour.turnChangeRad;
    const sinTurn = Math.sin(turn);
    const cosTurn = Math.cos(turn);
    const vX = cosTurn * uX - sinTurn * uY;
    const vY = sinTurn * uX + cosTurn * uY;

    // The intermediate pole's tilt: the shortest rotation from z to (X, Y, Z).
    const x = hour.xRad + share * hour.xChangeRad;
    const y = hour.yRad + share * hour.yChangeRad;
    const z = Math.sqrt(1 - x * x - y * y);
    const along = x * vX + y * vY;
    const bent = vZ - along / (1 + z);
    outM[offset] = vX + x * bent;
    outM[offset + 1] = vY + y * bent;
    outM[offset + 2] = z * vZ - along;
  };

  const rotationAt = ({ taiS, ps }: Instant): Mat3 => {
    const columns = new Float64Array(9);
    placeInto(1, 0, 0, taiS, ps, columns, 0);
    placeInto(0, 1, 0, taiS, ps, columns, 3);
    placeInto(0, 0, 1, taiS, ps, columns, 6);
    const entry = (row: number, column: number): number => columns[3 * column + row] ?? 0;
    const rowOf = (row: number): Vec3 => [entry(row, 0), entry(row, 1), entry(row, 2)];
    return [rowOf(0), rowOf(1), rowOf(2)];
  };

  return { orientation, rotationAt, placeInto };
}
