/**
 * The order of rows as a permutation, by a natural merge sort: runs that already ascend are found first, so that logs which are sorted by
 * themselves cost one merge a doubling of their number, and no object is made a row. Stable.
 *
 * @param count how many rows
 * @param compare negative when row a comes before row b, positive when after; a strict weak order
 * @returns row numbers in ascending order, length `count`
 */
export function sortOrder(count: number, compare: (a: number, b: number) => number): Uint32Array {
  let from = new Uint32Array(count);
  const starts: number[] = [];
  for (let row = 0; row < count; row++) {
    from[row] = row;
    if (row === 0 || compare(row - 1, row) > 0) starts.push(row);
  }
  if (starts.length < 2) return from;
  let into = new Uint32Array(count);
  let runs = starts;
  while (runs.length > 1) {
    const merged: number[] = [];
    for (let k = 0; k < runs.length; k += 2) {
      const begin = runs[k] ?? 0;
      const middle = runs[k + 1] ?? count;
      mergeRuns(from, into, { begin, middle, end: runs[k + 2] ?? count }, compare);
      merged.push(begin);
    }
    [from, into] = [into, from];
    runs = merged;
  }
  return from;
}

interface Runs {
  readonly begin: number;
  readonly middle: number;
  readonly end: number;
}

function mergeRuns(from: Uint32Array, into: Uint32Array, runs: Runs, compare: (a: number, b: number) => number): void {
  let left = runs.begin;
  let right = runs.middle;
  for (let at = runs.begin; at < runs.end; at++) {
    const takeLeft = left < runs.middle && (right >= runs.end || compare(from[left] ?? 0, from[right] ?? 0) <= 0);
    into[at] = (takeLeft ? from[left++] : from[right++]) ?? 0;
  }
}
