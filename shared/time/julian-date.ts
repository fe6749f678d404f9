import { S_PER_DAY, JD_OF_1970 } from '../constants';
import { PS_PER_S } from './instant';
import { type DayTime } from './scales';

/** A Julian date in two parts, so that their sum never has to be formed: that of the midnight before, and the fraction of the day. */
export interface JulianDate {
  readonly midnightJd: number;
  readonly fractionOfDay: number;
}

/**
 * Julian date of a place on a scale with days of 86,400 s (any but a UTC day with a leap second).
 *
 * The fraction is good to 1e-16 day (10 ps), the midnight exact. Source: IAU 1997 Resolution B1.
 */
export function julianDateOf(time: DayTime): JulianDate {
  return { midnightJd: time.day + JD_OF_1970, fractionOfDay: (time.secondOfDay + time.ps / PS_PER_S) / S_PER_DAY };
}
