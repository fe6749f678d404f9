import { type EventIdentity, identityText } from '#shared/coincidence/event-identity';
import { createLiveFinder, type LiveFinder } from '#shared/coincidence/live-finder';
import { type LiveCrowd } from '#shared/coincidence/live-answers';
import { compareInstants, type Instant } from '#shared/time/instant';
import { type WithdrawnEvent } from '../ingest/stored';
import { type StoredEvent } from '../reconcile/stored-event';
import { type ReachHistory } from './reach-history';
import { EVER, movedBy, NEVER, reachNs, type SearchSetup, sigmaReachNs, widestNs } from './search-setup';
import { type Place } from './stored-log';
import { type FoundCrowd, type Stretch, type StretchSearch } from './stretch-search';
import { isEligible } from './taking-part';

/**
 * Most events that a live finder holds before it lets go of the earlier half, which the search of the stored log then answers for: 50 s of
 * 2,000 a second. While completeness follows, it holds far fewer.
 */
const MOST_HELD = 100_000;

/** Reaches are rounded up to a part of the window, so that errors which grow with the age of a clock record renew a finder seldom. */
const LEAST_REACH = 1 / 8;

interface Found {
  readonly sets: Map<string, readonly StoredEvent[] | undefined>;
  readonly crowds: Map<number, FoundCrowd | undefined>;
}

/** What the finder could not take. */
interface Late {
  readonly places: Place[];
  /** The finder no longer knows everything around what it works on. */
  mustRenew: boolean;
}

/** What the rule's sets are to become; undefined for a set or crowd that is no more. */
export interface Wanted {
  readonly sets: ReadonlyMap<string, readonly StoredEvent[] | undefined>;
  /** By trigger. */
  readonly crowds: ReadonlyMap<number, FoundCrowd | undefined>;
  /** Where the stored log must be searched, which overrules the sets that begin there. */
  readonly stretches: readonly Stretch[];
}

/** What the search of a rule asks the database. */
export interface RuleSources {
  readonly stretches: StretchSearch;
  readonly reaches: ReachHistory;
  /** Where an event stood before its last change; undefined where it never stood elsewhere. */
  readonly formerPlace: (triggerId: number) => Place | undefined;
  /** The instant of the event so many before the last one; undefined where there are not so many. */
  readonly instantFromLast: (back: number) => Instant | undefined;
  readonly nameOf: (events: readonly EventIdentity[]) => string;
}

/** What a commit did, as a rule sees it. */
export interface Arrivals {
  readonly arrived: readonly StoredEvent[];
  readonly withdrawn: readonly WithdrawnEvent[];
}

/**
 * The search of one rule at the live edge.
 *
 * A live finder holds the latest events and finds what they begin, without asking the database. What it cannot answer for (events earlier than
 * its horizon, or with errors wider than it was made for) is found by searching a stretch of the stored log, and where that may touch what the
 * finder still works on, the finder is made anew.
 */
export class RuleSearch {
  private finder: LiveFinder;
  private readonly held = new Map<string, StoredEvent>();
  /** Up to here the finder leaves everything to the stored log. */
  private horizon: Instant | undefined;
  private farthestNs = 0;
  private heldAtPrune = 0;

  constructor(
    readonly setup: SearchSetup,
    private readonly sources: RuleSources,
    complete: Instant | undefined,
  ) {
    this.finder = this.renewed(complete);
  }

  /** No events of this rule are near when farther apart than this, ns. */
  windowNs(): number {
    return widestNs(this.setup, 2 * this.farthestNs);
  }

  /** All sets that begin up to here are final: nothing that comes after the completeness can be near their first event. */
  finalTo(complete: Instant | undefined): Instant | undefined {
    return complete && movedBy(complete, -this.windowNs());
  }

  /** Makes the finder anew, with the latest events of the stored log. */
  renew(complete: Instant | undefined): void {
    this.finder = this.renewed(complete);
  }

  /** Takes in what a commit changed, and finds what came of it. */
  take(arrivals: Arrivals, complete: Instant | undefined): Wanted {
    const late = this.feed(arrivals);
    const found = this.flush(complete);
    // What is gone or takes no part begins nothing, whatever the finder may still know of it.
    for (const { triggerId } of arrivals.withdrawn) found.crowds.set(triggerId, undefined);
    for (const event of arrivals.arrived) if (!isEligible(this.setup.active, event)) found.crowds.set(event.triggerId, undefined);
    if (late.mustRenew) this.renew(complete);
    return { ...found, stretches: this.stretchesAround(late.places) };
  }

  /** Brings the changes to the finder, and gathers those that the stored log must be searched for. */
  private feed({ arrived, withdrawn }: Arrivals): Late {
    const { active } = this.setup;
    const late: Late = { places: [], mustRenew: false };
    /** Where dead times began or no longer do. */
    const shadows: Place[] = [];
    for (const gone of withdrawn) {
      const place = this.sources.formerPlace(gone.triggerId);
      if (place) shadows.push(place);
      if (!this.drop(gone) && place) this.leave(place, late);
    }
    for (const event of arrived) {
      const known = this.held.get(identityText(event));
      // Other content may have the same numbers, which the finder would pass over.
      if (event.eventVersion > 1 || (known && known.triggerId !== event.triggerId)) {
        late.places.push(event);
        const place = this.sources.formerPlace(event.triggerId);
        if (place) {
          shadows.push(place);
          this.leave(place, late);
        }
      }
      if (event.kind !== 'trigger') continue;
      if (active.deadTimeNs > 0) shadows.push(event);
      if (!isEligible(active, event)) this.drop(event);
      else if (active.deadTimeNs === 0) this.bring(event, late);
    }
    if (active.deadTimeNs > 0) this.feedShadows(shadows, late);
    return late;
  }

  /** Decides anew who takes part in the dead times that changed. */
  private feedShadows(places: readonly Place[], late: Late): void {
    for (const stretch of joined(places, 0, this.setup.active.deadTimeNs)) {
      const { taking, dead } = this.sources.stretches.attendance(this.setup, stretch);
      for (const event of dead) if (!this.drop(event)) this.leave(event, late);
      for (const event of taking) this.bring(event, late);
    }
  }

  /** Puts an event into the finder, or among those that are late for it. */
  private bring(event: StoredEvent, late: Late): void {
    const isTooWide = reachNs(this.setup, sigmaReachNs(this.setup.ground, event)) > this.farthestNs;
    const { tooLate, noRoom } = isTooWide ? { tooLate: [], noRoom: [event] } : this.finder.put([event]);
    if (tooLate.length + noRoom.length === 0) {
      this.held.set(identityText(event), event);
      return;
    }
    this.leave(event, late);
    late.mustRenew ||= noRoom.length > 0;
  }

  /** Takes an event out of the finder; false where it can not, or never had it. */
  private drop(identity: EventIdentity): boolean {
    const { tooLate, notHeld } = this.finder.withdraw([identity]);
    if (tooLate.length + notHeld.length > 0) return false;
    this.held.delete(identityText(identity));
    return true;
  }

  /** Leaves a place to the search of the stored log. */
  private leave(place: Place, late: Late): void {
    late.places.push(place);
    late.mustRenew ||= this.mayTouchFinder(place);
  }

  private flush(complete: Instant | undefined): Found {
    this.finder.extendErrors(this.setup.ground.errors);
    this.moveHorizon(complete);
    const { appeared, vanished } = this.finder.flush();
    const sets = new Map<string, readonly StoredEvent[] | undefined>();
    const crowds = new Map<number, FoundCrowd | undefined>();
    const eventOf = (identity: EventIdentity): StoredEvent[] => {
      const event = this.held.get(identityText(identity));
      return event ? [event] : [];
    };
    const crowdsOf = (list: readonly LiveCrowd[], told: (crowd: LiveCrowd) => FoundCrowd | undefined): void => {
      for (const crowd of list) for (const { triggerId } of eventOf(crowd.event)) crowds.set(triggerId, told(crowd));
    };
    for (const { events } of vanished.sets) sets.set(this.sources.nameOf(events), undefined);
    for (const { events } of appeared.sets) {
      const members = events.flatMap(eventOf);
      if (members.length < events.length) throw new Error('a set appeared of which an event was let go');
      sets.set(this.sources.nameOf(events), members);
    }
    crowdsOf(vanished.crowded, () => undefined);
    crowdsOf(appeared.crowded, ({ sites, events, setsAtLeast }) => ({ sites, events, setsAtLeast }));
    this.prune();
    return { sets, crowds };
  }

  private moveHorizon(complete: Instant | undefined): void {
    if (complete && (!this.horizon || compareInstants(complete, this.horizon) > 0)) this.horizon = complete;
    if (this.finder.size().events > MOST_HELD) {
      const middle = this.sources.instantFromLast(MOST_HELD / 2);
      if (middle) this.horizon = movedBy(middle, 2 * this.windowNs());
    }
    if (this.horizon) this.finder.completeUpTo(this.horizon);
  }

  /** Forgets events of which no set can appear any more. */
  private prune(): void {
    if (!this.horizon || this.held.size < 2 * this.heldAtPrune + 1_000) return;
    const first = movedBy(this.horizon, -2 * this.windowNs());
    for (const [text, event] of this.held) if (compareInstants(event, first) < 0) this.held.delete(text);
    this.heldAtPrune = this.held.size;
  }

  /** Whether an event at a place may be near one of which the finder has not settled what begins with it. */
  private mayTouchFinder(place: Place): boolean {
    if (!this.horizon) return true;
    const reach = reachNs(this.setup, this.carriesNs(place));
    const settledTo = movedBy(this.horizon, -this.windowNs());
    return compareInstants(movedBy(place, widestNs(this.setup, reach + this.farthestNs)), settledTo) >= 0;
  }

  private carriesNs({ sigmaNs }: Place): number {
    return sigmaNs + this.sources.reaches.placeNs;
  }

  /** The stretches of which a change at one of the places may alter what begins there, joined where they meet. */
  stretchesAround(places: readonly Place[]): readonly Stretch[] {
    if (places.length === 0) return [];
    const sorted = places.toSorted(compareInstants);
    const span = { from: sorted[0] ?? EVER, to: sorted.at(-1) ?? NEVER };
    const carriesNs = sorted.reduce((most, place) => Math.max(most, this.carriesNs(place)), 0);
    const windowNs = this.sources.stretches.windowAround(this.setup, span, carriesNs);
    return joined(sorted, windowNs, windowNs);
  }

  /**
   * Loads what the finder must know: the latest events, from two windows before its horizon on, so that whatever it is not to settle has all its
   * neighbours. Without completeness the horizon lies behind half of what it may hold.
   */
  private renewed(complete: Instant | undefined): LiveFinder {
    const { setup, sources } = this;
    const earliest = sources.instantFromLast(MOST_HELD / 2);
    let from = earliest ?? EVER;
    this.farthestNs = this.roundedReach(from);
    if (complete) {
      // A window that begins earlier may hold errors that reach farther, which make it wider: each turn doubles it, or is the last.
      for (;;) {
        const wanted = movedBy(complete, -2 * this.windowNs());
        from = earliest && compareInstants(earliest, wanted) > 0 ? earliest : wanted;
        const farthestNs = this.roundedReach(from);
        if (farthestNs <= this.farthestNs) break;
        this.farthestNs = farthestNs;
      }
    }
    const loadedTo = from === EVER ? undefined : movedBy(from, 2 * this.windowNs());
    this.horizon = complete && loadedTo && compareInstants(loadedTo, complete) < 0 ? complete : (loadedTo ?? complete);
    this.held.clear();
    const events = sources.stretches.participants(setup, { from, to: NEVER });
    const finder = createLiveFinder({
      errors: setup.ground.errors,
      rule: setup.active.rule,
      bounds: setup.bounds,
      limit: setup.active.limit,
      windowVelocityAt: setup.windowVelocityAt,
      expectedReachNs: this.farthestNs,
    });
    for (const event of events) this.held.set(identityText(event), event);
    finder.put(events);
    if (this.horizon) finder.completeUpTo(this.horizon);
    finder.flush();
    this.heldAtPrune = this.held.size;
    return finder;
  }

  /** The farthest reach from an instant on, rounded up to a power of two of the least that is told apart. */
  private roundedReach(from: Instant): number {
    const { setup, sources } = this;
    if (setup.active.rule.window.kind === 'fixed') return 0;
    const leastNs = setup.geometryNs * LEAST_REACH;
    const window = (carriesNs: number): number => widestNs(setup, 2 * reachNs(setup, carriesNs));
    const mostNs = reachNs(setup, sources.reaches.around(from, NEVER, window));
    return mostNs <= leastNs ? leastNs : 2 ** Math.ceil(Math.log2(mostNs));
  }
}

/** The stretches from so long before each place to so long after it, joined where they meet. */
function joined(places: readonly Instant[], beforeNs: number, afterNs: number): readonly Stretch[] {
  const stretches: { from: Instant; to: Instant }[] = [];
  for (const place of places.toSorted(compareInstants)) {
    const from = movedBy(place, -beforeNs);
    const to = movedBy(place, afterNs);
    const last = stretches.at(-1);
    if (last && compareInstants(from, last.to) <= 0) last.to = to;
    else stretches.push({ from, to });
  }
  return stretches;
}
