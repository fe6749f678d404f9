import { and, asc, count, desc, eq, gt, inArray, isNull, lt } from 'drizzle-orm';
import { type Clock, type ClockSegmentShown } from '#shared/contract/clock-routes';
import { type HeldRole } from '#shared/contract/roles';
import { clocks, clockSegments } from '#schema/schema';
import { ownSites } from '../accounts/sites-seen';
import { absent } from '../api/refusal';
import { type Db } from '../db';
import { seesClock, sitesByClock, type Looker } from './place-of-clock';

type Rows = Pick<Db, 'select' | 'selectDistinct'>;
type ClockRow = typeof clocks.$inferSelect;
type SegmentRow = typeof clockSegments.$inferSelect;

/** The row of a clock; refused as absent when there is none. */
export function clockRow(db: Rows, clockId: number): ClockRow {
  const row = db.select().from(clocks).where(eq(clocks.id, clockId)).get();
  if (!row) throw absent();
  return row;
}

/** The stretches of a clock that are in force, in the order in which they begin to hold. */
export const recordInForce = (db: Rows, clockId: number): ClockSegmentShown[] =>
  db
    .select()
    .from(clockSegments)
    .where(and(eq(clockSegments.clockId, clockId), isNull(clockSegments.supersededAt)))
    .orderBy(asc(clockSegments.fromTaiS), asc(clockSegments.fromPs))
    .all()
    .map(segmentOf);

/** Every statement of a clock's stretches, latest first, from before an id on. */
export const statementsOf = (db: Rows, clockId: number, beforeId: number | undefined, most: number): ClockSegmentShown[] =>
  db
    .select()
    .from(clockSegments)
    .where(and(eq(clockSegments.clockId, clockId), beforeId === undefined ? undefined : lt(clockSegments.id, beforeId)))
    .orderBy(desc(clockSegments.id))
    .limit(most)
    .all()
    .map(segmentOf);

/** A clock with its record in force, as someone sees it: an operator is not told which sites of others keep time by it. */
export function clockOfId(db: Rows, clockId: number, held: readonly HeldRole[]): Clock {
  const record = recordInForce(db, clockId);
  const row = clockRow(db, clockId);
  return {
    ...briefOf(row, shownTo(ownSites(held, row.networkId), sitesByClock(db, clockId)), record.length),
    record: record.map((segment, at) => ({ ...segment, until: record[at + 1]?.from ?? null })),
  };
}

/** The clocks of a network that someone sees, from behind an id on. */
export function clocksAfter(db: Rows, networkId: number, afterId: number, most: number, looker: Looker) {
  const rows = db
    .select()
    .from(clocks)
    .where(and(eq(clocks.networkId, networkId), gt(clocks.id, afterId)))
    .orderBy(asc(clocks.id))
    .all()
    .map((row) => ({ row, siteIds: sitesByClock(db, row.id) }))
    .filter(({ row, siteIds }) => seesClock(looker, row, siteIds))
    .slice(0, most);
  const ids = rows.map(({ row }) => row.id);
  const counts = db
    .select({ clockId: clockSegments.clockId, segments: count() })
    .from(clockSegments)
    .where(and(inArray(clockSegments.clockId, ids), isNull(clockSegments.supersededAt)))
    .groupBy(clockSegments.clockId)
    .all();
  const own = ownSites(looker.held, networkId);
  return rows.map(({ row, siteIds }) =>
    briefOf(row, shownTo(own, siteIds), counts.find(({ clockId }) => clockId === row.id)?.segments ?? 0),
  );
}

const shownTo = (own: readonly number[] | undefined, siteIds: readonly number[]): number[] =>
  siteIds.filter((siteId) => own?.includes(siteId) ?? true);

const briefOf = ({ createdBy: _by, ...row }: ClockRow, siteIds: number[], segmentCount: number) => ({ ...row, siteIds, segmentCount });

function segmentOf({
  clockId: _clock,
  fitId: _fit,
  supersededBy: _by,
  fromTaiS,
  fromPs,
  atTaiS,
  atPs,
  ...row
}: SegmentRow): ClockSegmentShown {
  return { ...row, from: { taiS: fromTaiS, ps: fromPs }, at: { taiS: atTaiS, ps: atPs } };
}
