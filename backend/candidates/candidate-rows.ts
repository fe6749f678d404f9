import { asc, eq } from 'drizzle-orm';
import { type CandidateInFull } from '#shared/contract/candidate-routes';
import { type Place } from '#shared/contract/roles';
import { candidateFrames, candidates, candidateSets, frames } from '#schema/schema';
import { absent } from '../api/refusal';
import { setNameOf } from '../coincidences/coincidence-brief';
import { type Db } from '../db';
import { eventName } from '../reconcile/event-columns';
import { part, rowsOf, type Query } from '../search/query';

export type CandidateRow = typeof candidates.$inferSelect;

/** The row of a candidate; refused as absent when there is none. */
export function candidateRow(db: Pick<Db, 'select'>, candidateId: number): CandidateRow {
  const row = db.select().from(candidates).where(eq(candidates.id, candidateId)).get();
  if (!row) throw absent();
  return row;
}

/** Where a candidate lies; undefined when there is none of this id. */
export function placeOfCandidate(db: Pick<Db, 'select'>, candidateId: number): Place | undefined {
  const row = db.select({ networkId: candidates.networkId }).from(candidates).where(eq(candidates.id, candidateId)).get();
  return row && { kind: 'network', networkId: row.networkId };
}

interface EventRow {
  readonly eventId: number;
  readonly site: string;
  readonly series: string;
  readonly sequence: string;
  readonly taiS: number | null;
  readonly ps: number | null;
  readonly isIn: number;
  readonly reason: string;
}

/** The events of a candidate in the order of events, those that do not stand at the end. */
export const candidateEventsQuery = (candidateId: number): Query =>
  part(
    `SELECT c.trigger_id AS eventId, s.code AS site, t.series, t.sequence, e.tai_s AS taiS, e.ps, c.is_in AS isIn, c.reason
     FROM candidate_events c JOIN triggers t ON t.id = c.trigger_id JOIN sites s ON s.id = t.site_id
     LEFT JOIN events e ON e.trigger_id = c.trigger_id
     WHERE c.candidate_id = ? ORDER BY e.tai_s IS NULL, e.tai_s, e.ps, s.code, t.series, length(t.sequence), t.sequence`,
    candidateId,
  );

/** The events of a candidate, counted in or left out. */
export const candidateEventsOf = (db: Pick<Db, '$client'>, candidateId: number): CandidateInFull['events'] =>
  rowsOf<EventRow>(db, candidateEventsQuery(candidateId)).map(({ eventId, site, series, sequence, taiS, ps, isIn, reason }) => ({
    eventId,
    name: eventName(site, { series, sequence }),
    site,
    at: taiS === null || ps === null ? null : { taiS, ps },
    isIn: isIn === 1,
    reason,
  }));

/** The frames in which a candidate's order is stated, as listed. */
export const candidateFramesOf = (db: Pick<Db, 'select'>, candidateId: number): CandidateInFull['frames'] =>
  db
    .select({ frameId: frames.id, code: frames.code, name: frames.name })
    .from(candidateFrames)
    .innerJoin(frames, eq(frames.id, candidateFrames.frameId))
    .where(eq(candidateFrames.candidateId, candidateId))
    .orderBy(asc(candidateFrames.place))
    .all();

/** The coincidences that a candidate was built from. */
export const candidateSetsOf = (db: Pick<Db, 'select'>, candidateId: number): CandidateInFull['coincidences'] =>
  db
    .select({ setHash: candidateSets.setHash })
    .from(candidateSets)
    .where(eq(candidateSets.candidateId, candidateId))
    .orderBy(asc(candidateSets.setHash))
    .all()
    .map(({ setHash }) => ({ name: setNameOf(setHash), setHash }));
