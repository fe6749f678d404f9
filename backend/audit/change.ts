import { eq, desc } from 'drizzle-orm';
import { audit } from '#schema/schema';
import { type Db } from '../db';
import { utcText, type Ground } from '../ground';
import { commit, type Tx } from '../writer/commit';
import { NO_ROW_BEFORE, rowHash, type AuditRow } from './chain';

export type { Tx };

/** Who makes a change, and the request that it comes with. */
export interface Actor {
  readonly kind: AuditRow['actorKind'];
  readonly id: number | null;
  readonly requestId: string | null;
}

/** One line for the audit trail: no secret, no e-mail address and no free text of a stranger belongs into its details. */
export interface Note {
  /** What was done, as `noun:past`. */
  readonly action: string;
  readonly subjectKind: string;
  readonly subjectId: number | string;
  readonly networkId?: number | null;
  readonly details?: Readonly<Record<string, string | number | boolean | null>>;
}

type Sources = Pick<Ground, 'db' | 'log' | 'nowMs' | 'auditHead'>;

/**
 * Makes a change and its audit entries in one transaction: either all of it is there or nothing. Afterwards each entry is one line of the
 * log, and the chain's head is kept outside the database.
 *
 * @param ground database, log, clock, and where the head is kept
 * @param actor who does it
 * @param work makes the change, and notes what it did; at least once, since a change that nobody can trace is a mistake of ours
 * @returns what the work returns
 * @throws what the work throws, with nothing changed
 */
export function change<T>(ground: Sources, actor: Actor, work: (tx: Tx, note: (note: Note) => void) => T): T {
  const rows: AuditRow[] = [];
  beginHead(ground);
  const value = commit(ground.db, (tx) => {
    const result = work(tx, (note) => rows.push(append(tx, actor, note, utcText(ground.nowMs()))));
    if (rows.length === 0) throw new Error('a change was made without its audit entry');
    return result;
  });
  for (const { seq, action, actorKind, actorId, subjectKind, subjectId, networkId, requestId } of rows)
    ground.log.info({ event: action, seq, actorKind, actorId, subjectKind, subjectId, networkId, requestId }, 'audited');
  keepHead(ground, rows);
  return value;
}

function append(tx: Tx, actor: Actor, note: Note, at: string): AuditRow {
  const last = tx.select({ seq: audit.seq, hash: audit.hash }).from(audit).orderBy(desc(audit.seq)).limit(1).get();
  const row = {
    seq: (last?.seq ?? 0) + 1,
    at,
    actorKind: actor.kind,
    actorId: actor.id,
    action: note.action,
    networkId: note.networkId ?? null,
    subjectKind: note.subjectKind,
    subjectId: String(note.subjectId),
    details: JSON.stringify(note.details ?? {}),
    requestId: actor.requestId,
    previousHash: last?.hash ?? NO_ROW_BEFORE,
  };
  const whole = { ...row, hash: rowHash(row) };
  tx.insert(audit).values(whole).run();
  return whole;
}

/** The head of a chain without an entry is kept before the first one, so that a power cut right after that one leaves no chain without a head. */
function beginHead({ db, auditHead }: Sources): void {
  if (!auditHead.read() && !db.select({ seq: audit.seq }).from(audit).limit(1).get())
    auditHead.keep({ seq: 0, hashHex: NO_ROW_BEFORE.toString('hex') });
}

/** A head that the chain no longer holds is evidence: it is left as it is, and told. */
function keepHead({ db, log, auditHead }: Sources, rows: readonly AuditRow[]): void {
  const last = rows.at(-1);
  const known = auditHead.read();
  if (!last || (known && known.seq >= last.seq && holds(db, known))) return;
  if (known && !holds(db, known)) {
    log.error({ event: 'audit:broken', seq: known.seq }, 'the audit trail does not hold the entry that was its last');
    return;
  }
  auditHead.keep({ seq: last.seq, hashHex: last.hash.toString('hex') });
}

/** Whether the database's chain holds a head that was kept. */
function holds(db: Db, head: { readonly seq: number; readonly hashHex: string }): boolean {
  if (head.seq === 0) return head.hashHex === NO_ROW_BEFORE.toString('hex');
  return db.select({ hash: audit.hash }).from(audit).where(eq(audit.seq, head.seq)).get()?.hash.toString('hex') === head.hashHex;
}
