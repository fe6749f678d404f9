import { apply, type Mat3, type Vec3 } from './vector';

const RAD_PER_DEG = Math.PI / 180;

/** A direction as two angles in degrees: right ascension and declination, or any other longitude and latitude. */
export interface SkyAngles {
  readonly longitudeDeg: number;
  readonly latitudeDeg: number;
}

/** The unit vector toward a direction, in the axes to which its longitude and latitude refer (ICRS for right ascension and declination). */
export function unitFromAngles(angles: SkyAngles): Vec3 {
  const longitude = angles.longitudeDeg * RAD_PER_DEG;
  const latitude = angles.latitudeDeg * RAD_PER_DEG;
  return [Math.cos(latitude) * Math.cos(longitude), Math.cos(latitude) * Math.sin(longitude), Math.sin(latitude)];
}

/** Longitude in [0, 360) and latitude in [-90, 90] of a vector of any length but 0, in degrees. */
export function anglesOf(a: Vec3): SkyAngles {
  const longitudeDeg = Math.atan2(a[1], a[0]) / RAD_PER_DEG;
  return {
    // An angle just below 0 would round to 360 itself.
    longitudeDeg: longitudeDeg < 0 ? (longitudeDeg + 360) % 360 : longitudeDeg,
    latitudeDeg: Math.atan2(a[2], Math.hypot(a[0], a[1])) / RAD_PER_DEG,
  };
}

/**
 * Rows: the galactic x, y and z axes in ICRS, from the pole at (192.85948, 27.12825) degrees and the galactic plane's ascending node on the
 * equator at galactic longitude 32.93192 degrees. Source: The Hipparcos and Tycho Catalogues, ESA SP-1200, vol. 1, sect. 1.5.3, eq. 1.5.11,
 * carried to the digits of a double from those three angles.
 */
const GALACTIC_AXES: Mat3 = [
  [-0.05487556041621537, -0.873437090234885, -0.4838350155487132],
  [0.49410942787558365, -0.4448296299600112, 0.7469822444972188],
  [-0.8676661490190047, -0.19807637343120152, 0.4559837761750669],
];

const ICRS_AXES: Mat3 = [
  [GALACTIC_AXES[0][0], GALACTIC_AXES[1][0], GALACTIC_AXES[2][0]],
  [GALACTIC_AXES[0][1], GALACTIC_AXES[1][1], GALACTIC_AXES[2][1]],
  [GALACTIC_AXES[0][2], GALACTIC_AXES[1][2], GALACTIC_AXES[2][2]],
];

/** A vector's components in ICRS axes turned into those in galactic axes. */
export function icrsToGalactic(a: Vec3): Vec3 {
  return apply(GALACTIC_AXES, a);
}

/** A vector's components in galactic axes turned into those in ICRS axes. */
export function galacticToIcrs(a: Vec3): Vec3 {
  return apply(ICRS_AXES, a);
}
