import { type Problem } from '../outcome';

/** How far the Earth has turned against atomic time, and where its axis meets the ground. */
export interface OrientationValues {
  /** UT1 - TAI, seconds; continuous across leap seconds, about -37 in the 2020s. */
  readonly ut1MinusTaiS: number;
  /** Polar motion x, radians, positive towards the prime meridian. */
  readonly poleXRad: number;
  /** Polar motion y, radians, positive towards 90 degrees west. */
  readonly poleYRad: number;
}

/** The Earth's orientation parameters as a function of TAI seconds since 1970-01-01T00:00:00 TAI; the same answer at every asking. */
export interface EarthOrientation {
  readonly valuesAt: (taiS: number) => OrientationValues;
  /** What is doubtful about the values at that time, or undefined where nothing is. */
  readonly warningAt: (taiS: number) => Problem | undefined;
}

/** No table may hold a pole farther from the origin than this on either axis, radians (2 arcseconds; the largest seen is 0.6). */
export const MOST_POLE_RAD = (2 * Math.PI) / 648_000;

/** No table may let UT1 - TAI change by more than this from one day to the next, seconds (the largest seen is 0.005); a leap second is 1. */
export const MOST_UT1_CHANGE_S_PER_DAY = 0.05;

/**
 * The orientation where no table is loaded: UT1 - TAI as given and constant, the pole at the origin.
 *
 * @param ut1MinusTaiS seconds; minus (TAI - UTC) at the start of a run keeps UT1 within 0.9 s of the truth there
 * @returns an orientation that warns (`orientation-none`) at every time: all sites turn together by less than 14 arcseconds, which no
 *   distance feels but directions do
 */
export function constantOrientation(ut1MinusTaiS: number): EarthOrientation {
  const values: OrientationValues = { ut1MinusTaiS, poleXRad: 0, poleYRad: 0 };
  const warning: Problem = {
    code: 'orientation-none',
    where: 'earth orientation',
    text: 'no Earth-orientation table is loaded: directions of baselines are up to 14 arcseconds off, load an IERS finals2000A file',
  };
  return { valuesAt: () => values, warningAt: () => warning };
}
