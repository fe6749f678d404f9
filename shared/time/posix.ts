import { S_PER_DAY } from '../constants';
import { type Instant } from './instant';
import { utcDayAt, type LeapSecondTable } from './leap-seconds';

/**
 * POSIX seconds of an instant, whole: 86,400 for each UTC day before, and the second of the day; undefined before 1972.
 *
 * A leap second and the second after it have the same number, so it is given out and never taken in.
 * Source: IEEE Std 1003.1-2017, 4.16 "Seconds Since the Epoch".
 */
export function posixSecondsAt(instant: Instant, table: LeapSecondTable): number | undefined {
  const utc = utcDayAt(table, instant.taiS);
  return utc && utc.day * S_PER_DAY + utc.secondOfDay;
}
