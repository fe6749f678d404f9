const LEAST_MS = 2_000;
const MOST_MS = 30_000;

/**
 * How long to wait before the server is linked to again: at least 2 s, longer with each try, and with a random part so that not all come at
 * once.
 *
 * @param tries how many have failed since the last link
 * @param askedMs what the server asked for, if it did
 * @param dice from 0 to 1
 */
export function retryMs(tries: number, askedMs: number | undefined, dice: number): number {
  const span = Math.min(MOST_MS, LEAST_MS * 2 ** Math.min(tries, 10)) - LEAST_MS;
  return Math.max(LEAST_MS + dice * Math.max(span, LEAST_MS / 2), askedMs ?? 0);
}
