/**
 * Places in time order, 1 for the earliest.
 *
 * @param times of the rows, any unit
 */
export function ranksOf(times: ArrayLike<number>): number[] {
  const order = Array.from({ length: times.length }, (_, i) => i).sort((a, b) => (times[a] ?? 0) - (times[b] ?? 0) || a - b);
  const ranks = order.map(() => 0);
  order.forEach((row, at) => (ranks[row] = at + 1));
  return ranks;
}

/**
 * With which others each row has changed its order between two frames.
 *
 * @param before times in the one frame, any unit
 * @param now times of the same rows in the other
 * @param mayTurn whether a pair's order depends on the frame: its events are spacelike
 * @returns for each row the rows on whose other side it is now
 */
export function turnedWith(before: ArrayLike<number>, now: ArrayLike<number>, mayTurn: (a: number, b: number) => boolean): number[][] {
  const turned: number[][] = Array.from({ length: before.length }, () => []);
  for (let a = 0; a < before.length; a++)
    for (let b = a + 1; b < before.length; b++) {
      const was = Math.sign((before[b] ?? 0) - (before[a] ?? 0));
      const is = Math.sign((now[b] ?? 0) - (now[a] ?? 0));
      if (was * is >= 0 || !mayTurn(a, b)) continue;
      turned[a]?.push(b);
      turned[b]?.push(a);
    }
  return turned;
}

/**
 * The speed along the axis at which two events are simultaneous, in c, with its sign; undefined where none below c is.
 *
 * @param dtMs time from the one to the other, ms
 * @param dxMs step along the axis, light-ms
 */
export function turningSpeedAlong(dtMs: number, dxMs: number): number | undefined {
  return Math.abs(dtMs) < Math.abs(dxMs) ? dtMs / dxMs : undefined;
}
