import { type Vec3 } from '../relativity/vector';

/** An ellipsoid of revolution about the Earth's axis. */
export interface Ellipsoid {
  readonly semiMajorM: number;
  readonly inverseFlattening: number;
}

/** A place by geodetic latitude (north positive), longitude (east positive) and height above the ellipsoid. */
export interface Geodetic {
  readonly latitudeDeg: number;
  readonly longitudeDeg: number;
  readonly heightM: number;
}

/** Source: NIMA TR8350.2 (2000), Department of Defense World Geodetic System 1984, table 3.1; unchanged in NGA.STND.0036 (2014). */
export const WGS84: Ellipsoid = { semiMajorM: 6_378_137, inverseFlattening: 298.257_223_563 };

const RAD_PER_DEG = Math.PI / 180;

/** A point nearer to the equator's plane than this is taken as in it: squares of less would vanish below the smallest double. */
const PLANE_M = 1e-12;

/** Squared first eccentricity, e2 = f (2 - f). */
export function eccentricitySquared(ellipsoid: Ellipsoid): number {
  const flattening = 1 / ellipsoid.inverseFlattening;
  return flattening * (2 - flattening);
}

/**
 * Turns a geodetic place into Earth-fixed Cartesian coordinates.
 *
 * @param place latitude in [-90, 90] degrees, any longitude, ellipsoidal height above -6,000,000 m
 * @param ellipsoid WGS 84 unless another is given
 * @returns ITRS x (equator, prime meridian), y (equator, 90 degrees east), z (north), metres, good to 1e-8 m near the ground
 *
 * Source: NIMA TR8350.2 (2000), equation 4-14.
 */
export function geodeticToItrs(place: Geodetic, ellipsoid: Ellipsoid = WGS84): Vec3 {
  const e2 = eccentricitySquared(ellipsoid);
  const [sinLatitude, cosLatitude] = sineAndCosineDeg(place.latitudeDeg);
  const [sinLongitude, cosLongitude] = sineAndCosineDeg(place.longitudeDeg);
  const primeVerticalM = ellipsoid.semiMajorM / Math.sqrt(1 - e2 * sinLatitude * sinLatitude);
  const axisDistanceM = (primeVerticalM + place.heightM) * cosLatitude;
  return [axisDistanceM * cosLongitude, axisDistanceM * sinLongitude, ((1 - e2) * primeVerticalM + place.heightM) * sinLatitude];
}

/**
 * Turns Earth-fixed Cartesian coordinates into a geodetic place.
 *
 * @param itrsM ITRS x, y, z, metres, anywhere, the geocentre included
 * @param ellipsoid WGS 84 unless another is given
 * @returns latitude in [-90, 90], longitude in (-180, 180] degrees (0 on the axis), height in metres; back through `geodeticToItrs` it
 *   gives the same point to 1e-7 m
 *
 * Source: Vermeille 2011, An analytical method to transform geocentric into geodetic coordinates, Journal of Geodesy 85, 105.
 */
export function itrsToGeodetic(itrsM: Vec3, ellipsoid: Ellipsoid = WGS84): Geodetic {
  const [xM, yM, zM] = itrsM;
  const aM = ellipsoid.semiMajorM;
  const axisDistanceM = Math.hypot(xM, yM);
  const e2 = eccentricitySquared(ellipsoid);
  const e4 = e2 * e2;
  const longitudeDeg = longitudeOf(xM, yM);
  const p = (axisDistanceM / aM) ** 2;
  const q = (1 - e2) * (zM / aM) ** 2;

  if (Math.abs(zM) < PLANE_M && p <= e4) return nearestFromPlane(p, zM < 0, longitudeDeg, ellipsoid);

  const r = (p + q - e4) / 6;
  const u = vermeilleRoot(r, e4 * p * q);
  const v = Math.sqrt(u * u + e4 * q);
  const w = (e2 * (u + v - q)) / (2 * v);
  const k = (u + v) / (Math.sqrt(w * w + u + v) + w);
  const dM = (k * axisDistanceM) / (k + e2);
  const hypotenuseM = Math.hypot(dM, zM);
  return {
    latitudeDeg: (2 * Math.atan2(zM, dM + hypotenuseM)) / RAD_PER_DEG,
    longitudeDeg,
    heightM: ((k + e2 - 1) / k) * hypotenuseM,
  };
}

/** In (-180, 180], and 0 on the axis, where every longitude is as good. */
function longitudeOf(xM: number, yM: number): number {
  if (xM === 0 && yM === 0) return 0;
  const longitudeDeg = Math.atan2(yM, xM) / RAD_PER_DEG;
  return longitudeDeg === -180 ? 180 : longitudeDeg;
}

/** Vermeille's u: the real root outside the evolute of the meridian ellipse, the trigonometric one inside it. */
function vermeilleRoot(r: number, e4pq: number): number {
  const discriminant = 8 * r ** 3 + e4pq;
  const root = Math.sqrt(e4pq);
  if (discriminant > 0) {
    const cube = Math.cbrt((Math.sqrt(discriminant) + root) ** 2);
    return r + cube / 2 + (2 * r * r) / cube;
  }
  const angle = (2 / 3) * Math.atan2(root, Math.sqrt(-discriminant) + Math.sqrt(-8 * r ** 3));
  return -4 * r * Math.sin(angle) * Math.cos(Math.PI / 6 + angle);
}

/** In the equator's plane inside the evolute's cusps the nearest point lies off the equator: in the south below the plane, else north. */
function nearestFromPlane(p: number, south: boolean, longitudeDeg: number, ellipsoid: Ellipsoid): Geodetic {
  const e2 = eccentricitySquared(ellipsoid);
  const inside = Math.sqrt(e2 - p);
  const latitudeRad = 2 * Math.atan2(Math.sqrt(e2 * e2 - p), Math.sqrt(e2) * inside + Math.sqrt((1 - e2) * p));
  return {
    latitudeDeg: (south ? -latitudeRad : latitudeRad) / RAD_PER_DEG,
    longitudeDeg,
    heightM: -ellipsoid.semiMajorM * Math.sqrt(1 - e2) * (inside / Math.sqrt(e2)),
  };
}

/** Exact at whole quarter turns, so that a pole has no axis distance and the antimeridian no y. */
function sineAndCosineDeg(angleDeg: number): readonly [number, number] {
  const quarters = Math.round(angleDeg / 90);
  const restRad = (angleDeg - quarters * 90) * RAD_PER_DEG;
  const sine = Math.sin(restRad);
  const cosine = Math.cos(restRad);
  switch (((quarters % 4) + 4) % 4) {
    case 0:
      return [sine, cosine];
    case 1:
      return [cosine, -sine];
    case 2:
      return [-sine, -cosine];
    default:
      return [-cosine, sine];
  }
}
