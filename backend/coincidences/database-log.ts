import { type FrameResolver } from '#shared/relativity/frame-resolver';
import { type Db } from '../db';
import { type NetworkInForce } from '../reconcile/network-in-force';
import { separationOfSites } from '../reconcile/site-worldline';
import { createEventReader, EVENT_QUERY, type EventRow } from '../reconcile/stored-event';
import { type StoredLog } from './stored-log';

type Ends = [networkId: number, fromS: number, fromPs: number, toS: number, toPs: number];

/**
 * The stored triggers of a network, read from the database.
 *
 * @param db any connection
 * @param network what is in force; its error rows grow with what is read
 * @param frames the network's frames
 */
export function databaseLog(db: Db, network: NetworkInForce, frames: Pick<FrameResolver, 'velocityAt'>): StoredLog {
  const toEvent = createEventReader(db, (siteId) => network.siteById.get(siteId)?.row ?? -1, network.errors);
  const read = db.$client.prepare<Ends, EventRow>(
    `${EVENT_QUERY} WHERE e.network_id = ? AND (e.tai_s, e.ps) >= (?, ?) AND (e.tai_s, e.ps) <= (?, ?) AND e.kind = 'trigger'`,
  );
  return {
    ground: {
      siteCodes: network.sites.map(({ code }) => code),
      worldlines: network.worldlines,
      get errors() {
        return network.errors.tables();
      },
      separation: separationOfSites,
      velocityAt: (frame, instant) => {
        const velocity = frames.velocityAt(frame, instant);
        if (!velocity.ok) throw new Error(`${velocity.problem.where}: ${velocity.problem.text}`);
        return velocity.value;
      },
    },
    between: (from, to) => read.all(network.id, from.taiS, from.ps, to.taiS, to.ps).map(toEvent),
  };
}
