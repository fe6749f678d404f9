import { type Plane } from './plane';

/** Where the keyboard goes from a mark: to the next in time, or to the event nearest in time of the next site across. */
export type Step = 'earlier' | 'later' | 'site-before' | 'site-after';

/**
 * The event to which a step of the keyboard leads.
 *
 * @param plane where the events stand
 * @param shown rows that can be reached, in any order
 * @param places place of each event's site among the sites from left to right
 * @param from row of the event where the keyboard is; -1 where it is at none yet, and then the latest is first
 * @returns the row; `from` itself at an end; -1 where nothing is shown
 */
export function stepFrom(plane: Plane, shown: readonly number[], places: ArrayLike<number>, from: number, step: Step): number {
  if (!shown.includes(from)) return best(shown, (row) => -(plane.tMs[row] ?? 0)) ?? -1;
  const t0 = plane.tMs[from] ?? 0;
  const time = (row: number): number => plane.tMs[row] ?? 0;
  if (step === 'later' || step === 'earlier') {
    const sign = step === 'later' ? 1 : -1;
    // Rows of one instant stand one after the other, so that none is passed over.
    const isBehind = (row: number): boolean => sign * (time(row) - t0) > 0 || (time(row) === t0 && sign * (row - from) > 0);
    const key = (row: number): number => sign * (time(row) - t0);
    const behind = shown.filter(isBehind);
    const least = Math.min(...behind.map(key));
    return best(behind.filter((row) => key(row) === least), (row) => sign * row) ?? from; // prettier-ignore
  }
  const place = places[from] ?? 0;
  const sign = step === 'site-after' ? 1 : -1;
  const beside = shown.filter((row) => sign * ((places[row] ?? 0) - place) > 0);
  const next = best(beside, (row) => sign * (places[row] ?? 0));
  if (next === undefined) return from;
  return best(beside.filter((row) => places[row] === places[next]), (row) => Math.abs(time(row) - t0)) ?? from; // prettier-ignore
}

/** The row with the least key. */
function best(rows: readonly number[], key: (row: number) => number): number | undefined {
  let found: number | undefined;
  for (const row of rows) if (found === undefined || key(row) < key(found)) found = row;
  return found;
}
