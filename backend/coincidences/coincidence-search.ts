import { type FrameResolver } from '#shared/relativity/frame-resolver';
import { type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { type Stored, type StoredListener } from '../ingest/stored';
import { type NetworkInForce } from '../reconcile/network-in-force';
import { databaseLog } from './database-log';
import { NetworkSearch } from './network-search';

/** What the search of all networks stands on. */
export interface SearchGround {
  /** The writing connection. */
  readonly db: Db;
  readonly nowMs: () => number;
  /** The frames of a network, for rules whose window is fixed in one. */
  readonly framesOf: (network: NetworkInForce) => Pick<FrameResolver, 'velocityAt'>;
}

/**
 * Keeps the coincidences of all networks, in the thread that writes: told of each commit of events, it puts in force what came of it before it
 * returns. What takes longer is done by `step`, piece by piece, whenever nobody waits.
 */
export class CoincidenceSearch implements StoredListener {
  private readonly networks = new Map<number, NetworkSearch>();

  constructor(private readonly ground: SearchGround) {}

  /**
   * Takes a network in: what was stored and not searched when the process last ended is searched now, and the live edge is read.
   *
   * @param completeUpTo the instant up to which all its sites have sent everything
   */
  start(network: NetworkInForce, completeUpTo: Instant | undefined): void {
    const { db, nowMs } = this.ground;
    this.networks.set(network.id, new NetworkSearch({ db, nowMs, networkId: network.id }, this.logOf(network), completeUpTo));
  }

  onStored = (stored: Stored): void => {
    this.networks.get(stored.networkId)?.take(stored);
  };

  onInForce = (network: NetworkInForce): void => {
    this.networks.get(network.id)?.renew(this.logOf(network));
  };

  /** A rule of a network was added, changed, or taken out of use. */
  rulesChanged(networkId: number): void {
    this.networks.get(networkId)?.rulesChanged();
  }

  /** Searches a network's whole log anew, by steps: a frame that a window is fixed in has changed. */
  searchLog(networkId: number): void {
    this.networks.get(networkId)?.searchLog();
  }

  /** Does a bounded piece of what is left to do in any network; false when nothing is. */
  step(): boolean {
    let hasMore = false;
    for (const network of this.networks.values()) hasMore = network.step() || hasMore;
    return hasMore;
  }

  private logOf(network: NetworkInForce): ReturnType<typeof databaseLog> {
    return databaseLog(this.ground.db, network, this.ground.framesOf(network));
  }
}
