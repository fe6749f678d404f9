import { type EventIdentity, identityText } from './event-identity';
import { type HeldEvents, type LiveEvent } from './held-events';

/** What becomes of an identity at the next flush: its slot in the order and the one that will be there; -1 for none. */
interface Change {
  readonly was: number;
  readonly becomes: number;
}

const UNCHANGED_NONE: Change = { was: -1, becomes: -1 };

/** What hinders a change. */
export type Hindrance = 'too late' | 'no room' | 'not held';

/** Gathers what happens to identities between two flushes, so that only the difference counts. */
export class PendingChanges {
  /** Slots of the events in the order. */
  private readonly known = new Map<string, number>();
  private readonly changes = new Map<string, Change>();
  /** Identities that are held once the changes have been made. */
  private count = 0;

  /**
   * @param held where the events are
   * @param limit most events to hold
   * @param isTooLate asked for the slot of each place that an event comes to or leaves
   */
  constructor(
    private readonly held: HeldEvents,
    private readonly limit: number,
    private readonly isTooLate: (slot: number) => boolean,
  ) {}

  /** An event comes, again or elsewhere. */
  put(event: LiveEvent, reachOf: (slot: number) => number): Hindrance | undefined {
    const text = identityText(event);
    const pending = this.changes.get(text);
    const { was, becomes } = pending ?? this.unchanged(text);
    if (becomes >= 0 && this.held.holdsSame(becomes, event)) return undefined;
    if (becomes < 0 && this.count >= this.limit) return 'no room';
    if (was >= 0 && this.held.holdsSame(was, event)) {
      this.replace(text, { was, becomes }, was);
      return undefined;
    }
    const slot = this.held.take(event);
    this.held.reachNs[slot] = reachOf(slot);
    if (this.isTooLate(slot) || (!pending && was >= 0 && this.isTooLate(was))) {
      this.held.give(slot);
      return 'too late';
    }
    this.replace(text, { was, becomes }, slot);
    return undefined;
  }

  /** An event goes. */
  withdraw(identity: EventIdentity): Hindrance | undefined {
    const text = identityText(identity);
    const pending = this.changes.get(text);
    const { was, becomes } = pending ?? this.unchanged(text);
    if (becomes < 0) return 'not held';
    if (!pending && this.isTooLate(was)) return 'too late';
    this.replace(text, { was, becomes }, -1);
    return undefined;
  }

  /** Brings the order of events up to date; answers the slots that went, which are still to be given back, and those that came. */
  apply(): { readonly leaving: readonly number[]; readonly arriving: readonly number[] } {
    const leaving: number[] = [];
    const arriving: number[] = [];
    for (const [text, { was, becomes }] of this.changes) {
      if (was >= 0) leaving.push(was);
      if (becomes >= 0) arriving.push(becomes);
      if (becomes >= 0) this.known.set(text, becomes);
      else this.known.delete(text);
    }
    this.changes.clear();
    const inOrder = (a: number, b: number): number => this.held.compare(a, b);
    this.held.rearrange(leaving.sort(inOrder), arriving.sort(inOrder));
    return { leaving, arriving };
  }

  /** An event in the order is released; no change of it is pending. */
  release(slot: number): void {
    this.known.delete(identityText(this.held.identityOf(slot)));
    this.count--;
  }

  private unchanged(text: string): Change {
    const slot = this.known.get(text);
    return slot === undefined ? UNCHANGED_NONE : { was: slot, becomes: slot };
  }

  private replace(text: string, { was, becomes }: Change, slot: number): void {
    if (becomes >= 0 && becomes !== was) this.held.give(becomes);
    if (becomes < 0) this.count++;
    if (slot < 0) this.count--;
    if (slot === was) this.changes.delete(text);
    else this.changes.set(text, { was, becomes: slot });
  }
}
