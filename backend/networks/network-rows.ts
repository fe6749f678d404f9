import { and, asc, eq, gt, inArray, isNull } from 'drizzle-orm';
import { type Network } from '#shared/contract/network-routes';
import { coordinatesAll, type HeldRole, type Place } from '#shared/contract/roles';
import { networks } from '#schema/schema';
import { absent, conflict } from '../api/refusal';
import { type Db } from '../db';

type Rows = Pick<Db, 'select'>;
type NetworkRow = typeof networks.$inferSelect;

/** A network as it is shown; refused as absent when there is none. */
export const networkOfId = (db: Rows, networkId: number): Network => shown(networkRow(db, networkId));

/** The row of a network; refused as absent when there is none. */
export function networkRow(db: Rows, networkId: number): NetworkRow {
  const row = db.select().from(networks).where(eq(networks.id, networkId)).get();
  if (!row) throw absent();
  return row;
}

/** The row of a network that nothing has closed; something is about to be made or changed in it. */
export function openNetwork(db: Rows, networkId: number): NetworkRow {
  const row = networkRow(db, networkId);
  if (row.closedAt !== null) throw conflict('The network is closed: nothing of it is changed any more.');
  return row;
}

/** The open networks in which someone has a role, from behind an id on. */
export function networksOf(db: Rows, held: readonly HeldRole[], afterId: number, most: number): Network[] {
  const own = held.flatMap(({ networkId }) => (networkId === null ? [] : [networkId]));
  const seen = coordinatesAll(held) ? undefined : inArray(networks.id, own);
  return db
    .select()
    .from(networks)
    .where(and(gt(networks.id, afterId), isNull(networks.closedAt), seen))
    .orderBy(asc(networks.id))
    .limit(most)
    .all()
    .map(shown);
}

/** Where a network lies; undefined when there is none of this id. */
export function placeOfNetwork(db: Rows, networkId: number): Place | undefined {
  const row = db.select({ id: networks.id }).from(networks).where(eq(networks.id, networkId)).get();
  return row && { kind: 'network', networkId };
}

function shown({ originTaiS, originPs, createdBy: _by, ...row }: NetworkRow): Network {
  return { ...row, origin: { taiS: originTaiS, ps: originPs } };
}
