import { type Db } from '../db';
import { completenessOf } from '../ingest/completeness';
import { type Stored, type StoredListener } from '../ingest/stored';
import { framesInForce } from '../reconcile/frames-in-force';
import { type NetworkInForce } from '../reconcile/network-in-force';
import { databaseLog } from './database-log';
import { NetworkSearch } from './network-search';
import { type StoredLog } from './stored-log';

/** What the search of all networks stands on. */
export interface SearchGround {
  /** The writing connection. */
  readonly db: Db;
  readonly nowMs: () => number;
  /** What is in force of a network: the ingest's own, since the rows of what it hands over are of its error tables. */
  readonly networkOf: (networkId: number) => NetworkInForce;
}

/**
 * Keeps the coincidences of all networks, in the thread that writes: told of each commit of events, it puts in force what came of it before it
 * returns. What takes longer is done by `step`, piece by piece, whenever nobody waits.
 */
export class CoincidenceSearch implements StoredListener {
  private readonly networks = new Map<number, NetworkSearch>();

  constructor(private readonly ground: SearchGround) {}

  /** Takes a network in: what was stored and not searched when the process last ended is searched now, and the live edge is read. */
  start(networkId: number): NetworkSearch {
    const { db, nowMs } = this.ground;
    const log = this.logOf(this.ground.networkOf(networkId));
    const search = new NetworkSearch({ db, nowMs, networkId }, log, completenessOf(db, networkId));
    this.networks.set(networkId, search);
    return search;
  }

  /** A search that failed half-way knows no longer what it knew: it is begun anew, from what is stored, with the next commit. */
  onStored = (stored: Stored): void => {
    const search = this.networks.get(stored.networkId);
    if (!search) {
      this.start(stored.networkId);
      return;
    }
    try {
      search.take(stored);
    } catch (fault) {
      this.networks.delete(stored.networkId);
      throw fault;
    }
  };

  onInForce = (network: NetworkInForce): void => {
    this.networks.get(network.id)?.renew(this.logOf(network));
  };

  /** A rule of a network was added, changed, or taken out of use. */
  rulesChanged(networkId: number): void {
    this.networks.get(networkId)?.rulesChanged();
  }

  /** Makes the finders of a network anew, for a set-up that was changed. */
  rebuild(networkId: number): void {
    this.networks.get(networkId)?.renew(this.logOf(this.ground.networkOf(networkId)));
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

  private logOf(network: NetworkInForce): StoredLog {
    const { db } = this.ground;
    const frames = framesInForce(db, network);
    if (!frames.ok) throw new Error(`the frames of network ${network.code}: ${frames.problem.where} ${frames.problem.text}`);
    return databaseLog(db, network, frames.value.resolver);
  }
}
