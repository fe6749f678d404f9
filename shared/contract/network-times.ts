import { type Outcome, valueOf } from '../outcome';
import { type Instant } from '../time/instant';
import { type LeapSecondTable } from '../time/leap-seconds';
import { parseStatedTime } from '../time/stated-time';

/** A time of the file, with its path in what goes wrong. */
export function timeAt(text: string, path: string, table: LeapSecondTable): Outcome<Instant> {
  const time = parseStatedTime(text, path, table);
  return time.ok ? valueOf(time.value.instant, time.warnings) : time;
}
