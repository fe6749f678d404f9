import { eq } from 'drizzle-orm';
import { changeHeads, changes } from '#schema/changes';
import { type CHANGE_KINDS } from '#schema/words';
import { noteOf, type Tx } from '../writer/commit';

export type ChangeKind = (typeof CHANGE_KINDS)[number];

/**
 * Numbers a change of a network, in the transaction that makes it.
 *
 * @param tx the transaction, of `commit` or `change`, whose listeners hear of it once it is committed
 * @param networkId whose numbering
 * @param kind what changed
 * @param body what a subscriber is told, as JSON of at most 256 KiB; of many records their range of ids, not the records
 * @param atMs the server's clock
 * @returns the change's number
 */
export function noteChange(tx: Tx, networkId: number, kind: ChangeKind, body: object, atMs: number): number {
  const head = tx.select({ last: changeHeads.last }).from(changeHeads).where(eq(changeHeads.networkId, networkId)).get();
  if (!head) throw new Error(`network ${networkId} has no numbering of changes`);
  const number = head.last + 1;
  tx.insert(changes)
    .values({ networkId, number, atMs, kind, body: JSON.stringify(body) })
    .run(); // the head follows by itself
  noteOf(tx, { networkId, kind, number });
  return number;
}
