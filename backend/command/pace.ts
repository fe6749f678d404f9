import { setImmediate as turn } from 'node:timers/promises';

/** How long a long computation may keep signals and progress waiting. */
const LONGEST_STRETCH_MS = 40;

/** Lets a long computation be watched and ended: to be awaited at every few thousand steps. */
export interface Pace {
  /** Yields to what waits when the last time is long enough ago; rejects once the work has been cancelled. */
  readonly breathe: () => Promise<void>;
}

/** Makes a pace that ends when the signal is aborted. */
export function paceUntil(signal: AbortSignal): Pace {
  let last = performance.now();
  return {
    breathe: async () => {
      if (performance.now() - last < LONGEST_STRETCH_MS) return;
      await turn();
      signal.throwIfAborted();
      last = performance.now();
    },
  };
}
