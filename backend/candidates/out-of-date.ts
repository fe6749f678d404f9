import { and, asc, eq, gt, isNull } from 'drizzle-orm';
import { snapshotBody } from '#shared/contract/certificate';
import { USUAL_SIGMAS } from '#shared/contract/pair-routes';
import { type NumberChanged, type OutOfDate } from '#shared/contract/review-routes';
import { outOfDates, signatures, snapshots } from '#schema/schema';
import { tell } from '../accounts/tell';
import { change } from '../audit/change';
import { type Db } from '../db';
import { utcText, type Ground } from '../ground';
import { outOfDate } from '../mail/candidate-notices';
import { networkRow } from '../networks/network-rows';
import { setInFull } from '../pairs/set-in-full';
import { part, rowsOf, type Query } from '../search/query';
import { candidateRow, type CandidateRow } from './candidate-rows';
import { keepStep, touch } from './candidate-steps';
import { reviewersOf } from './review-rows';
import { snapshotDifferences } from './snapshot-differences';

type Cause = OutOfDate['cause'];

/** Candidates with a snapshot that counts and has not been found out of date: all, or those of which an event is another now or gone. */
export const standingSnapshotsQuery = (networkId: number, which: 'all' | 'changed'): Query => {
  const changed = `EXISTS (SELECT 1 FROM snapshot_events s LEFT JOIN events e ON e.trigger_id = s.trigger_id
    WHERE s.snapshot_id = c.snapshot_id AND e.version IS NOT s.event_version)`;
  return part(
    `SELECT c.id FROM candidates c WHERE c.network_id = ? AND c.state IN ('in-review', 'confirmed', 'disputed') AND c.out_of_date_at IS NULL
     ${which === 'all' ? '' : `AND ${changed}`}`,
    networkId,
  );
};

/** An event of a snapshot: what it rested on, and rests on now where it stands. */
interface GroundRow {
  readonly eventId: number;
  readonly stands: number;
  readonly site: number;
  readonly clock: number;
  readonly list: number;
  readonly orientation: number;
}

/** The events of a snapshot that do not stand any more, or rest on something else. */
const groundsQuery = (snapshotId: number): Query =>
  part(
    `SELECT s.trigger_id AS eventId, e.trigger_id IS NOT NULL AS stands, o.site_version_id IS NOT n.site_version_id AS site,
       o.segment_id IS NOT n.segment_id OR o.reference_version_id IS NOT n.reference_version_id AS clock,
       o.leap_second_table_id IS NOT n.leap_second_table_id AS list, o.orientation_table_id IS NOT n.orientation_table_id AS orientation
     FROM snapshot_events s LEFT JOIN events e ON e.trigger_id = s.trigger_id LEFT JOIN groundings n ON n.id = e.grounding_id
     LEFT JOIN event_versions v ON v.trigger_id = s.trigger_id AND v.version = s.event_version LEFT JOIN groundings o ON o.id = v.grounding_id
     WHERE s.snapshot_id = ? AND e.version IS NOT s.event_version`,
    snapshotId,
  );

/** What put a snapshot out of date: the first that holds of a record that does not stand, and of what an event rests on. */
function causeOf(rows: readonly GroundRow[]): Cause {
  if (rows.some(({ stands }) => stands === 0)) return 'conflict';
  if (rows.some(({ clock }) => clock === 1)) return 'clock-record';
  if (rows.some(({ site }) => site === 1)) return 'site';
  if (rows.some(({ list }) => list === 1)) return 'time-table';
  if (rows.some(({ orientation }) => orientation === 1)) return 'earth-table';
  return 'frame';
}

/** What is another now of the numbers of a candidate's snapshot; none where all is within the network's bound. */
function differencesNow(db: Db, row: CandidateRow, snapshotId: number): NumberChanged[] {
  const body = db.select({ body: snapshots.body }).from(snapshots).where(eq(snapshots.id, snapshotId)).get()?.body ?? '';
  const { results } = snapshotBody.parse(JSON.parse(body));
  const standing = rowsOf<{ id: number }>(
    db,
    part(
      'SELECT e.trigger_id AS id FROM snapshot_events s JOIN events e ON e.trigger_id = s.trigger_id WHERE s.snapshot_id = ?',
      snapshotId,
    ),
  );
  const asked = { networkId: row.networkId, eventIds: standing.map(({ id }) => id), sigmas: USUAL_SIGMAS };
  const now =
    standing.length === 0 ? { events: [], pairs: [] } : setInFull(db, { ...asked, frames: results.frames.map(({ code }) => code) });
  return snapshotDifferences(results, now, networkRow(db, row.networkId).staleAboveSigmas);
}

/**
 * Looks whether what a candidate's snapshot was computed from has changed its numbers, and if so puts the candidate out of date: its snapshot and
 * signatures stand as they were. Its author, and whoever is asked to review it or has signed it, is told by mail.
 *
 * @param ground of the writer thread
 */
export function lookAtSnapshot(ground: Ground, candidateId: number): void {
  const { db, nowMs } = ground;
  const row = candidateRow(db, candidateId);
  const { snapshotId } = row;
  if (snapshotId === null || row.outOfDateAt !== null || row.state === 'draft' || row.state === 'withdrawn') return;
  const found = differencesNow(db, row, snapshotId);
  if (found.length === 0) return;
  const cause = causeOf(rowsOf<GroundRow>(db, groundsQuery(snapshotId)));
  const actor = { kind: 'server', id: null, requestId: null } as const;
  change(ground, actor, (tx, note) => {
    const at = utcText(nowMs());
    const making = { tx, note, actor, nowMs: nowMs() };
    tx.insert(outOfDates)
      .values({ snapshotId, at, cause, differences: JSON.stringify(found) })
      .run();
    touch(making, candidateId, { outOfDateAt: at });
    keepStep(making, db, { candidateId, action: 'out-of-date' });
  });
  const signed = db
    .select({ personId: signatures.personId })
    .from(signatures)
    .where(and(eq(signatures.snapshotId, snapshotId), isNull(signatures.withdrawnAt), isNull(signatures.supersededById)))
    .all();
  const told = new Set([row.authorId, ...reviewersOf(db, candidateId).map(({ id }) => id), ...signed.map(({ personId }) => personId)]);
  const network = networkRow(db, row.networkId).name;
  for (const personId of told)
    tell(ground, personId, (noticed) => outOfDate(noticed, { network, number: row.number, title: row.title, cause, differences: found }));
}

/** Each time that a snapshot of a candidate was found out of date, in their order, from behind an id on. */
export const outOfDatesOf = (db: Pick<Db, 'select'>, candidateId: number, afterId: number, most: number): OutOfDate[] =>
  db
    .select({
      id: outOfDates.id,
      snapshot: snapshots.number,
      at: outOfDates.at,
      cause: outOfDates.cause,
      differences: outOfDates.differences,
    })
    .from(snapshots)
    .innerJoin(outOfDates, eq(outOfDates.snapshotId, snapshots.id))
    .where(and(eq(snapshots.candidateId, candidateId), gt(outOfDates.id, afterId)))
    .orderBy(asc(outOfDates.id))
    .limit(most)
    .all()
    .map(({ differences, ...one }) => ({ ...one, differences: JSON.parse(differences) as NumberChanged[] }));
