import { problemOf, valueOf, type Outcome } from '../outcome';
import { quoted } from '../quoted';
import { type Instant } from './instant';
import { expiryWarnings, type LeapSecondTable } from './leap-seconds';
import { createReadingParser } from './reading';
import { civilFaultText, SCALES, type Scale } from './scales';

/** An instant and the scale in which a person stated it. */
export interface StatedTime {
  readonly instant: Instant;
  readonly scale: Scale;
}

const FORM = 'YYYY-MM-DDTHH:MM:SS with up to 12 decimals, then Z, or a blank and one of UTC, TAI, GPS, TT, or nothing (UTC)';

/**
 * Reads a time that says its own scale, as in network files and lists of live spans: date and time as in a log, then `Z`, or a blank and one of
 * UTC, TAI, GPS, TT; nothing means UTC.
 *
 * @param where the field or place that a problem or warning is about
 * @returns instant and scale, with a warning for UTC after the expiry of the list; or a problem: 'time-empty', 'time-form', 'date', 'time-of-day',
 *   'no-leap-second', 'before-1972'. Exact to the picosecond.
 */
export function parseStatedTime(text: string, where: string, table: LeapSecondTable): Outcome<StatedTime> {
  if (text === '') return problemOf('time-empty', where, `is empty; it must be ${FORM}`);
  const { body, scale } = splitScale(text);
  const reading = createReadingParser(scale, table)(body);
  if (reading === 'reading-empty' || reading === 'reading-form')
    return problemOf('time-form', where, `${quoted(text)} is not of the form ${FORM}`);
  if (typeof reading === 'string') return problemOf(reading, where, `${quoted(text)}: ${civilFaultText(reading, scale)}`);
  const instant = { taiS: reading.taiS, ps: reading.ps };
  return valueOf({ instant, scale }, scale === 'UTC' ? expiryWarnings(table, instant, where) : []);
}

/** A body that still ends in Z after a named scale is emptied, since `Z UTC` is no form. */
function splitScale(text: string): { readonly body: string; readonly scale: Scale } {
  const scale = SCALES.find((name) => text.endsWith(` ${name}`));
  if (scale === undefined) return { body: text, scale: 'UTC' };
  const body = text.slice(0, -scale.length - 1);
  return { body: body.endsWith('Z') ? '' : body, scale };
}
