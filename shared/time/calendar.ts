/** A date of the Gregorian calendar, carried back before 1582 (proleptic), with astronomical years (year 0 is a leap year). */
export interface CivilDate {
  readonly year: number;
  readonly month: number;
  readonly day: number;
}

const DAYS_IN_ERA = 146_097; // 400 years
const ERA_TO_1970_DAYS = 719_468; // from 0000-03-01 to 1970-01-01
const MONTH_DAYS = [31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];

/** Whether a year has a 29 February: every fourth, but of the centuries only every fourth. */
export function isLeapYear(year: number): boolean {
  return year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0);
}

/** Days in a month, 1 to 12; 0 for a month that does not exist. */
export function daysInMonth(year: number, month: number): number {
  return month === 2 && isLeapYear(year) ? 29 : (MONTH_DAYS[month - 1] ?? 0);
}

/** Whether a date exists. */
export function isCivilDate(year: number, month: number, day: number): boolean {
  return day >= 1 && day <= daysInMonth(year, month);
}

/**
 * Days from 1970-01-01 to a date that exists, negative before it.
 *
 * Counts in years that begin in March, so that the leap day is the last of its year. Whole numbers throughout, exact for any year
 * below 1e10. Source: H. Hinnant, "chrono-compatible low-level date algorithms" (2013), days_from_civil.
 *
 * @param year astronomical year
 * @param month 1 to 12
 * @param day 1 to 31
 */
export function daysFromCivil(year: number, month: number, day: number): number {
  const marchYear = month > 2 ? year : year - 1;
  const era = Math.floor(marchYear / 400);
  const yearOfEra = marchYear - era * 400;
  const dayOfYear = Math.floor((153 * (month > 2 ? month - 3 : month + 9) + 2) / 5) + day - 1;
  const dayOfEra = yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfYear;
  return era * DAYS_IN_ERA + dayOfEra - ERA_TO_1970_DAYS;
}

/**
 * The date a whole number of days after 1970-01-01 (before it when negative); the inverse of {@link daysFromCivil}.
 *
 * Source: H. Hinnant, "chrono-compatible low-level date algorithms" (2013), civil_from_days.
 */
export function civilFromDays(days: number): CivilDate {
  const shifted = days + ERA_TO_1970_DAYS;
  const era = Math.floor(shifted / DAYS_IN_ERA);
  const dayOfEra = shifted - era * DAYS_IN_ERA;
  const yearOfEra = Math.floor(
    (dayOfEra - Math.floor(dayOfEra / 1460) + Math.floor(dayOfEra / 36_524) - Math.floor(dayOfEra / 146_096)) / 365,
  );
  const dayOfYear = dayOfEra - (365 * yearOfEra + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100));
  const marchMonth = Math.floor((5 * dayOfYear + 2) / 153);
  const month = marchMonth < 10 ? marchMonth + 3 : marchMonth - 9;
  return {
    year: yearOfEra + era * 400 + (month > 2 ? 0 : 1),
    month,
    day: dayOfYear - Math.floor((153 * marchMonth + 2) / 5) + 1,
  };
}
