import { type EventIdentity } from './event-identity';

/** A coincidence of the live stream. */
export interface LiveSet {
  /** In the order of events. */
  readonly events: readonly EventIdentity[];
  readonly fold: number;
}

/** An event that is the earliest of more sets than are listed; the numbers as in `Crowd`. */
export interface LiveCrowd {
  readonly event: EventIdentity;
  readonly sites: number;
  readonly events: number;
  readonly setsAtLeast: number;
}

/** Sets and crowded events, both in the order of their events. */
export interface LiveFindings {
  readonly sets: readonly LiveSet[];
  readonly crowded: readonly LiveCrowd[];
}

/** What a flush changed. A set of which a member moved stands in both `vanished` and `appeared`, since its pairs are others. */
export interface LiveChanges {
  readonly appeared: LiveFindings;
  readonly vanished: LiveFindings;
  /** What no event to come can change: each is listed once. */
  readonly final: LiveFindings;
}

/** Events that were not taken; they must be brought to a search of the whole log, since the live finder goes on without them. */
export interface PutAnswer {
  /** Something final could have been changed by them. Where the identity was held before, its former content stays. */
  readonly tooLate: readonly EventIdentity[];
  /** As many events as the limit allows are held. */
  readonly noRoom: readonly EventIdentity[];
}

/** Events that were not withdrawn. */
export interface WithdrawAnswer {
  /** Still counted: something final could have been changed. */
  readonly tooLate: readonly EventIdentity[];
  /** Released, or never put. */
  readonly notHeld: readonly EventIdentity[];
}
