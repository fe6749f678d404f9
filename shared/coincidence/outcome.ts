import { type Crowd } from './sets-from';

/** Sets one after the other: their fold, then their events as slots in the order of events. */
export type PackedSets = Int32Array;

/** An event that is crowded; `hasSite` is 1 for each site that the crowd counts. */
export interface Crowding {
  readonly crowd: Crowd;
  readonly hasSite: Uint8Array;
}

/** What begins with an event: sets in their order, or a crowd; undefined when nothing does. */
export type Outcome = { readonly sets: PackedSets } | Crowding | undefined;

/** Calls back with each set. */
export function eachSet(outcome: Outcome, told: (slots: Int32Array) => void): void {
  if (!outcome || !('sets' in outcome)) return;
  for (let at = 0; at < outcome.sets.length; at += 1 + (outcome.sets[at] ?? 0)) told(slotsAt(outcome.sets, at));
}

const slotsAt = (sets: PackedSets, at: number): Int32Array => sets.subarray(at + 1, at + 1 + (sets[at] ?? 0));

/** The order of two sets: by their first event that differs, a beginning before the whole. */
export function compareSets(a: Int32Array, b: Int32Array, compare: (a: number, b: number) => number): number {
  const length = Math.min(a.length, b.length);
  for (let k = 0; k < length; k++) {
    const apart = compare(a[k] ?? 0, b[k] ?? 0);
    if (apart !== 0) return apart;
  }
  return a.length - b.length;
}

/** What hears of the difference of two outcomes. */
export interface DifferenceListener {
  readonly appeared: { set(slots: Int32Array): void; crowd(crowd: Crowd): void };
  readonly vanished: { set(slots: Int32Array): void; crowd(crowd: Crowd): void };
}

/**
 * Tells the difference of two outcomes of one event.
 *
 * @param before what began with the event
 * @param after what begins with it now
 * @param compare the order of slots
 */
export function tellDifference(before: Outcome, after: Outcome, compare: (a: number, b: number) => number, told: DifferenceListener): void {
  const crowdBefore = before && 'crowd' in before ? before.crowd : undefined;
  const crowdAfter = after && 'crowd' in after ? after.crowd : undefined;
  if (crowdBefore?.sites !== crowdAfter?.sites || crowdBefore?.events !== crowdAfter?.events) {
    if (crowdBefore) told.vanished.crowd(crowdBefore);
    if (crowdAfter) told.appeared.crowd(crowdAfter);
  }
  const old = before && 'sets' in before ? before.sets : NONE;
  const now = after && 'sets' in after ? after.sets : NONE;
  if (isSame(old, now)) return;
  let o = 0;
  let n = 0;
  while (o < old.length || n < now.length) {
    const oldSet = slotsAt(old, o);
    const nowSet = slotsAt(now, n);
    const order = o >= old.length ? 1 : n >= now.length ? -1 : compareSets(oldSet, nowSet, compare);
    if (order < 0) told.vanished.set(oldSet);
    if (order > 0) told.appeared.set(nowSet);
    if (order <= 0) o += 1 + oldSet.length;
    if (order >= 0) n += 1 + nowSet.length;
  }
}

const NONE: PackedSets = new Int32Array(0);

/** Most events that are searched again begin what they began before. */
function isSame(old: PackedSets, now: PackedSets): boolean {
  if (old.length !== now.length) return false;
  for (let k = 0; k < old.length; k++) if (old[k] !== now[k]) return false;
  return true;
}
