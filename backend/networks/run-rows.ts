import { and, desc, eq, lt } from 'drizzle-orm';
import { type Run } from '#shared/contract/network-routes';
import { type Place } from '#shared/contract/roles';
import { compareInstants, type Instant } from '#shared/time/instant';
import { runs } from '#schema/schema';
import { absent, conflict, unusable } from '../api/refusal';
import { type Db } from '../db';

type Rows = Pick<Db, 'select'>;
type RunRow = typeof runs.$inferSelect;

/** From when to when a run is; null while it goes on. */
export interface RunSpan {
  readonly from: Instant;
  readonly to: Instant | null;
}

/** A run as it is shown; refused as absent when there is none. */
export function runOfId(db: Rows, runId: number): Run {
  const row = db.select().from(runs).where(eq(runs.id, runId)).get();
  if (!row) throw absent();
  return shown(row);
}

/** The runs of a network, latest made first, from before an id on. */
export const runsOf = (db: Rows, networkId: number, beforeId: number | undefined, most: number): Run[] =>
  db
    .select()
    .from(runs)
    .where(and(eq(runs.networkId, networkId), beforeId === undefined ? undefined : lt(runs.id, beforeId)))
    .orderBy(desc(runs.id))
    .limit(most)
    .all()
    .map(shown);

/** Where a run lies; undefined when there is none of this id. */
export function placeOfRun(db: Rows, runId: number): Place | undefined {
  const row = db.select({ networkId: runs.networkId }).from(runs).where(eq(runs.id, runId)).get();
  return row && { kind: 'network', networkId: row.networkId };
}

/** Refuses a run that ends before it begins, or that has an instant in common with another of its network. */
export function refuseOverlap(db: Rows, networkId: number, { from, to }: RunSpan, exceptId?: number): void {
  if (to !== null && compareInstants(to, from) < 0)
    throw unusable({ where: 'to', text: 'is before "from"; it must be a time not before it, or null for a run that goes on' });
  const other = db
    .select()
    .from(runs)
    .where(eq(runs.networkId, networkId))
    .all()
    .map(shown)
    .find((one) => one.id !== exceptId && !endsBefore(one, from) && !endsBefore({ to }, one.from));
  if (other)
    throw conflict(
      `The run "${other.code}" ${other.to === null ? 'goes on: end it first' : 'has times in common with this one'}. Runs of one network do not overlap.`,
    );
}

const endsBefore = ({ to }: Pick<RunSpan, 'to'>, instant: Instant): boolean => to !== null && compareInstants(to, instant) < 0;

function shown({ fromTaiS, fromPs, toTaiS, toPs, createdBy: _by, ...row }: RunRow): Run {
  return { ...row, from: { taiS: fromTaiS, ps: fromPs }, to: toTaiS === null || toPs === null ? null : { taiS: toTaiS, ps: toPs } };
}
