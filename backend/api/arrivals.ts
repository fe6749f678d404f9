/** How many may arrive, and when the others should come again. */
export interface Arrivals {
  /** Undefined for who may come in; else how long to wait, in ms. */
  readonly admit: (nowMs: number) => number | undefined;
}

const MOST_WAIT_MS = 30_000;

/**
 * Lets a crowd in one after another: so many at once, then so many a second. Who is turned away is given a time of their own, so that the
 * crowd does not come again at once.
 *
 * @param most how many may come at once
 * @param perS how many a second after that
 * @param leastWaitMs what who is turned away waits at least
 */
export function arrivalsOf(most: number, perS: number, leastWaitMs: number): Arrivals {
  let room = most;
  let turnedAway = 0;
  let lastMs: number | undefined;
  return {
    admit: (nowMs) => {
      const passedS = Math.max(0, nowMs - (lastMs ?? nowMs)) / 1000;
      lastMs = nowMs;
      room = Math.min(most, room + passedS * perS);
      turnedAway = Math.max(0, turnedAway - passedS * perS);
      if (room >= 1) {
        room--;
        return undefined;
      }
      turnedAway++;
      return Math.min(MOST_WAIT_MS, leastWaitMs + Math.ceil((turnedAway / perS) * 1000));
    },
  };
}
