/** Bounds of the time between two attempts to connect, in ms. */
export interface RetryBounds {
  readonly leastMs: number;
  readonly mostMs: number;
}

export const RETRY_BOUNDS: RetryBounds = { leastMs: 2_000, mostMs: 60_000 };

/**
 * How long to wait before an attempt: at random from the least to a bound that doubles with each failure (full jitter), so that a crowd that
 * lost its server together does not come back together.
 *
 * @param failures attempts that failed since the last success
 * @param afterMs what the server asked for, at least; 0 for nothing
 * @param random 0 to 1
 */
export function retryDelayMs(failures: number, afterMs: number, random: number, { leastMs, mostMs }: RetryBounds = RETRY_BOUNDS): number {
  const spreadMs = Math.min(mostMs, leastMs * 2 ** Math.min(failures, 16));
  return Math.max(leastMs, afterMs) + random * spreadMs;
}
