import { createHash } from 'node:crypto';
import { desc, eq, lt } from 'drizzle-orm';
import { type OrientationTableShown } from '#shared/contract/table-routes';
import { readFinalsFile } from '#shared/earth/finals-file';
import { type OrientationTable } from '#shared/earth/orientation-table';
import { type Instant } from '#shared/time/instant';
import { taiMinusUtcOnDay } from '#shared/time/leap-seconds';
import { orientationTables } from '#schema/schema';
import { absent, conflict, unusable } from '../api/refusal';
import { type Db } from '../db';
import { utcText } from '../ground';
import { makerOf, type Making } from '../networks/note-setup';
import { leapSecondsInForce } from './leap-seconds-in-force';
import { orientationWarnings } from './table-warnings';
import { tellAllNetworks } from './tell-all-networks';

type Rows = Pick<Db, 'select'>;

const COLUMNS = {
  id: orientationTables.id,
  sha256: orientationTables.sha256,
  firstMjd: orientationTables.firstMjd,
  lastMjd: orientationTables.lastMjd,
  predictedFromMjd: orientationTables.predictedFromMjd,
  isInForce: orientationTables.isInForce,
  createdAt: orientationTables.createdAt,
  createdBy: orientationTables.createdBy,
};

/** An Earth-orientation table, without its text; refused as absent when there is none. */
export function orientationTableOfId(db: Rows, tableId: number, present: Instant): OrientationTableShown {
  const row = db.select(COLUMNS).from(orientationTables).where(eq(orientationTables.id, tableId)).get();
  if (!row) throw absent();
  return { ...row, warnings: orientationWarnings(row, present) };
}

/** The text of an Earth-orientation table, as it was uploaded. */
export function orientationText(db: Rows, tableId: number): string {
  const row = db.select({ body: orientationTables.body }).from(orientationTables).where(eq(orientationTables.id, tableId)).get();
  if (!row) throw absent();
  return row.body;
}

/** The Earth-orientation tables, latest first, from before an id on. */
export const orientationTablesBefore = (db: Rows, beforeId: number | undefined, most: number, present: Instant): OrientationTableShown[] =>
  db
    .select(COLUMNS)
    .from(orientationTables)
    .where(beforeId === undefined ? undefined : lt(orientationTables.id, beforeId))
    .orderBy(desc(orientationTables.id))
    .limit(most)
    .all()
    .map((row) => ({ ...row, warnings: orientationWarnings(row, present) }));

/** The table in force, if any. */
export function orientationTableInForce(db: Rows, present: Instant): OrientationTableShown | null {
  const row = db.select(COLUMNS).from(orientationTables).where(eq(orientationTables.isInForce, true)).get();
  return row ? { ...row, warnings: orientationWarnings(row, present) } : null;
}

/**
 * Keeps an Earth-orientation table that could be put in force.
 *
 * @param text the file
 * @returns its id
 * @throws Refusal when it is no such file, or is kept already
 */
export function keepOrientationTable({ tx, note, actor, nowMs }: Making, text: string): number {
  const { rows } = readFinals(tx, text, (why) => unusable({ where: 'text', text: `is no finals2000A file: ${why}` }));
  const sha256 = createHash('sha256').update(text).digest('hex');
  if (tx.select({ id: orientationTables.id }).from(orientationTables).where(eq(orientationTables.sha256, sha256)).get())
    throw conflict('This table is kept already.');
  const { id } = tx
    .insert(orientationTables)
    .values({
      body: text,
      sha256,
      firstMjd: rows[0]?.mjd ?? 0,
      lastMjd: rows.at(-1)?.mjd ?? 0,
      predictedFromMjd: rows.find(({ kind }) => kind === 'predicted')?.mjd ?? null,
      isInForce: false,
      createdAt: utcText(nowMs),
      createdBy: makerOf(actor),
    })
    .returning({ id: orientationTables.id })
    .get();
  note({ action: 'orientation-table:uploaded', subjectKind: 'orientation-table', subjectId: id, details: { sha256 } });
  return id;
}

/** Puts an Earth-orientation table in force in place of another; refused when it does not go with the leap-second list in force. */
export function putOrientationTableInForce({ tx, note, nowMs }: Making, tableId: number): void {
  const { isInForce, sha256 } = orientationTableOfId(tx, tableId, { taiS: 0, ps: 0 });
  if (isInForce) throw conflict('The table is in force already.');
  readFinals(tx, orientationText(tx, tableId), (why) => conflict(`The table does not go with the leap-second list in force: ${why}.`));
  tx.update(orientationTables).set({ isInForce: false }).where(eq(orientationTables.isInForce, true)).run();
  tx.update(orientationTables).set({ isInForce: true }).where(eq(orientationTables.id, tableId)).run();
  note({ action: 'orientation-table:put-in-force', subjectKind: 'orientation-table', subjectId: tableId, details: { sha256 } });
  tellAllNetworks(tx, { what: 'orientation-table', id: tableId }, nowMs);
}

function readFinals(db: Rows, text: string, refusal: (why: string) => Error): OrientationTable {
  const leapSeconds = leapSecondsInForce(db);
  const read = readFinalsFile(text, (day) => taiMinusUtcOnDay(leapSeconds, day) ?? 0);
  if (!read.ok) throw refusal(`${read.problem.where}: ${read.problem.text}`);
  return read.value;
}
