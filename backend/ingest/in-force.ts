import { type Db } from '../db';
import { ErrorRows } from '../reconcile/error-rows';
import { createEventMaker } from '../reconcile/event-maker';
import { networkInForce, type NetworkInForce, type SiteInForce } from '../reconcile/network-in-force';
import { type NetworkAtWork } from './record-keeper';

/** Keeps what is in force of each network, read when it is first asked for and again when its set-up has changed. */
export class InForce {
  private readonly networks = new Map<number, NetworkAtWork>();
  private readonly errors = new Map<number, ErrorRows>();
  private readonly networkOfSite = new Map<number, number>();
  private readonly findNetwork;

  constructor(private readonly db: Db) {
    this.findNetwork = db.$client.prepare<[number], number>('SELECT network_id FROM sites WHERE id = ?').pluck();
  }

  /** @throws where there is no such network */
  network(networkId: number): NetworkAtWork {
    return this.networks.get(networkId) ?? this.read(networkId);
  }

  /** @throws where there is no such site */
  site(siteId: number): { readonly at: NetworkAtWork; readonly site: SiteInForce } {
    const networkId = this.networkOfSite.get(siteId) ?? this.findNetwork.get(siteId);
    if (networkId === undefined) throw new Error(`there is no site ${siteId}`);
    this.networkOfSite.set(siteId, networkId);
    const at = this.network(networkId);
    const site = at.network.siteById.get(siteId) ?? this.read(networkId).network.siteById.get(siteId);
    if (!site) throw new Error(`there is no site ${siteId}`);
    return { at: this.network(networkId), site };
  }

  /** Reads a network again; answers the sites whose events may come out otherwise, all where nothing was read before. */
  reload(networkId: number): { readonly network: NetworkInForce; readonly changed: readonly number[] } {
    const before = this.networks.get(networkId)?.network;
    const { network } = this.read(networkId);
    const former = new Map(before?.sites.map((site) => [site.id, groundText(before, site)]));
    const changed = network.sites.filter((site) => former.get(site.id) !== groundText(network, site)).map(({ id }) => id);
    return { network, changed };
  }

  private read(networkId: number): NetworkAtWork {
    const errors = this.errors.get(networkId) ?? new ErrorRows(this.db);
    this.errors.set(networkId, errors);
    const network = networkInForce(this.db, networkId, errors);
    if (!network) throw new Error(`there is no network ${networkId}`);
    const at = { network, maker: createEventMaker(network) };
    this.networks.set(networkId, at);
    return at;
  }
}

/** Everything that a site's events rest on, as one text. */
function groundText({ runs, tables }: NetworkInForce, { versions }: SiteInForce): string {
  return JSON.stringify([
    versions.map(({ id, segments }) => [id, segments.map((segment) => [segment.id, segment.referenceVersionId])]),
    runs.map(({ id, from, to }) => [id, from, to ?? null]),
    tables.leapSecondTableId,
    tables.orientationTableId,
  ]);
}
