import { type EventIdentity } from '#shared/coincidence/event-identity';
import { type Instant } from '#shared/time/instant';
import { type NetworkInForce } from '../reconcile/network-in-force';
import { type StoredEvent } from '../reconcile/stored-event';

/** An event that no longer stands; the identity's site is its row. */
export interface WithdrawnEvent extends EventIdentity {
  readonly triggerId: number;
  readonly siteId: number;
}

/** What one commit did to a network's events, told after it. */
export interface Stored {
  readonly networkId: number;
  /** Number of the commit's change; 0 where no event came or went. */
  readonly changeNumber: number;
  /** In the order in which they came; also events that were computed anew, which stand in the place of what they were. All kinds. */
  readonly arrived: readonly StoredEvent[];
  readonly withdrawn: readonly WithdrawnEvent[];
  /** The instant up to which all sites have sent everything; undefined while one of them has not said. */
  readonly completeUpTo: Instant | undefined;
}

/** Who is told of what was stored. Called after the commit, one at a time, in the order of commits. */
export interface StoredListener {
  readonly onStored: (stored: Stored) => void;
  /**
   * Offered what is being stored, inside its transaction and while nothing else waits to be written. Who takes it (true) is not told of it again:
   * what they write is committed with it, and what of theirs fails is undone by themselves.
   */
  readonly takeAlong?: (stored: Stored) => boolean;
  /**
   * What a network is reconciled by has changed. Error rows go on; where a site was added, rows of sites have moved and all must be read again.
   * Called before what was computed anew by it is told.
   */
  readonly onInForce: (network: NetworkInForce) => void;
}
