import { type SiteEntry } from './network';
import { type ElapsedPs } from './time-text';

type Place = readonly [number, number, number];

const LIGHT_M_S = 299_792_458;
const EARTH_TURN_RAD_S = 7.292115e-5;
const DEG = Math.PI / 180;

/** Earth-fixed place on WGS 84 (a = 6,378,137 m, 1/f = 298.257223563). */
export function placeOf({ position: { geodetic } }: SiteEntry): Place {
  const [latitude, longitude] = [geodetic.latitude_deg * DEG, geodetic.longitude_deg * DEG];
  const e2 = (2 - 1 / 298.257223563) / 298.257223563;
  const n = 6_378_137 / Math.sqrt(1 - e2 * Math.sin(latitude) ** 2);
  const axisM = (n + geodetic.height_m) * Math.cos(latitude);
  return [axisM * Math.cos(longitude), axisM * Math.sin(longitude), (n * (1 - e2) + geodetic.height_m) * Math.sin(latitude)];
}

/** A plane front that passes the geocentre at `passes`, from a direction given in Earth-fixed axes at that instant. */
export interface Wave {
  readonly passes: ElapsedPs;
  readonly fromLongitudeDeg: number;
  readonly fromLatitudeDeg: number;
  readonly speedC: number;
}

/** When the front reaches a site that turns with the Earth meanwhile, to the picosecond. */
export function arrival(wave: Wave, site: SiteEntry): ElapsedPs {
  const [x, y, z] = placeOf(site);
  const [longitude, latitude] = [wave.fromLongitudeDeg * DEG, wave.fromLatitudeDeg * DEG];
  let afterS = 0;
  for (let round = 0; round < 4; round++) {
    const turned = longitude - EARTH_TURN_RAD_S * afterS;
    const towardM = Math.cos(latitude) * (Math.cos(turned) * x + Math.sin(turned) * y) + Math.sin(latitude) * z;
    afterS = -towardM / (wave.speedC * LIGHT_M_S);
  }
  return wave.passes + BigInt(Math.round(afterS * 1e12));
}

/** Light-time between two sites on one Earth, ps. */
export function lightTimePs(a: SiteEntry, b: SiteEntry): bigint {
  const [from, to] = [placeOf(a), placeOf(b)];
  return BigInt(Math.round((Math.hypot(to[0] - from[0], to[1] - from[1], to[2] - from[2]) / LIGHT_M_S) * 1e12));
}
