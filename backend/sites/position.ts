import { type Warning } from '#shared/contract/setup-leaves';
import { type PositionGiven, type SitePosition } from '#shared/contract/site-routes';
import { geodeticToItrs, itrsToGeodetic } from '#shared/earth/ellipsoid';
import { norm, subtract, type Vec3 } from '#shared/relativity/vector';
import { unusable } from '../api/refusal';

/** Between these heights a site can stand or float: below the deepest sea floor and above the highest balloon nothing does. */
const LEAST_HEIGHT_M = -12_000;
const MOST_HEIGHT_M = 60_000;
/** Between these lie the places that people build at: mines and the floors of most seas, and the highest mountains. */
const LEAST_USUAL_HEIGHT_M = -6_000;
const MOST_USUAL_HEIGHT_M = 7_000;
/** A site that moves farther than this between two states of it is more likely mistyped. */
const FAR_M = 10_000;

/** A place in both forms, and what is doubtful about it. */
export interface Placed {
  readonly position: SitePosition;
  readonly warnings: readonly Warning[];
}

/**
 * Turns a stated place into both forms.
 *
 * @param given geodetic (WGS 84) or Earth-fixed
 * @param path of the field, for what goes wrong
 * @param former Earth-fixed place of the site so far, metres
 * @returns the place, with warnings where it can be right and seldom is: latitude and longitude that would be a place the other way round too,
 *   unusual heights, a site that moved far
 * @throws Refusal 400 for a height at which nothing can stand; kilometres in place of metres end there
 */
export function placeOf(given: PositionGiven, path: string, former?: Vec3): Placed {
  const { geodetic, itrsM } = given;
  if (geodetic) {
    const { heightM, latitudeDeg, longitudeDeg } = geodetic;
    if (!isHeight(heightM))
      throw unusable({
        where: `${path}.geodetic.heightM`,
        text: `is ${heightM}; it must be metres above the WGS 84 ellipsoid, from ${LEAST_HEIGHT_M} to ${MOST_HEIGHT_M}`,
      });
    const placed = geodeticToItrs(geodetic);
    const swapped =
      former === undefined && Math.abs(longitudeDeg) <= 90
        ? [
            {
              where: `${path}.geodetic`,
              text: `latitude ${latitudeDeg} and longitude ${longitudeDeg} would be a place the other way round too: see on a map that the site lies where it should`,
            },
          ]
        : [];
    const warnings = [...swapped, ...unusual(heightM, `${path}.geodetic.heightM`), ...moved(placed, former, path, geodetic)];
    return { position: { stated: 'geodetic', geodetic, itrsM: [...placed] }, warnings };
  }
  if (!itrsM) throw new Error('a place was stated in neither form');
  const back = itrsToGeodetic(itrsM);
  if (!isHeight(back.heightM)) {
    const inKilometres = isHeight(itrsToGeodetic([itrsM[0] * 1e3, itrsM[1] * 1e3, itrsM[2] * 1e3]).heightM);
    throw unusable({
      where: `${path}.itrsM`,
      text: `lies ${Math.round(back.heightM)} m above the WGS 84 ellipsoid; it must be Earth-fixed x, y, z in metres, with a height from ${LEAST_HEIGHT_M} to ${MOST_HEIGHT_M} m${inKilometres ? ' (these look like kilometres: give them times 1000)' : ''}`,
    });
  }
  return {
    position: { stated: 'itrs', geodetic: back, itrsM },
    warnings: [...unusual(back.heightM, `${path}.itrsM`), ...moved(itrsM, former, path)],
  };
}

const isHeight = (heightM: number): boolean => heightM >= LEAST_HEIGHT_M && heightM <= MOST_HEIGHT_M;

function unusual(heightM: number, where: string): Warning[] {
  if (heightM >= LEAST_USUAL_HEIGHT_M && heightM <= MOST_USUAL_HEIGHT_M) return [];
  return [{ where, text: `the site lies ${Math.round(heightM)} m above the WGS 84 ellipsoid, where few do: see that these are metres` }];
}

function moved(
  placed: Vec3,
  former: Vec3 | undefined,
  path: string,
  stated?: { readonly latitudeDeg: number; readonly longitudeDeg: number; readonly heightM: number },
): Warning[] {
  if (!former) return [];
  const distanceM = norm(subtract(placed, former));
  if (distanceM < FAR_M) return [];
  const text = `the site moves by ${(distanceM / 1000).toFixed(0)} km`;
  if (stated && Math.abs(stated.longitudeDeg) <= 90) {
    const other = geodeticToItrs({ latitudeDeg: stated.longitudeDeg, longitudeDeg: stated.latitudeDeg, heightM: stated.heightM });
    if (norm(subtract(other, former)) < FAR_M)
      return [
        {
          where: `${path}.geodetic`,
          text: `${text}; the other way round, latitude and longitude are where it was: they are likely swapped`,
        },
      ];
  }
  return [{ where: path, text: `${text} from where it was` }];
}
