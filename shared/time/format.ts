import { S_PER_DAY } from '../constants';
import { problemOf, valueOf, type Outcome } from '../outcome';
import { civilFromDays } from './calendar';
import { type Instant } from './instant';
import { expiryWarnings, type LeapSecondTable } from './leap-seconds';
import { civilFaultText, dayTimeAt, type Scale } from './scales';

/** Decimals that write a picosecond: no instant has more. */
export const MAX_DECIMALS = 12;

const TWO_DIGITS = Array.from({ length: 61 }, (_, n) => String(n).padStart(2, '0'));
const PS_PER_US = 1e6;

type DayTimeWriter = (day: number, secondOfDay: number, ps: number) => string;

/**
 * Makes a function that writes instants in TAI as `2026-03-01T12:00:00.000000000000`, without a suffix: the times of result files.
 *
 * The function keeps the text of the last minute, so sorted instants cost little more than their decimals.
 *
 * @param decimals written decimals, 0 to 12; what lies beyond is cut off, never rounded up
 */
export function createTaiWriter(decimals: number = MAX_DECIMALS): (instant: Instant) => string {
  const write = createDayTimeWriter(decimals);
  return (instant) => {
    const day = Math.floor(instant.taiS / S_PER_DAY);
    return write(day, instant.taiS - day * S_PER_DAY, instant.ps);
  };
}

/**
 * Writes an instant on a scale as ISO 8601 without a suffix, second 60 in a leap second of UTC.
 *
 * Years beyond 0000 to 9999 have a sign and six digits (`+010000-01-01T...`).
 *
 * @param decimals written decimals, 0 to 12; what lies beyond is cut off, never rounded up
 * @returns the text, with a warning for UTC after the expiry of the list; or the problem 'before-1972'
 */
export function timeText(instant: Instant, scale: Scale, table: LeapSecondTable, decimals: number = MAX_DECIMALS): Outcome<string> {
  const time = dayTimeAt(instant, scale, table);
  if (time === undefined) return problemOf('before-1972', 'time', civilFaultText('before-1972', scale));
  const text = createDayTimeWriter(decimals)(time.day, time.secondOfDay, time.ps);
  return valueOf(text, scale === 'UTC' ? expiryWarnings(table, instant, text) : []);
}

function createDayTimeWriter(decimals: number): DayTimeWriter {
  if (!Number.isInteger(decimals) || decimals < 0 || decimals > MAX_DECIMALS) {
    throw new RangeError(`decimals is ${decimals}; it must be a whole number from 0 to ${MAX_DECIMALS}`);
  }
  const length = 3 + decimals; // seconds and point
  let lastDay = NaN;
  let lastMinute = NaN;
  let dayText = '';
  let minuteText = '';
  return (day, secondOfDay, ps) => {
    // The 86,401st second is the 61st of the last minute.
    const minute = Math.min(Math.floor(secondOfDay / 60), 1439);
    if (day !== lastDay) {
      dayText = dateText(day);
      lastDay = day;
      lastMinute = NaN;
    }
    if (minute !== lastMinute) {
      const hour = Math.floor(minute / 60);
      minuteText = `${dayText}T${twoDigits(hour)}:${twoDigits(minute - hour * 60)}:`;
      lastMinute = minute;
    }
    const second = twoDigits(secondOfDay - minute * 60);
    if (decimals === 0) return minuteText + second;
    const us = Math.floor(ps / PS_PER_US);
    const fraction = `${second}.${sixDigits(us)}${decimals > 6 ? sixDigits(ps - us * PS_PER_US) : ''}`;
    return minuteText + (decimals === MAX_DECIMALS ? fraction : fraction.slice(0, length));
  };
}

function dateText(dayNumber: number): string {
  const { year, month, day } = civilFromDays(dayNumber);
  const plain = year >= 0 && year <= 9999;
  const yearText = plain ? String(year).padStart(4, '0') : (year < 0 ? '-' : '+') + String(Math.abs(year)).padStart(6, '0');
  return `${yearText}-${twoDigits(month)}-${twoDigits(day)}`;
}

function twoDigits(n: number): string {
  return TWO_DIGITS[n] ?? String(n);
}

/** Six digits of a number below 1e6: a leading 1 that is cut off again is faster than padding. */
function sixDigits(n: number): string {
  return String(n + 1e6).slice(1);
}
