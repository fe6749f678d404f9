import { S_PER_DAY, NTP_TO_1970_DAYS } from '../constants';
import { problemOf, valueOf, type Outcome, type Problem } from '../outcome';
import { quoted } from '../quoted';
import { compareInstants, type Instant } from './instant';
import { sha1OfAscii } from './sha1';

/** From a UTC day on, TAI minus UTC is this many seconds. */
export interface LeapSecondStep {
  /** First UTC day with this difference, days since 1970-01-01. */
  readonly fromDay: number;
  /** The beginning of that day, whole TAI seconds since 1970-01-01T00:00:00 TAI. */
  readonly fromTaiS: number;
  readonly taiMinusUtcS: number;
}

/** A leap-second list whose hash has been verified; its steps begin on 1972-01-01 and are sorted. */
export interface LeapSecondTable {
  readonly steps: readonly LeapSecondStep[];
  readonly updated: Instant;
  /** From here on nobody has said yet whether there is another leap second. */
  readonly expires: Instant;
  /** 40 lower-case hex digits. */
  readonly sha1: string;
}

/** The first row of every list: UTC as it is now began on 1972-01-01 (NTP seconds) with TAI-UTC = 10 s. Source: ITU-R TF.460-6. */
const FIRST_ROW_NTP_S = 2_272_060_800;
const FIRST_TAI_MINUS_UTC_S = 10;
/** Published lists have 5 kB; a file a hundred times as long is something else. */
const MAX_CHARACTERS = 500_000;

const WORD_OF_HASH = /^[0-9a-f]{1,8}$/i;
const ROW = /^(\d{1,12})\s+(\d{1,4})\s*(?:#.*)?$/;
const NUMBER = /^\d{1,12}$/;

/** What the lines of a list say, before they are judged together. */
interface Lines {
  updated: string;
  expires: string;
  hash: string;
  readonly steps: LeapSecondStep[];
  /** The digits that the hash is taken of: update, expiry, and each row's two numbers. */
  digitsOfRows: string;
}

/**
 * Reads a leap-second list in the form of the IERS file `leap-seconds.list`.
 *
 * Lines begin with `#$` (last update, NTP seconds), `#@` (expiry, NTP seconds), `#h` (five words of the SHA-1, whose leading zeros may be
 * missing), `#` (comment), or are rows: NTP seconds of the beginning of a UTC day, and TAI-UTC in seconds from then on.
 *
 * @param text the whole file
 * @returns the table; or the problem `leap-seconds` with its line: a line of no known form, rows out of order or not at the beginning of a
 *   day, a step that is not one second up or down, a first row other than that of 1972, a line missing or given twice, a hash that does
 *   not match. An expired list is no problem here, see {@link expiryWarnings}.
 *
 * Source: comments of leap-seconds.list, IERS/Paris Observatory; leading zeros: common practice in published copies.
 */
export function parseLeapSeconds(text: string): Outcome<LeapSecondTable> {
  if (text.length > MAX_CHARACTERS) return fault(1, `the list has ${text.length} characters; at most ${MAX_CHARACTERS} are read`);
  const lines: Lines = { updated: '', expires: '', hash: '', steps: [], digitsOfRows: '' };
  const rows = text.split(/\r?\n/);
  for (const [index, row] of rows.entries()) {
    const wrong = readLine(row.trimEnd(), lines);
    if (wrong !== undefined) return fault(index + 1, wrong);
  }
  return judge(lines, rows.length);
}

/** Takes in one line; returns what is wrong with it, if anything. */
function readLine(line: string, into: Lines): string | undefined {
  if (line === '') return undefined;
  if (!line.startsWith('#')) return readRow(line, into);
  const [mark, ...words] = line.split(/\s+/);
  if (mark === '#$') return readNumber('updated', words, into);
  if (mark === '#@') return readNumber('expires', words, into);
  if (mark !== '#h') return undefined;
  if (into.hash !== '') return 'a second #h line; a list has one';
  if (words.length !== 5 || !words.every((word) => WORD_OF_HASH.test(word))) {
    return `#h is followed by ${quoted(words.join(' '))}; it takes five words of up to 8 hex digits`;
  }
  into.hash = words.map((word) => word.toLowerCase().padStart(8, '0')).join('');
  return undefined;
}

function readNumber(field: 'updated' | 'expires', words: readonly string[], into: Lines): string | undefined {
  const mark = field === 'updated' ? '#$' : '#@';
  const [digits = '', ...more] = words;
  if (into[field] !== '') return `a second ${mark} line; a list has one`;
  if (more.length > 0 || !NUMBER.test(digits))
    return `${mark} is followed by ${quoted(words.join(' '))}; it takes one whole number of NTP seconds`;
  into[field] = digits;
  return undefined;
}

function readRow(line: string, into: Lines): string | undefined {
  const [, ntpDigits = '', taiMinusUtcDigits = ''] = ROW.exec(line) ?? [];
  if (ntpDigits === '') return `${quoted(line)} is no row; a row is NTP seconds and TAI-UTC in seconds, both whole numbers`;
  const ntpS = Number(ntpDigits);
  const taiMinusUtcS = Number(taiMinusUtcDigits);
  const last = into.steps.at(-1);
  const fromDay = ntpS / S_PER_DAY - NTP_TO_1970_DAYS;
  if (!Number.isInteger(fromDay))
    return `${ntpDigits} is not the beginning of a UTC day; NTP seconds of a row are a multiple of ${S_PER_DAY}`;
  if (last === undefined && (ntpS !== FIRST_ROW_NTP_S || taiMinusUtcS !== FIRST_TAI_MINUS_UTC_S)) {
    return `the first row is ${ntpDigits} ${taiMinusUtcDigits}; it must be ${FIRST_ROW_NTP_S} ${FIRST_TAI_MINUS_UTC_S} (1 Jan 1972)`;
  }
  if (last !== undefined && fromDay <= last.fromDay) return `${ntpDigits} is not later than the row before; rows are in order of time`;
  if (last !== undefined && Math.abs(taiMinusUtcS - last.taiMinusUtcS) !== 1) {
    return `TAI-UTC goes from ${last.taiMinusUtcS} to ${taiMinusUtcS} s; a step is one second up or down`;
  }
  into.steps.push({ fromDay, fromTaiS: fromDay * S_PER_DAY + taiMinusUtcS, taiMinusUtcS });
  into.digitsOfRows += ntpDigits + taiMinusUtcDigits;
  return undefined;
}

function judge(lines: Lines, lastLine: number): Outcome<LeapSecondTable> {
  if (lines.steps.length === 0) return fault(lastLine, 'the list ends without a row; it must have at least that of 1 Jan 1972');
  if (lines.updated === '') return fault(lastLine, 'the list ends without its line of last update (#$ and NTP seconds)');
  if (lines.expires === '') return fault(lastLine, 'the list ends without its line of expiry (#@ and NTP seconds)');
  if (lines.hash === '') return fault(lastLine, 'the list ends without its line of hash (#h and five words)');
  const sha1 = sha1OfAscii(lines.updated + lines.expires + lines.digitsOfRows);
  if (sha1 !== lines.hash)
    return fault(lastLine, `the rows and dates hash to ${sha1}, the #h line says ${lines.hash}; the list is damaged`);
  const updated = ofNtp(Number(lines.updated), lines.steps);
  const expires = ofNtp(Number(lines.expires), lines.steps);
  if (updated === undefined) return fault(lastLine, `#$ ${lines.updated} lies before the first row; a list is younger than 1972`);
  if (expires === undefined) return fault(lastLine, `#@ ${lines.expires} lies before the first row; a list is younger than 1972`);
  return valueOf({ steps: lines.steps, updated, expires, sha1 });
}

/** NTP seconds do not count leap seconds, so the day is a plain division. */
function ofNtp(ntpS: number, steps: readonly LeapSecondStep[]): Instant | undefined {
  const utcS = ntpS - NTP_TO_1970_DAYS * S_PER_DAY;
  const step = stepOnDay(steps, Math.floor(utcS / S_PER_DAY));
  return step && { taiS: utcS + step.taiMinusUtcS, ps: 0 };
}

function fault(line: number, text: string): Outcome<LeapSecondTable> {
  return problemOf('leap-seconds', `line ${line}`, text);
}

/** The last step at or before a UTC day; most questions are about recent days, so it looks from the end. */
function stepOnDay(steps: readonly LeapSecondStep[], day: number): LeapSecondStep | undefined {
  return steps.findLast((step) => step.fromDay <= day);
}

/** TAI minus UTC in seconds on a UTC day (days since 1970-01-01), or undefined before 1972, where UTC had other rules. */
export function taiMinusUtcOnDay(table: LeapSecondTable, day: number): number | undefined {
  return stepOnDay(table.steps, day)?.taiMinusUtcS;
}

/** SI seconds in a UTC day (days since 1970-01-01): 86,401 with a leap second at its end, 86,399 with a negative one, else 86,400. */
export function secondsInUtcDay(table: LeapSecondTable, day: number): number {
  const today = taiMinusUtcOnDay(table, day);
  const tomorrow = taiMinusUtcOnDay(table, day + 1);
  return today === undefined || tomorrow === undefined ? S_PER_DAY : S_PER_DAY + tomorrow - today;
}

/** Where an instant lies in UTC: the UTC day (days since 1970-01-01) and the whole second within it, up to 86,400 in a leap second. */
export function utcDayAt(table: LeapSecondTable, taiS: number): { readonly day: number; readonly secondOfDay: number } | undefined {
  const index = table.steps.findLastIndex((step) => step.fromTaiS <= taiS);
  const step = table.steps[index];
  if (step === undefined) return undefined;
  const utcS = taiS - step.taiMinusUtcS;
  // A leap second still belongs to the last day before the next step, though 86,400 s of that day have gone by.
  const lastDay = (table.steps[index + 1]?.fromDay ?? Infinity) - 1;
  const day = Math.min(Math.floor(utcS / S_PER_DAY), lastDay);
  return { day, secondOfDay: utcS - day * S_PER_DAY };
}

/** TAI minus UTC in seconds at an instant; before 1972 the first value, since no list says another. */
export function taiMinusUtcAt(table: LeapSecondTable, { taiS }: Pick<Instant, 'taiS'>): number {
  const utc = utcDayAt(table, taiS);
  return (utc && taiMinusUtcOnDay(table, utc.day)) ?? table.steps[0]?.taiMinusUtcS ?? 0;
}

/**
 * A warning when an instant is later than the expiry of the list, else none: UTC there is right only if no leap second has been announced.
 *
 * @param where the field or place that the warning is about
 */
export function expiryWarnings(table: LeapSecondTable, instant: Instant, where: string): readonly Problem[] {
  if (compareInstants(instant, table.expires) <= 0) return [];
  const text =
    'lies after the expiry of the leap-second list: a leap second announced since would shift UTC there by 1 s; load a newer list';
  return [{ code: 'leap-seconds-expired', where, text }];
}
