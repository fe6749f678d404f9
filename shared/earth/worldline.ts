import { S_PER_DAY } from '../constants';
import { norm, subtract, type Vec3 } from '../relativity/vector';
import { type Worldline } from '../relativity/worldline';
import { MOST_POLE_RAD, MOST_UT1_CHANGE_S_PER_DAY } from './earth-orientation';
import { EARTH_ROTATION_RAD_S } from './earth-rotation-angle';
import { type EarthRotation } from './rotation';

/** A worldline that turns with the Earth. */
export interface FixedSiteWorldline extends Worldline {
  readonly itrsM: Vec3;
  readonly rotation: EarthRotation;
}

/** Precession and nutation move the axis by less than this, radians per second (50 arcseconds a year and the fortnightly terms: 2e-11). */
const MOST_AXIS_MOTION_RAD_S = 1e-10;

/** Coordinates of a few million metres and a dozen roundings: a place is good to this share of its radius. */
const ROUNDING = 4 * Number.EPSILON;

/**
 * The worldline of a site that stands on the ground.
 *
 * @param itrsM Earth-fixed x, y, z, metres
 * @param rotation the Earth's rotation
 * @returns places in GCRS axes, metres; the greatest speed is the rate of rotation times the distance from the axis, with what polar
 *   motion, irregular rotation and the axis's own motion can add
 */
export function fixedSiteWorldline(itrsM: Vec3, rotation: EarthRotation): FixedSiteWorldline {
  const radiusM = norm(itrsM);
  // Polar motion of 2 arcseconds on each axis brings a place nearer to or farther from the axis of rotation by no more than this.
  const mostAxisDistanceM = Math.hypot(itrsM[0], itrsM[1]) + 2 * MOST_POLE_RAD * radiusM;
  const place = new Float64Array(3);
  return {
    itrsM,
    rotation,
    mostRadiusM: radiusM * (1 + ROUNDING),
    mostSpeedMS: EARTH_ROTATION_RAD_S * (1 + MOST_UT1_CHANGE_S_PER_DAY / S_PER_DAY) * mostAxisDistanceM + MOST_AXIS_MOTION_RAD_S * radiusM,
    placeAt: ({ taiS, ps }) => {
      rotation.placeInto(itrsM[0], itrsM[1], itrsM[2], taiS, ps, place, 0);
      return [place[0] ?? 0, place[1] ?? 0, place[2] ?? 0];
    },
  };
}

/** Whether a worldline turns with the Earth, so that its Earth-fixed place is known. */
export function isFixedSite(worldline: Worldline): worldline is FixedSiteWorldline {
  return 'itrsM' in worldline && 'rotation' in worldline;
}

/**
 * Bounds of the distance between two worldlines at one and the same instant, whatever the instant.
 *
 * @returns metres: for two sites on one turning Earth the chord, less and plus the rounding of two places (2e-8 m); else 0 and the sum of the
 *   greatest radii
 */
export function separationBounds(a: Worldline, b: Worldline): { readonly leastM: number; readonly mostM: number } {
  const sumM = a.mostRadiusM + b.mostRadiusM;
  if (!isFixedSite(a) || !isFixedSite(b) || a.rotation !== b.rotation) return { leastM: 0, mostM: sumM };
  const chordM = norm(subtract(b.itrsM, a.itrsM));
  return { leastM: Math.max(0, chordM - ROUNDING * 2 * sumM), mostM: chordM + ROUNDING * 2 * sumM };
}
