import { compareInstants, type Instant, instantOf } from '../time/instant';
import { sinceNs } from './held-events';

/** An instant moved back, rounded away from it. */
export function earlierBy({ taiS, ps }: Instant, ns: number): Instant {
  const wholeS = Math.floor(ns / 1e9);
  return instantOf(taiS - wholeS, ps - Math.ceil((ns - wholeS * 1e9) * 1e3));
}

/** An instant moved on, rounded away from it. */
export function laterBy({ taiS, ps }: Instant, ns: number): Instant {
  const wholeS = Math.floor(ns / 1e9);
  return instantOf(taiS + wholeS, ps + Math.ceil((ns - wholeS * 1e9) * 1e3));
}

const latest = (a: Instant | undefined, b: Instant): Instant => (a && compareInstants(a, b) > 0 ? a : b);

/** How far events may be apart and still be near. */
export interface Reaching {
  /** Widest window without errors, ns. */
  readonly geometryNs: number;
  /** Stretches a reach, see `WindowBounds`. */
  readonly reachFactor: number;
  /** Reach that events to come are expected to have, ns. */
  readonly expectedReachNs: number;
}

/**
 * Knows up to when the findings are final, and which changes come too late.
 *
 * An event is settled when completeness has passed it by the widest window that two events of the farthest reach could have. No event after
 * the completeness can then be near it, unless it reaches farther than any before.
 */
export class Settlement {
  /** All events up to here, it included, are settled. */
  settledTo: Instant | undefined;
  private complete: Instant | undefined;
  /** No settled event's own reach carries beyond this. */
  private carriedTo: Instant | undefined;
  /** The farthest reach among what came too late, and the instant at which its like is no longer waited for. */
  private missed: { readonly reachNs: number; readonly until: Instant } | undefined;

  constructor(private readonly reaching: Reaching) {}

  completeUpTo(instant: Instant): void {
    this.complete = latest(this.complete, instant);
  }

  /**
   * Could a change at an event's place change something settled? If so it comes too late, and finality waits for more of such a reach: a
   * clock that became doubtful is refused once, not for ever.
   */
  refuses(instant: Instant, reachNs: number): boolean {
    if (!this.touches(instant, reachNs)) return false;
    const until = laterBy(instant, reachNs * this.reaching.reachFactor);
    this.missed = { reachNs: Math.max(this.missed?.reachNs ?? 0, reachNs), until: latest(this.missed?.until, until) };
    return true;
  }

  /** Moves on as far as completeness allows, given the farthest reach of the events that are held. */
  advance(farthestNs: number): void {
    if (!this.complete) return;
    if (this.missed && compareInstants(this.complete, this.missed.until) > 0) this.missed = undefined;
    const { geometryNs, reachFactor, expectedReachNs } = this.reaching;
    const reachNs = Math.max(expectedReachNs, farthestNs, this.missed?.reachNs ?? 0);
    this.settledTo = latest(this.settledTo, earlierBy(this.complete, geometryNs + 2 * reachNs * reachFactor));
  }

  /** Takes note of an event that is settled. */
  settle(instant: Instant, reachNs: number): void {
    this.carriedTo = latest(this.carriedTo, laterBy(instant, reachNs * this.reaching.reachFactor));
  }

  private touches(instant: Instant, reachNs: number): boolean {
    if (this.settledTo && compareInstants(instant, this.settledTo) <= 0) return true;
    const { geometryNs, reachFactor } = this.reaching;
    return this.carriedTo !== undefined && sinceNs(this.carriedTo, instant) <= geometryNs + reachNs * reachFactor;
  }
}
