import { compareInstants, nanosecondsOf } from '#shared/time/instant';
import { type StoredEvent } from '../reconcile/stored-event';
import { type ActiveRule } from './active-rule';

/** Whether a rule lets an event take part, its dead time aside. */
export function isEligible(rule: ActiveRule, event: StoredEvent): boolean {
  if (event.kind !== 'trigger') return false;
  if (rule.siteIds && !rule.siteIds.has(event.siteId)) return false;
  if (rule.leastAmplitude !== undefined && event.amplitude < rule.leastAmplitude) return false;
  return !rule.exclusions.some(
    ({ siteId, from, to }) =>
      (siteId === undefined || siteId === event.siteId) && compareInstants(from, event) <= 0 && compareInstants(event, to) <= 0,
  );
}

/** The eligible events of a stretch, each list in their order. */
export interface Attendance {
  readonly taking: StoredEvent[];
  /** Those that come within a dead time. */
  readonly dead: StoredEvent[];
}

/**
 * Tells which events take part in a rule: the eligible ones that follow no eligible one of their site within its dead time, whether that one
 * took part or not. So each depends on the dead time before it alone, and on no order of arrival.
 *
 * @param sorted events in their order; what lies within a dead time of the beginning may lack what went before
 */
export function attendance(rule: ActiveRule, sorted: readonly StoredEvent[]): Attendance {
  const taking: StoredEvent[] = [];
  const dead: StoredEvent[] = [];
  const last = new Map<number, StoredEvent>();
  for (const event of sorted) {
    if (!isEligible(rule, event)) continue;
    const before = last.get(event.site);
    last.set(event.site, event);
    const isDead = before && nanosecondsOf(event.taiS - before.taiS, event.ps - before.ps) < rule.deadTimeNs;
    (isDead ? dead : taking).push(event);
  }
  return { taking, dead };
}
