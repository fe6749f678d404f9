import { type Db } from '../db';
import { type MadeEvent } from '../reconcile/event-maker';
import { type TablesInForce } from '../reconcile/tables-in-force';

/** What a grounding names beside the event's own versions. */
type TableIds = Pick<TablesInForce, 'leapSecondTableId' | 'orientationTableId'>;

/** Finds the row of `groundings` for what an event rests on, or adds it. */
export class Groundings {
  private ids = new Map<string, number>();
  private readonly find;
  private readonly add;

  constructor({ $client: client }: Db) {
    this.find = client
      .prepare<[number, number, number, number, number, number], number>(
        `SELECT id FROM groundings WHERE site_version_id = ? AND coalesce(segment_id, 0) = ? AND coalesce(reference_version_id, 0) = ?
         AND run_id = ? AND leap_second_table_id = ? AND coalesce(orientation_table_id, 0) = ?`,
      )
      .pluck();
    this.add = client.prepare(
      `INSERT INTO groundings (site_version_id, segment_id, reference_version_id, run_id, leap_second_table_id, orientation_table_id)
       VALUES (?, ?, ?, ?, ?, ?)`,
    );
  }

  idOf(made: MadeEvent, { leapSecondTableId, orientationTableId }: TableIds): number {
    const { versionId, segmentId, referenceVersionId, runId } = made;
    const key = `${versionId} ${segmentId ?? 0} ${referenceVersionId ?? 0} ${runId} ${leapSecondTableId} ${orientationTableId ?? 0}`;
    const known = this.ids.get(key);
    if (known !== undefined) return known;
    const id =
      this.find.get(versionId, segmentId ?? 0, referenceVersionId ?? 0, runId, leapSecondTableId, orientationTableId ?? 0) ??
      Number(this.add.run(versionId, segmentId, referenceVersionId, runId, leapSecondTableId, orientationTableId).lastInsertRowid);
    this.ids.set(key, id);
    return id;
  }

  /** After a transaction that failed. */
  forget(): void {
    this.ids = new Map();
  }
}
