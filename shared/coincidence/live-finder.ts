import { type ErrorTables } from '../relativity/events';
import { type FourVelocity } from '../relativity/velocity';
import { type Instant } from '../time/instant';
import { regionsAround } from './changed-regions';
import { type EventIdentity } from './event-identity';
import { HeldEvents, type LiveEvent } from './held-events';
import { type LiveChanges, type LiveFindings, type LiveSet, type PutAnswer, type WithdrawAnswer } from './live-answers';
import { compareSets, eachSet, type Outcome, tellDifference } from './outcome';
import { PendingChanges } from './pending-changes';
import { eventReachNs } from './reach-bands';
import { RegionSearch } from './region-search';
import { type CoincidenceRule } from './rule';
import { type Crowd } from './sets-from';
import { earlierBy, Settlement } from './settlement';
import { type WindowBounds } from './window-bounds';

/** What a live finder searches by. */
export interface LiveSetup {
  readonly errors: ErrorTables;
  readonly rule: CoincidenceRule;
  readonly bounds: WindowBounds;
  /** At least 1; an event that is the earliest of more sets than this is crowded. */
  readonly limit: number;
  /** For a fixed window in another frame than the geocentric one: the frame's velocity as taken at an event. */
  readonly windowVelocityAt?: ((instant: Instant) => FourVelocity) | undefined;
  /**
   * How far the errors of events that are still to come may reach, ns: `sigmas` times time error and position error over c. Finality waits
   * for so much, and for what the held events reach; an event that reaches farther may come too late. 0 unless given.
   */
  readonly expectedReachNs?: number | undefined;
  /** Most events that are held at one time; `HELD_LIMIT` unless given. */
  readonly heldLimit?: number | undefined;
}

/** Most events that a live finder holds unless told otherwise: half an hour of 500 a second. */
export const HELD_LIMIT = 1_000_000;

/** The finder of a live stream. */
export interface LiveFinder {
  /** Takes events in any order. The same event again changes nothing; other content under an identity replaces what was there. */
  put(events: Iterable<LiveEvent>): PutAnswer;
  withdraw(identities: Iterable<EventIdentity>): WithdrawAnswer;
  /** Tables with more rows than before, all former rows unchanged: a changed clock record is new segments, and its events put again. */
  extendErrors(errors: ErrorTables): void;
  /** All events up to an instant, it included, have been put. Never goes back. Acts at the next flush. */
  completeUpTo(instant: Instant): void;
  /** Finds what the changes since the last flush did. */
  flush(): LiveChanges;
  /** How many events are held, and for how many there is room. */
  size(): { readonly events: number; readonly capacity: number };
}

/** Findings as slots, in any order, until they are named in theirs. */
class Findings {
  private readonly sets: Int32Array[] = [];
  private readonly crowds: Crowd[] = [];

  set(slots: Int32Array): void {
    this.sets.push(slots);
  }

  crowd(crowd: Crowd): void {
    this.crowds.push(crowd);
  }

  named(held: HeldEvents): LiveFindings {
    const compare = (a: number, b: number): number => held.compare(a, b);
    const setOf = (slots: Int32Array): LiveSet => {
      const events: EventIdentity[] = [];
      for (const slot of slots) events.push(held.identityOf(slot));
      return { events, fold: events.length };
    };
    return {
      sets: this.sets.sort((a, b) => compareSets(a, b, compare)).map(setOf),
      crowded: this.crowds.sort((a, b) => compare(a.event, b.event)).map((crowd) => ({ ...crowd, event: held.identityOf(crowd.event) })),
    };
  }
}

/**
 * Makes the finder of a live stream: the batch kernel, run again around whatever changed.
 *
 * After any arrival order, splitting, repetition, move and withdrawal the sets and the crowded events are those of the batch finder over
 * the events that are held. What begins with an event is final when completeness has passed the event by the widest window that the
 * farthest reach among held and expected events allows. Changes that could touch what is final are refused and answered as too late. What
 * can no longer matter to an event that is not final is released, so memory is bounded by what is open.
 *
 * @param setup the rule and its bounds; error tables that hold a row of each site and segment
 * @returns the finder; its answers depend on the events and on the completeness alone, in an order that is fixed
 */
export function createLiveFinder(setup: LiveSetup): LiveFinder {
  const { rule, bounds, limit, heldLimit = HELD_LIMIT, expectedReachNs = 0 } = setup;
  const { reachFactor } = bounds;
  const geometryNs = bounds.possibleNs.reduce((most, boundNs) => Math.max(most, boundNs), 0);
  const held = new HeldEvents(setup.windowVelocityAt);
  const settlement = new Settlement({ geometryNs, reachFactor, expectedReachNs });
  const pending = new PendingChanges(held, heldLimit, (slot) => settlement.refuses(held.instantOf(slot), held.reachNs[slot] ?? 0));
  const search = new RegionSearch(held, { rule, bounds, limit });
  const compare = (a: number, b: number): number => held.compare(a, b);
  const outcomes: Outcome[] = [];
  let errors = setup.errors;

  const reachOf = (slot: number): number =>
    rule.window.kind === 'light-time' ? eventReachNs({ events: held.columns, errors, rule }, slot) : 0;

  const settledCount = (): number => (settlement.settledTo ? held.countBefore(settlement.settledTo, 'at it too') : 0);

  /** Settles what completeness has passed, and answers it. */
  function settle(): LiveFindings {
    const final = new Findings();
    const before = settledCount();
    settlement.advance(held.farthestReachNs());
    const after = settledCount();
    for (let position = before; position < after; position++) {
      const slot = held.slotAt(position);
      const outcome = outcomes[slot];
      if (outcome && 'crowd' in outcome) final.crowd(outcome.crowd);
      else eachSet(outcome, (slots) => final.set(slots));
      settlement.settle(held.instantOf(slot), held.reachNs[slot] ?? 0);
    }
    return final.named(held);
  }

  /** Lets go of settled events that no event which is not settled can be near. */
  function release(): void {
    if (!settlement.settledTo) return;
    const widestNs = geometryNs + 2 * held.farthestReachNs() * reachFactor;
    held.releaseFirst(held.countBefore(earlierBy(settlement.settledTo, widestNs), 'before it only'), (slot) => {
      pending.release(slot);
      outcomes[slot] = undefined;
    });
  }

  return {
    put(events) {
      const tooLate: EventIdentity[] = [];
      const noRoom: EventIdentity[] = [];
      for (const event of events) {
        const hindrance = pending.put(event, reachOf);
        if (!hindrance) continue;
        const { site, series, sequence } = event;
        (hindrance === 'no room' ? noRoom : tooLate).push({ site, series, sequence });
      }
      return { tooLate, noRoom };
    },
    withdraw(identities) {
      const tooLate: EventIdentity[] = [];
      const notHeld: EventIdentity[] = [];
      for (const identity of identities) {
        const hindrance = pending.withdraw(identity);
        if (hindrance) (hindrance === 'too late' ? tooLate : notHeld).push(identity);
      }
      return { tooLate, notHeld };
    },
    extendErrors(larger) {
      errors = larger;
    },
    completeUpTo(instant) {
      settlement.completeUpTo(instant);
    },
    flush() {
      const told = { appeared: new Findings(), vanished: new Findings() };
      const { leaving, arriving } = pending.apply();
      for (const slot of leaving) {
        tellDifference(outcomes[slot], undefined, compare, told);
        outcomes[slot] = undefined;
      }
      const changed = [...leaving, ...arriving].sort(compare);
      const isCrowded = (slot: number): boolean => 'crowd' in (outcomes[slot] ?? {});
      const context = { held, bounds, geometryNs, settled: settledCount(), arrived: new Set(arriving), isCrowded };
      for (const region of regionsAround(changed, context)) {
        search.run(region, errors, outcomes, (slot, outcome) => {
          tellDifference(outcomes[slot], outcome, compare, told);
          outcomes[slot] = outcome;
        });
      }
      const appeared = told.appeared.named(held);
      const vanished = told.vanished.named(held);
      for (const slot of leaving) held.give(slot);
      const final = settle();
      release();
      return { appeared, vanished, final };
    },
    size: () => ({ events: held.count, capacity: held.capacity }),
  };
}
