import { part, type Query } from '../search/query';

/** A row of the list of changes. */
export interface ChangeRow {
  readonly number: number;
  readonly atMs: number;
  readonly kind: string;
  readonly body: string;
}

/** The changes of a network behind a number. */
export const changesQuery = (networkId: number, after: number, most: number): Query =>
  part(
    'SELECT number, at_ms AS atMs, kind, body FROM changes WHERE network_id = ? AND number > ? ORDER BY number LIMIT ?',
    networkId,
    after,
    most,
  );

/** The last change, and the oldest that is kept. */
export const headQuery = (networkId: number): Query => part('SELECT last, oldest FROM change_heads WHERE network_id = ?', networkId);
