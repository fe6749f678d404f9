import { type CHANGE_KINDS } from '#schema/words';
import { type Db } from '../db';
import { databaseOf, noteOf, type Tx } from '../writer/commit';

export type ChangeKind = (typeof CHANGE_KINDS)[number];

const statementsOf = new WeakMap<Db, ReturnType<typeof prepared>>();

/** Prepared once a database: a change is numbered at every group of records. */
function statements(db: Db): ReturnType<typeof prepared> {
  const found = statementsOf.get(db) ?? prepared(db);
  statementsOf.set(db, found);
  return found;
}

const prepared = ({ $client: client }: Db) => ({
  next: client.prepare<[number], number>('SELECT last + 1 FROM change_heads WHERE network_id = ?').pluck(),
  insert: client.prepare<[number, number, number, ChangeKind, string]>(
    'INSERT INTO changes (network_id, number, at_ms, kind, body) VALUES (?, ?, ?, ?, ?)',
  ),
});

/** The number that the next change of a network will have, by the writing connection. */
export function nextChange(db: Db, networkId: number): number {
  const number = statements(db).next.get(networkId);
  if (number === undefined) throw new Error(`network ${networkId} has no numbering of changes`);
  return number;
}

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
  const db = databaseOf(tx);
  const number = nextChange(db, networkId);
  statements(db).insert.run(networkId, number, atMs, kind, JSON.stringify(body)); // the head follows by itself
  noteOf(tx, { networkId, kind, number });
  return number;
}
