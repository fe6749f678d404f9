import { geoCircle, geoGraticule, geoPath, geoProjection, type GeoProjection } from 'd3';
import { anglesOf } from '#shared/relativity/direction';
import { ringOf } from '#shared/relativity/plane-wave';
import { opposite, type Vec3 } from '#shared/relativity/vector';

/** A direction on the map, px. */
export interface SkyMark {
  readonly x: number;
  readonly y: number;
}

/** The whole sky with the direction of a baseline, and with the ring of directions from which one plane wave can have made both events. */
export interface SkyPicture {
  readonly outline: string;
  readonly graticule: string;
  readonly toward: SkyMark;
  readonly away: SkyMark;
  /** Undefined where no plane wave at the speed of light can have made both. */
  readonly ring: { readonly band: string; readonly middle: string } | undefined;
}

export interface SkyGiven {
  readonly widthPx: number;
  readonly heightPx: number;
  /** Unit vector from the earlier event's place to the later's, GCRS axes. */
  readonly toward: Vec3;
  readonly dtS: number;
  readonly distanceM: number;
  /** As many standard errors as make a decision. */
  readonly errorDtS: number;
  readonly errorDistanceM: number;
}

const DEG_PER_RAD = 180 / Math.PI;
const GRATICULE_DEG = 30;

/**
 * Longitude and latitude to the Hammer map, equal in area: the azimuthal one of half the longitude, twice as wide.
 *
 * @remarks source: E. Hammer 1892, Petermanns Geographische Mitteilungen 38, 85
 */
export function hammerRaw(lambdaRad: number, phiRad: number): [number, number] {
  const cosPhi = Math.cos(phiRad);
  const k = Math.sqrt(2 / (1 + cosPhi * Math.cos(lambdaRad / 2)));
  return [2 * k * cosPhi * Math.sin(lambdaRad / 2), k * Math.sin(phiRad)];
}

/** The sky on a Hammer map, equatorial, right ascension 12 h in the middle, east to the left as it is seen from inside. */
export function skyPicture(given: SkyGiven): SkyPicture {
  const { widthPx, heightPx, toward } = given;
  const projection = geoProjection(hammerRaw)
    .rotate([180, 0])
    .reflectX(true)
    .precision(0.2)
    .fitExtent([[2, 2], [widthPx - 2, heightPx - 2]], { type: 'Sphere' }); // prettier-ignore
  const path = geoPath(projection).digits(1);
  return {
    outline: path({ type: 'Sphere' }) ?? '',
    graticule: path(geoGraticule().step([GRATICULE_DEG, GRATICULE_DEG])()) ?? '',
    toward: markOf(projection, toward),
    away: markOf(projection, opposite(toward)),
    ring: ringPaths(given, path),
  };
}

function ringPaths({ toward, dtS, distanceM, errorDtS, errorDistanceM }: SkyGiven, path: ReturnType<typeof geoPath>): SkyPicture['ring'] {
  const ring = ringOf(dtS, distanceM, errorDtS, errorDistanceM);
  if (!ring.ok) return undefined;
  const half = ring.value.halfAngleRad * DEG_PER_RAD;
  // Near the baseline itself the first order of the error says nothing: the band is cut at a quarter of the sky.
  const wide = Math.min(45, ring.value.sigmaRad * DEG_PER_RAD);
  const circle = (deg: number) => geoCircle().center(lonLat(toward)).radius(deg).precision(2)();
  const [outer] = circle(Math.min(179.9, half + wide)).coordinates;
  const [inner] = circle(Math.max(0.1, half - wide)).coordinates;
  if (!outer || !inner) return undefined;
  return {
    band: path({ type: 'Polygon', coordinates: [outer, [...inner].reverse()] }) ?? '',
    middle: path({ type: 'LineString', coordinates: circle(half).coordinates[0] ?? [] }) ?? '',
  };
}

const lonLat = (direction: Vec3): [number, number] => {
  const { longitudeDeg, latitudeDeg } = anglesOf(direction);
  return [longitudeDeg > 180 ? longitudeDeg - 360 : longitudeDeg, latitudeDeg];
};

function markOf(projection: GeoProjection, direction: Vec3): SkyMark {
  const [x, y] = projection(lonLat(direction)) ?? [0, 0];
  return { x: Math.round(x * 10) / 10, y: Math.round(y * 10) / 10 };
}
