/** A place at which two values are not the same. */
export interface Difference {
  /** Such as `pairs[3].marginSigma`. */
  readonly path: string;
  /** What was stated; undefined where only the other has something there. */
  readonly stated: unknown;
  readonly recomputed: unknown;
}

/** More are not listed: whoever reads them has seen enough. */
export const MOST_DIFFERENCES = 1_000;

/**
 * Where two values of JSON differ, to the last digit stated: numbers must be the same double.
 *
 * @param stated what was written down
 * @param recomputed what comes out now
 * @returns the places in their order, up to `MOST_DIFFERENCES`; none where all is the same
 */
export function differences(stated: unknown, recomputed: unknown): Difference[] {
  const found: Difference[] = [];
  compare(stated, recomputed, '', found);
  return found;
}

const isObject = (value: unknown): value is object => typeof value === 'object' && value !== null;

function compare(stated: unknown, recomputed: unknown, path: string, found: Difference[]): void {
  if (stated === recomputed || found.length >= MOST_DIFFERENCES) return;
  if (!isObject(stated) || !isObject(recomputed) || Array.isArray(stated) !== Array.isArray(recomputed)) {
    found.push({ path, stated, recomputed });
    return;
  }
  for (const key of new Set([...Object.keys(stated), ...Object.keys(recomputed)])) {
    const below = Array.isArray(stated) ? `${path}[${key}]` : path === '' ? key : `${path}.${key}`;
    compare(Reflect.get(stated, key), Reflect.get(recomputed, key), below, found);
  }
}
