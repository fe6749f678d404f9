import { type Db } from '../db';
import { part, rowsOf } from './query';

/** The number of a network's last change; 0 before the first, and where there is no such network. */
export const lastChange = (db: Pick<Db, '$client'>, networkId: number): number =>
  rowsOf<{ last: number }>(db, part('SELECT last FROM change_heads WHERE network_id = ?', networkId))[0]?.last ?? 0;

/**
 * Reads something of a network in one transaction with the number of its last change, so that what follows is what changes behind it bring.
 *
 * @param read synchronous
 * @returns what was read, with the number
 */
export const atChange = <T extends object>(db: Pick<Db, '$client'>, networkId: number, read: () => T): T & { readonly change: number } =>
  db.$client.transaction(() => ({ ...read(), change: lastChange(db, networkId) }))();
