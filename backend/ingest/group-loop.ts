import { SqliteError } from 'better-sqlite3';
import { type Logger } from 'pino';
import { type Db } from '../db';
import { commit, type Tx } from '../writer/commit';
import { type GroupNotes } from './group-notes';
import { type RecordKeeper } from './record-keeper';
import { type Stored } from './stored';

/** Rows after which a transaction takes in no more of what waits. */
export const MOST_GROUP_ROWS = 1_000;

/** Something that is to be written, and who waits for it. */
export interface Waiting {
  /** About how many rows it is. */
  readonly rows: number;
  /** Writes it, inside the transaction. */
  readonly work: (nowMs: number, tx: Tx) => void;
  /** Its transaction is committed. */
  readonly done: () => void;
  /** Nobody knows whether it was stored. */
  readonly unknown: () => void;
  /** The same in smaller parts, each with a transaction of its own, where one of them broke the transaction of all. */
  readonly alone: () => readonly Pick<Waiting, 'work'>[];
  /** Written where a part cannot be, so that one bad part holds up no other. */
  readonly instead: (part: number, nowMs: number) => void;
}

/** What the loop stands on. */
export interface LoopSources {
  readonly db: Db;
  readonly keeper: RecordKeeper;
  readonly notes: GroupNotes;
  readonly nowMs: () => number;
  readonly log: Logger;
  readonly tell: (stored: Stored) => void;
  /** Whether somebody took what is being stored already, inside its transaction. */
  readonly takeAlong: (stored: Stored) => boolean;
  /** The database cannot be written: the process must end. */
  readonly fatal: (fault: unknown) => void;
}

/** One transaction with the books written at its end; answers what is to be told. After a fault the books are forgotten. */
export function writeBooks<T>(
  { keeper, notes }: Pick<LoopSources, 'keeper' | 'notes'>,
  tx: Tx,
  nowMs: number,
  work: () => T,
): { readonly value: T; readonly stored: readonly Stored[] } {
  const value = work();
  keeper.write();
  return { value, stored: notes.write(tx, nowMs) };
}

/** A record that could be written in no form that we thought of; anything else that goes wrong is the database's fault or our own. */
export class PoisonRecord extends Error {}

/** Does what concerns one record alone, so that its faults are told apart from those of the database. */
export function ofOneRecord<T>(work: () => T): T {
  try {
    return work();
  } catch (cause) {
    if (cause instanceof SqliteError && !cause.code.startsWith('SQLITE_CONSTRAINT')) throw cause;
    throw new PoisonRecord('a record cannot be written', { cause });
  }
}

/** Gathers whatever waits into one transaction after the other, and lets the event loop turn between two. */
export class GroupLoop {
  private readonly waiting: Waiting[] = [];
  private isAwake = false;
  private isDead = false;
  private idle: (() => void)[] = [];

  constructor(private readonly sources: LoopSources) {}

  push(waiting: Waiting): void {
    if (this.isDead) {
      waiting.unknown();
      return;
    }
    this.waiting.push(waiting);
    this.wake();
  }

  /** Resolves when nothing waits. */
  whenIdle(): Promise<void> {
    return this.isAwake ? new Promise((resolve) => this.idle.push(resolve)) : Promise.resolve();
  }

  /** About how many rows wait. */
  waitingRows(): number {
    return this.waiting.reduce((total, { rows }) => total + rows, 0);
  }

  private wake(): void {
    if (this.isAwake) return;
    this.isAwake = true;
    setImmediate(() => this.turn());
  }

  private turn(): void {
    const group = this.takeGroup();
    if (group.length > 0 && !this.isDead) this.write(group);
    this.isAwake = false;
    if (this.waiting.length > 0) {
      this.wake();
      return;
    }
    for (const resolve of this.idle) resolve();
    this.idle = [];
  }

  private takeGroup(): readonly Waiting[] {
    let rows = 0;
    let count = 0;
    for (const item of this.waiting) {
      if (count > 0 && rows + item.rows > MOST_GROUP_ROWS) break;
      rows += item.rows;
      count++;
    }
    return this.waiting.splice(0, count);
  }

  private write(group: readonly Waiting[]): void {
    try {
      this.commit((nowMs, tx) => {
        for (const { work } of group) work(nowMs, tx);
      });
    } catch (fault) {
      if (!(fault instanceof PoisonRecord)) {
        this.die(fault, group);
        return;
      }
      this.sources.log.error(
        { event: 'ingest:apart', err: fault },
        'a group of records could not be written as one and is written part by part',
      );
      if (!this.writeApart(group)) return;
    }
    for (const { done } of group) done();
  }

  /** Writes each part by itself; false where the database cannot be written at all. */
  private writeApart(group: readonly Waiting[]): boolean {
    for (const [at, item] of group.entries()) {
      for (const [part, { work }] of item.alone().entries()) {
        try {
          this.commit(work);
        } catch (fault) {
          this.sources.log.error({ event: 'ingest:unreadable', err: fault }, 'a record could not be written');
          try {
            if (!(fault instanceof PoisonRecord)) throw fault;
            this.commit((nowMs) => item.instead(part, nowMs));
          } catch (worse) {
            this.die(worse, group.slice(at));
            for (const { done } of group.slice(0, at)) done();
            return false;
          }
        }
      }
    }
    return true;
  }

  private commit(work: (nowMs: number, tx: Tx) => void): void {
    const { db, keeper, notes, nowMs, log, tell, takeAlong } = this.sources;
    const now = nowMs();
    let told: readonly Stored[] = [];
    try {
      commit(db, (tx) => {
        told = writeBooks(this.sources, tx, now, () => work(now, tx)).stored;
        if (this.waiting.length === 0) told = told.filter((stored) => !takeAlong(stored));
      });
    } catch (fault) {
      keeper.forget();
      throw fault;
    }
    // One line a reason and not one a record: of the latter there may be thousands a second.
    for (const count of notes.takeSetAside()) log.info({ event: 'set-aside:made', ...count }, 'records were set aside');
    for (const stored of told) tell(stored);
  }

  private die(fault: unknown, group: readonly Waiting[]): void {
    this.isDead = true;
    for (const { unknown } of [...group, ...this.waiting.splice(0)]) unknown();
    this.sources.fatal(fault);
  }
}
