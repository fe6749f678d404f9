import { type FrozenRecord } from '#shared/contract/certificate';
import { type Db } from '../db';
import { recordOf } from '../ingest/trigger-rows';
import { part, rowsOf } from '../search/query';

/** A record of an event that stands, with what the event rests on. */
export interface GroundedRecord {
  site: string;
  siteId: number;
  series: string;
  sequence: string;
  kind: string;
  reading: string;
  readingForm: string;
  sigma: string;
  amplitude: string;
  extra: string | null;
  taiS: number;
  ps: number;
  siteVersionId: number;
  segmentId: number | null;
  clock: string | null;
  reference: string | null;
  referenceVersionId: number | null;
  referenceSigmaNs: number | null;
  runId: number;
  leapSecondTableId: number;
  orientationTableId: number | null;
}

const recordsQuery = (networkId: number, triggerIds: readonly number[]) =>
  part(
    `SELECT s.code AS site, s.id AS siteId, t.series, t.sequence, t.kind, t.reading, t.reading_form AS readingForm, t.sigma, t.amplitude, t.extra,
       e.tai_s AS taiS, e.ps, g.site_version_id AS siteVersionId, g.segment_id AS segmentId, c.code AS clock, r.code AS reference,
       g.reference_version_id AS referenceVersionId, rv.sigma_ns AS referenceSigmaNs, g.run_id AS runId,
       g.leap_second_table_id AS leapSecondTableId, g.orientation_table_id AS orientationTableId
     FROM json_each(?) AS i CROSS JOIN events AS e ON e.trigger_id = i.value JOIN triggers AS t ON t.id = e.trigger_id
     JOIN sites AS s ON s.id = e.site_id JOIN groundings AS g ON g.id = e.grounding_id
     LEFT JOIN clock_segments AS cs ON cs.id = g.segment_id LEFT JOIN clocks AS c ON c.id = cs.clock_id
     LEFT JOIN time_reference_versions AS rv ON rv.id = g.reference_version_id LEFT JOIN time_references AS r ON r.id = rv.reference_id
     WHERE e.network_id = ? ORDER BY e.tai_s, e.ps, s.code, t.series, length(t.sequence), t.sequence`,
    JSON.stringify(triggerIds),
    networkId,
  );

/** The records of events that stand, in the order of events; those that do not are left out. */
export const groundedRecords = (db: Db, networkId: number, triggerIds: readonly number[]): GroundedRecord[] =>
  rowsOf<GroundedRecord>(db, recordsQuery(networkId, triggerIds));

/** A record as it is frozen, verbatim, read by an entry of the network's sites. */
export const frozenRecord = (row: GroundedRecord, entry: string): FrozenRecord => ({
  site: row.site,
  ...(entry === row.site ? {} : { entry }),
  ...recordOf(row),
});
