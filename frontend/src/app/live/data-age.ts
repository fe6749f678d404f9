import { type SiteStates } from '#shared/contract/site-state';

/** Without a record for so long a network is quiet. */
const QUIET_S = 60;

/** How old what came last is. */
export interface DataAge {
  /** From the newest record's arrival to now; 0 where none came yet. */
  readonly behindS: number;
  readonly isQuiet: boolean;
}

/**
 * The age of a network's newest record, by the server's clock.
 *
 * @param states the sites as they were told last
 * @param sinceMs how long ago that was, by this page's own timer
 */
export function dataAge({ atMs, sites }: SiteStates, sinceMs: number): DataAge {
  const newestMs = sites.reduce((newest, { lastReceivedAtMs }) => Math.max(newest, lastReceivedAtMs ?? 0), 0);
  if (newestMs === 0) return { behindS: 0, isQuiet: true };
  const behindS = Math.max(0, atMs - newestMs + sinceMs) / 1000;
  return { behindS, isQuiet: behindS > QUIET_S };
}
