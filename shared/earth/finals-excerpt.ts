import { compareInstants, type Instant } from '../time/instant';
import { type OrientationTable } from './orientation-table';

/** The Earth's rotation is interpolated between whole hours, so values are asked for up to an hour before and after. */
const HOUR_S = 3600;

const mjdOfLine = (line: string): number => Number(line.slice(7, 15));

/**
 * The lines of an IERS finals2000A file on which the Earth's rotation over some instants rests.
 *
 * @param text the file as it is
 * @param table what `readFinalsFile` made of it
 * @param instants at least one, in any order
 * @returns the lines from the day before the first instant to the day after the last, those at the file's ends where it does not reach so far:
 *   read as a file, they give the same orientation at each of the instants, to the bit
 */
export function finalsExcerpt(text: string, { rows }: OrientationTable, instants: readonly Instant[]): string {
  const sorted = instants.toSorted(compareInstants);
  const fromS = (sorted[0]?.taiS ?? 0) - HOUR_S;
  const toS = (sorted.at(-1)?.taiS ?? 0) + HOUR_S;
  const first = rows.findLast(({ taiS }) => taiS <= fromS) ?? rows[0];
  const last = rows.find(({ taiS }) => taiS > toS) ?? rows.at(-1);
  const lines = text.split(/\r?\n/).filter((line) => {
    const mjd = mjdOfLine(line);
    return line.trim() !== '' && mjd >= (first?.mjd ?? 0) && mjd <= (last?.mjd ?? 0);
  });
  return `${lines.join('\n')}\n`;
}
