import { S_PER_DAY, TAI_MINUS_GPS_S, TT_MINUS_TAI_PS } from '../constants';
import { problemOf, valueOf, type Outcome } from '../outcome';
import { civilFromDays, daysFromCivil, isCivilDate, type CivilDate } from './calendar';
import { instantOf, PS_PER_S, type Instant } from './instant';
import { expiryWarnings, secondsInUtcDay, taiMinusUtcOnDay, utcDayAt, type LeapSecondTable } from './leap-seconds';

/** The time scales that a log may be written in. GPS and TT run beside TAI at a fixed distance, UTC by whole leap seconds. */
export type Scale = 'UTC' | 'TAI' | 'GPS' | 'TT';

/** All of {@link Scale}, in the order of a list to choose from. */
export const SCALES: readonly Scale[] = ['UTC', 'TAI', 'GPS', 'TT'];

/** A place on a scale: days since 1970-01-01 of that scale, whole seconds within the day, picoseconds within the second. */
export interface DayTime {
  readonly day: number;
  /** 0 to 86,399; 86,400 in a leap second of UTC. */
  readonly secondOfDay: number;
  readonly ps: number;
}

/** Date and time of day as people write them; `second` is 60 in a leap second, `ps` the picoseconds within the second. */
export interface CivilTime extends CivilDate {
  readonly hour: number;
  readonly minute: number;
  readonly second: number;
  readonly ps: number;
}

/** Why date and time of day name no instant. */
export type CivilFault = 'date' | 'time-of-day' | 'no-leap-second' | 'before-1972';

const SCALE_MINUS_TAI_PS = { TAI: 0, GPS: -TAI_MINUS_GPS_S * PS_PER_S, TT: TT_MINUS_TAI_PS } as const;

/** The instant at which a day (days since 1970-01-01) of a scale begins; undefined for UTC before 1972. Exact. */
export function startOfDay(day: number, scale: Scale, table: LeapSecondTable): Instant | undefined {
  if (scale !== 'UTC') return instantOf(day * S_PER_DAY, 0 - SCALE_MINUS_TAI_PS[scale]);
  const taiMinusUtcS = taiMinusUtcOnDay(table, day);
  return taiMinusUtcS === undefined ? undefined : { taiS: day * S_PER_DAY + taiMinusUtcS, ps: 0 };
}

/** SI seconds in a day (days since 1970-01-01) of a scale: 86,400, in UTC one more or less where the list says so. */
export function secondsInDay(day: number, scale: Scale, table: LeapSecondTable): number {
  return scale === 'UTC' ? secondsInUtcDay(table, day) : S_PER_DAY;
}

/**
 * Where an instant lies on a scale; undefined in UTC before 1972. Exact to the picosecond.
 *
 * Source: GPS = TAI - 19 s (IS-GPS-200), TT = TAI + 32.184 s (IAU 1991 Rec. IV), UTC by the list (ITU-R TF.460-6).
 */
export function dayTimeAt(instant: Instant, scale: Scale, table: LeapSecondTable): DayTime | undefined {
  if (scale === 'UTC') {
    const utc = utcDayAt(table, instant.taiS);
    return utc && { day: utc.day, secondOfDay: utc.secondOfDay, ps: instant.ps };
  }
  const shifted = instantOf(instant.taiS, instant.ps + SCALE_MINUS_TAI_PS[scale]);
  const day = Math.floor(shifted.taiS / S_PER_DAY);
  return { day, secondOfDay: shifted.taiS - day * S_PER_DAY, ps: shifted.ps };
}

/**
 * Whether a time of day exists in a day of so many seconds.
 *
 * @param lengthS 86,400, 86,401 or 86,399
 * @returns 'time-of-day' beyond 23 h, 59 min or 60 s, or after the early end of a shortened day; 'no-leap-second' for a second 60 that is not
 *   the last of a lengthened day
 */
export function timeOfDayFault(
  hour: number,
  minute: number,
  second: number,
  lengthS: number,
): 'time-of-day' | 'no-leap-second' | undefined {
  if (hour > 23 || minute > 59 || second > 60) return 'time-of-day';
  const secondOfDay = hour * 3600 + minute * 60 + second;
  if (second === 60) return secondOfDay === S_PER_DAY && lengthS > S_PER_DAY ? undefined : 'no-leap-second';
  return secondOfDay < lengthS ? undefined : 'time-of-day';
}

/**
 * The instant that date and time of day on a scale name. Exact to the picosecond.
 *
 * @param civil whole numbers, none negative, `ps` below 1e12
 * @param where the field or place that a problem or warning is about
 * @returns the instant, with a warning for UTC after the expiry of the list; or the problem that is the {@link CivilFault}
 */
export function instantFromCivil(civil: CivilTime, scale: Scale, table: LeapSecondTable, where: string): Outcome<Instant> {
  if (!isCivilDate(civil.year, civil.month, civil.day)) return problemOf('date', where, civilFaultText('date', scale));
  const day = daysFromCivil(civil.year, civil.month, civil.day);
  const fault = timeOfDayFault(civil.hour, civil.minute, civil.second, secondsInDay(day, scale, table));
  if (fault !== undefined) return problemOf(fault, where, civilFaultText(fault, scale));
  const start = startOfDay(day, scale, table);
  if (start === undefined) return problemOf('before-1972', where, civilFaultText('before-1972', scale));
  const instant = instantOf(start.taiS + civil.hour * 3600 + civil.minute * 60 + civil.second, start.ps + civil.ps);
  return valueOf(instant, scale === 'UTC' ? expiryWarnings(table, instant, where) : []);
}

/**
 * Date and time of day of an instant on a scale, second 60 in a leap second of UTC. Exact to the picosecond.
 *
 * @param where the field or place that a problem or warning is about
 * @returns the fields, with a warning for UTC after the expiry of the list; or the problem 'before-1972'
 */
export function civilFromInstant(instant: Instant, scale: Scale, table: LeapSecondTable, where: string): Outcome<CivilTime> {
  const time = dayTimeAt(instant, scale, table);
  if (time === undefined) return problemOf('before-1972', where, civilFaultText('before-1972', scale));
  // The 86,401st second is the 61st of the last minute, not the first of a 25th hour.
  const minuteOfDay = Math.min(Math.floor(time.secondOfDay / 60), 1439);
  const hour = Math.floor(minuteOfDay / 60);
  const civil = {
    ...civilFromDays(time.day),
    hour,
    minute: minuteOfDay - hour * 60,
    second: time.secondOfDay - minuteOfDay * 60,
    ps: time.ps,
  };
  return valueOf(civil, scale === 'UTC' ? expiryWarnings(table, instant, where) : []);
}

/** A sentence about a date and time of day that name no instant: what is wrong and what is allowed. */
export function civilFaultText(fault: CivilFault, scale: Scale): string {
  switch (fault) {
    case 'date':
      return 'the date does not exist; months are 01 to 12, days 01 to the last of the month';
    case 'time-of-day':
      return 'the time of day does not exist; hours are 00 to 23, minutes and seconds 00 to 59, and a day may end one second early in UTC only';
    case 'no-leap-second':
      return scale === 'UTC'
        ? 'there is no leap second there; second 60 exists only as 23:59:60 at the end of a day for which the leap-second list has one'
        : `second 60 does not exist on the ${scale} scale; leap seconds belong to UTC`;
    case 'before-1972':
      return 'UTC before 1972-01-01T00:00:00 had seconds of another length and is not converted; use TAI';
  }
}
