import { type Db } from '../db';
import { type ChangeKind } from '../live/note-change';
import { isLostWrite } from './lost-write';

export type Tx = Parameters<Parameters<Db['transaction']>[0]>[0];

/** A change of a network, as it was numbered in the transaction that made it. */
export interface NotedChange {
  readonly networkId: number;
  readonly kind: ChangeKind;
  readonly number: number;
}

/** What no longer holds as it did, so that whoever leans on it looks again, or is cut off. */
export type Revoked =
  /** One session ended. */
  | { readonly kind: 'session'; readonly sessionId: number }
  /** Sessions of a person ended, all or all but one: disabled, a new password, signed out everywhere. Each is to be looked up again. */
  | { readonly kind: 'person'; readonly personId: number }
  /** A role of a person was taken, or its end was set. */
  | { readonly kind: 'role'; readonly personId: number }
  | { readonly kind: 'site-key'; readonly keyId: number; readonly siteId: number };

/** What a commit brought that others want to hear of. */
export interface Committed {
  readonly changes: readonly NotedChange[];
  readonly revoked: readonly Revoked[];
}

export type CommitListener = (committed: Committed) => void;

interface Noted {
  readonly db: Db;
  readonly changes: NotedChange[];
  readonly revoked: Revoked[];
}

/** What is noted in the transaction that a database has open. */
const openIn = new WeakMap<Db, Noted>();
/** What Drizzle hands to the work of a database's transactions: made once, since making it anew costs more than a small transaction. */
const handles = new WeakMap<Db, Tx>();
const databases = new WeakMap<Tx, Db>();
const listenersOf = new WeakMap<Db, Set<CommitListener>>();

/**
 * Does work in one transaction (BEGIN IMMEDIATE), and once it is committed tells the listeners of this database what was noted in it. The one
 * way to a transaction that notes a change or a revocation. Within the work of another one it is a part of that: undone by itself, committed with
 * it, and told when that is committed.
 *
 * @param db the writing connection
 * @param work synchronous; what it throws undoes the whole, and nobody is told; a lost write ends the process, whoever catches it
 * @returns what the work returns
 */
export function commit<T>(db: Db, work: (tx: Tx) => T): T {
  const outer = openIn.get(db);
  const noted: Noted = { db, changes: [], revoked: [] };
  openIn.set(db, noted);
  let value: T;
  try {
    value = inTransaction(db, work);
  } finally {
    if (outer) openIn.set(db, outer);
    else openIn.delete(db);
  }
  if (outer) {
    outer.changes.push(...noted.changes);
    outer.revoked.push(...noted.revoked);
    return value;
  }
  if (noted.changes.length > 0 || noted.revoked.length > 0) for (const listener of listenersOf.get(db) ?? []) tell(listener, noted);
  return value;
}

function inTransaction<T>(db: Db, work: (tx: Tx) => T): T {
  try {
    const tx = handleOf(db);
    return db.$client.transaction(() => work(tx)).immediate();
  } catch (fault) {
    if (isLostWrite(fault)) endBy(fault);
    throw fault;
  }
}

function handleOf(db: Db): Tx {
  const known = handles.get(db);
  if (known) return known;
  const made = db.transaction((tx) => tx);
  handles.set(db, made);
  databases.set(made, db);
  return made;
}

/** Thrown where nothing catches it. */
const endBy = (fault: unknown): void =>
  void setImmediate(() => {
    throw fault;
  });

/** What is committed stays so: a listener that fails ends the process, since what it keeps would no longer fit the database. */
function tell(listener: CommitListener, noted: Noted): void {
  try {
    listener(noted);
  } catch (fault) {
    endBy(fault);
  }
}

/**
 * Hears of each commit that noted something, in their order and before whoever asked for it is answered.
 *
 * @param db the writing connection
 * @returns ends it
 */
export function onCommitted(db: Db, listener: CommitListener): () => void {
  const listeners = listenersOf.get(db) ?? new Set();
  listenersOf.set(db, listeners.add(listener));
  return () => void listeners.delete(listener);
}

/** Notes a change in the transaction that `commit` handed out; `noteChange` does so. */
export const noteOf = (tx: Tx, change: NotedChange): number => notedIn(tx).changes.push(change);

/** The database of a transaction that `commit` handed out, for statements that are prepared once. */
export const databaseOf = (tx: Tx): Db => notedIn(tx).db;

/** Notes in a transaction that something was revoked, for whoever holds a socket by it. */
export const noteRevoked = (tx: Tx, revoked: Revoked): number => notedIn(tx).revoked.push(revoked);

function notedIn(tx: Tx): Noted {
  const db = databases.get(tx);
  const noted = db && openIn.get(db);
  if (!noted) throw new Error('something was noted in a transaction that commit() of backend/writer/commit.ts did not begin');
  return noted;
}
