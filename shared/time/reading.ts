import { quoted } from '../quoted';
import { daysFromCivil, isCivilDate } from './calendar';
import { MAX_DECIMALS } from './format';
import { PS_PER_S, type Instant } from './instant';
import { type LeapSecondTable } from './leap-seconds';
import { civilFaultText, secondsInDay, startOfDay, timeOfDayFault, type CivilFault, type Scale } from './scales';

/** A reading brought to the time axis, as its clock stood: no delay and no clock error taken off yet. */
export interface Reading extends Instant {
  /** Written decimals of the second, 0 to 12: the resolution of the reading. */
  readonly decimals: number;
}

/** Why a reading is set aside, in the order in which the reasons are looked for. */
export type ReadingFault = 'reading-empty' | 'reading-form' | CivilFault;

const POINT = 46;
const COLON = 58;
const DASH = 45;
const BLANK = 32;
const LETTER_T = 84;
const LETTER_Z = 90;
/** Characters of `YYYY-MM-DDTHH:MM:SS`. */
const WHOLE_SECONDS_LENGTH = 19;
const PS_PER_LAST_DIGIT = Array.from({ length: MAX_DECIMALS + 1 }, (_, decimals) => 10 ** (MAX_DECIMALS - decimals));

/**
 * Makes a function that reads the timestamps of one site's log: `YYYY-MM-DD`, T or one blank, `HH:MM:SS`, and up to 12 decimals; a trailing Z
 * where the scale is UTC. Nothing else is taken, blanks around it neither.
 *
 * The function returns the reading, or the reason to set it aside; which of two reasons goes first is fixed by {@link ReadingFault}. It keeps
 * what it knows of the last date, so a sorted log costs little more than looking at each character once, and allocates only its result.
 *
 * Exact: the decimals are taken as digits. Range: years 0000 to 9999, UTC from 1972. Source: ISO 8601-1:2019, 5.4 (form);
 * ITU-R TF.460-6 (second 60).
 */
export function createReadingParser(scale: Scale, table: LeapSecondTable): (text: string) => Reading | ReadingFault {
  const isUtc = scale === 'UTC';
  let dateOfCache = NaN;
  let lengthS = 0;
  let start: Instant | undefined;

  /** Returns whether the date exists, and if so leaves its beginning and its length in the cache. */
  function enterDay(year: number, month: number, dayOfMonth: number): boolean {
    const date = (year * 100 + month) * 100 + dayOfMonth;
    if (date === dateOfCache) return true;
    if (!isCivilDate(year, month, dayOfMonth)) return false;
    const day = daysFromCivil(year, month, dayOfMonth);
    lengthS = secondsInDay(day, scale, table);
    start = startOfDay(day, scale, table);
    dateOfCache = date;
    return true;
  }

  return (text) => {
    if (text === '') return 'reading-empty';
    const hasZ = text.charCodeAt(text.length - 1) === LETTER_Z;
    const end = hasZ ? text.length - 1 : text.length;
    if ((hasZ && !isUtc) || !hasSeparators(text, end)) return 'reading-form';
    const century = twoDigits(text, 0);
    const yearOfCentury = twoDigits(text, 2);
    const month = twoDigits(text, 5);
    const dayOfMonth = twoDigits(text, 8);
    const hour = twoDigits(text, 11);
    const minute = twoDigits(text, 14);
    const second = twoDigits(text, 17);
    const decimals = end === WHOLE_SECONDS_LENGTH ? 0 : end - WHOLE_SECONDS_LENGTH - 1;
    const fraction = decimals === 0 ? 0 : digits(text, WHOLE_SECONDS_LENGTH + 1, end);
    // A character that is no digit has made its number negative, and the sign bit survives the union.
    if ((century | yearOfCentury | month | dayOfMonth | hour | minute | second) < 0 || fraction < 0) return 'reading-form';
    if (!enterDay(century * 100 + yearOfCentury, month, dayOfMonth)) return 'date';
    const fault = timeOfDayFault(hour, minute, second, lengthS);
    if (fault !== undefined) return fault;
    if (start === undefined) return 'before-1972';
    const taiS = start.taiS + hour * 3600 + minute * 60 + second;
    const ps = start.ps + fraction * (PS_PER_LAST_DIGIT[decimals] ?? 0);
    return ps < PS_PER_S ? { taiS, ps, decimals } : { taiS: taiS + 1, ps: ps - PS_PER_S, decimals };
  };
}

/** Whether length and separators are those of a timestamp that ends before `end`. */
function hasSeparators(text: string, end: number): boolean {
  if (end !== WHOLE_SECONDS_LENGTH) {
    if (end < WHOLE_SECONDS_LENGTH + 2 || end > WHOLE_SECONDS_LENGTH + 1 + MAX_DECIMALS) return false;
    if (text.charCodeAt(WHOLE_SECONDS_LENGTH) !== POINT) return false;
  }
  const between = text.charCodeAt(10);
  return (
    (between === LETTER_T || between === BLANK) &&
    text.charCodeAt(4) === DASH &&
    text.charCodeAt(7) === DASH &&
    text.charCodeAt(13) === COLON &&
    text.charCodeAt(16) === COLON
  );
}

/** The number that two characters write; negative when one of them is no digit. */
function twoDigits(text: string, at: number): number {
  const tens = text.charCodeAt(at) - 48;
  const ones = text.charCodeAt(at + 1) - 48;
  return tens >>> 0 > 9 || ones >>> 0 > 9 ? -1 : tens * 10 + ones;
}

/** The number that up to 12 characters write; negative when one of them is no digit. */
function digits(text: string, from: number, end: number): number {
  let value = 0;
  for (let i = from; i < end; i++) {
    const digit = text.charCodeAt(i) - 48;
    if (digit >>> 0 > 9) return -1;
    value = value * 10 + digit;
  }
  return value;
}

/**
 * Standard error of a reading that states none, ns: one unit of its last written digit / sqrt(12), as of an even spread over that unit.
 *
 * @param decimals written decimals of the second, 0 to 12
 */
export function resolutionSigmaNs(decimals: number): number {
  return 10 ** (9 - decimals) / Math.sqrt(12);
}

/**
 * A sentence for the person whose reading is set aside: the reading, what is wrong with it, and what is right.
 *
 * @param text the reading as it stands
 */
export function readingFaultText(fault: ReadingFault, text: string, scale: Scale): string {
  if (fault === 'reading-empty') return `the reading is empty; it must be a time such as ${exampleOf(scale)}`;
  return `reading ${quoted(text)}: ${fault === 'reading-form' ? formText(text, scale) : civilFaultText(fault, scale)}`;
}

function formText(text: string, scale: Scale): string {
  if (scale !== 'UTC' && text.endsWith('Z')) return `a Z says UTC, but the site's log is in ${scale}; write ${exampleOf(scale)}`;
  const suffix = scale === 'UTC' ? 'Z or nothing after it' : 'nothing after it';
  return `not of the form YYYY-MM-DDTHH:MM:SS (a blank may stand for the T) with up to ${MAX_DECIMALS} decimals and ${suffix}, such as ${exampleOf(scale)}`;
}

function exampleOf(scale: Scale): string {
  return scale === 'UTC' ? '2026-03-01T12:00:00.123456789Z' : '2026-03-01T12:00:00.123456789';
}
