import { valueText } from '#shared/contract/first-problem';
import { isUsableTime, TIME_RIGHT, type TimeGiven, type Warning } from '#shared/contract/setup-leaves';
import { type Instant } from '#shared/time/instant';
import { type LeapSecondTable } from '#shared/time/leap-seconds';
import { parseStatedTime } from '#shared/time/stated-time';
import { unusable } from '../api/refusal';
import { type Db } from '../db';
import { leapSecondsInForce } from './leap-seconds-in-force';

/** Reads times as they are given in a request, and keeps what is doubtful about them. */
export interface TimeReader {
  /**
   * @param given an instant, or text that says its scale
   * @param where the field's path
   * @throws Refusal 400 for a text that is no time from 1972 to 2099
   */
  readonly read: (given: TimeGiven, where: string) => Instant;
  readonly readOrNull: (given: TimeGiven | null, where: string) => Instant | null;
  readonly warnings: Warning[];
}

/** Reads times by the leap-second list in force. */
export function timeReader(db: Pick<Db, 'select'>): TimeReader {
  let table: LeapSecondTable | undefined;
  const warnings: Warning[] = [];
  const read = (given: TimeGiven, where: string): Instant => {
    if (typeof given !== 'string') return given;
    table ??= leapSecondsInForce(db);
    const time = parseStatedTime(given, where, table);
    if (!time.ok) throw unusable(time.problem);
    if (!isUsableTime(time.value.instant)) throw unusable({ where, text: `is ${valueText(given)}; it must be ${TIME_RIGHT}` });
    warnings.push(...time.warnings.map(({ text }) => ({ where, text })));
    return time.value.instant;
  };
  return { read, readOrNull: (given, where) => (given === null ? null : read(given, where)), warnings };
}
