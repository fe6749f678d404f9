import { civilFromDays } from '#shared/time/calendar';

const MJD_OF_1970 = 40_587;

/** The day of a Modified Julian Date, as 2027-03-01. */
export function mjdText(mjd: number): string {
  const { year, month, day } = civilFromDays(mjd - MJD_OF_1970);
  return `${year}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
}
