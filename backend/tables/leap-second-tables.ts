import { desc, eq, lt } from 'drizzle-orm';
import { type LeapSecondTableShown } from '#shared/contract/table-routes';
import { compareInstants, type Instant } from '#shared/time/instant';
import { parseLeapSeconds, type LeapSecondTable } from '#shared/time/leap-seconds';
import { leapSecondTables } from '#schema/schema';
import { absent, conflict, unusable } from '../api/refusal';
import { type Db } from '../db';
import { utcText } from '../ground';
import { makerOf, type Making } from '../networks/note-setup';
import { leapSecondsInForce, parsedList } from './leap-seconds-in-force';
import { tellAllNetworks } from './tell-all-networks';
import { leapSecondWarnings } from './table-warnings';

type Rows = Pick<Db, 'select'>;
type TableRow = typeof leapSecondTables.$inferSelect;

/** A leap-second list with its text; refused as absent when there is none. */
export function leapSecondTableOfId(db: Rows, tableId: number, present: Instant): LeapSecondTableShown & { text: string } {
  const row = rowOf(db, tableId);
  return { ...shown(row, present), text: row.body };
}

/** The leap-second lists, latest first, from before an id on. */
export const leapSecondTablesBefore = (db: Rows, beforeId: number | undefined, most: number, present: Instant): LeapSecondTableShown[] =>
  db
    .select()
    .from(leapSecondTables)
    .where(beforeId === undefined ? undefined : lt(leapSecondTables.id, beforeId))
    .orderBy(desc(leapSecondTables.id))
    .limit(most)
    .all()
    .map((row) => shown(row, present));

/** The list in force; null where that is the one that came with the program and no row has it. */
export function leapSecondTableInForce(db: Rows, present: Instant): LeapSecondTableShown | null {
  const row = db.select().from(leapSecondTables).where(eq(leapSecondTables.isInForce, true)).get();
  return row ? shown(row, present) : null;
}

/**
 * Keeps a leap-second list that could be put in force.
 *
 * @param text the file
 * @returns its id
 * @throws Refusal when it is no list, its hash is wrong, it is kept already, or it does not go on from the list in force
 */
export function keepLeapSecondTable({ tx, note, actor, nowMs }: Making, text: string): number {
  const list = parseLeapSeconds(text);
  if (!list.ok) throw unusable({ where: 'text', text: `is no leap-second list: ${list.problem.where}: ${list.problem.text}` });
  const { sha1, updated, expires } = list.value;
  refusePast(list.value, leapSecondsInForce(tx), (why) => unusable({ where: 'text', text: `cannot be used: ${why}` }));
  if (tx.select({ id: leapSecondTables.id }).from(leapSecondTables).where(eq(leapSecondTables.sha1, sha1)).get())
    throw conflict('This list is kept already.');
  const { id } = tx
    .insert(leapSecondTables)
    .values({
      body: text,
      sha1,
      updatedTaiS: updated.taiS,
      expiresTaiS: expires.taiS,
      isInForce: false,
      createdAt: utcText(nowMs),
      createdBy: makerOf(actor),
    })
    .returning({ id: leapSecondTables.id })
    .get();
  note({ action: 'leap-second-table:uploaded', subjectKind: 'leap-second-table', subjectId: id, details: { sha1 } });
  return id;
}

/** Puts a leap-second list in force in place of another; refused when that would change what UTC was. */
export function putLeapSecondTableInForce({ tx, note, nowMs }: Making, tableId: number): void {
  const row = rowOf(tx, tableId);
  if (row.isInForce) throw conflict('The list is in force already.');
  refusePast(parsedList(row.body), leapSecondsInForce(tx), (why) => conflict(`The list cannot be put in force: ${why}.`));
  tx.update(leapSecondTables).set({ isInForce: false }).where(eq(leapSecondTables.isInForce, true)).run();
  tx.update(leapSecondTables).set({ isInForce: true }).where(eq(leapSecondTables.id, tableId)).run();
  note({ action: 'leap-second-table:put-in-force', subjectKind: 'leap-second-table', subjectId: tableId, details: { sha1: row.sha1 } });
  tellAllNetworks(tx, { what: 'leap-second-table', id: tableId }, nowMs);
}

/** A list goes on from another when it has all its steps, and no further one before that other expired. */
function refusePast(list: LeapSecondTable, inForce: LeapSecondTable, refusal: (why: string) => Error): void {
  if (compareInstants(list.expires, inForce.expires) < 0) throw refusal('it expires earlier than the list in force');
  const changed = inForce.steps.findIndex((step, at) => {
    const other = list.steps[at];
    return other?.fromDay !== step.fromDay || other.taiMinusUtcS !== step.taiMinusUtcS;
  });
  if (changed >= 0) throw refusal(`its row ${changed + 1} differs from that of the list in force, and a list must not change the past`);
  const early = list.steps.slice(inForce.steps.length).find(({ fromTaiS }) => fromTaiS < inForce.expires.taiS);
  if (early) throw refusal('it has a step before the list in force expires, and a list must not change the past');
}

function rowOf(db: Rows, tableId: number): TableRow {
  const row = db.select().from(leapSecondTables).where(eq(leapSecondTables.id, tableId)).get();
  if (!row) throw absent();
  return row;
}

function shown({ id, body, sha1, isInForce, createdAt, createdBy }: TableRow, present: Instant): LeapSecondTableShown {
  const { steps, updated, expires } = parsedList(body);
  const warnings = leapSecondWarnings({ expires }, present);
  const taiMinusUtcS = steps.at(-1)?.taiMinusUtcS ?? 0;
  return { id, sha1, updated, expires, steps: steps.length, taiMinusUtcS, isInForce, createdAt, createdBy, warnings };
}
