import { type Db } from '../../backend/db';
import { fillCoincidences, fillEvents } from '../database/filled';
import { insertRow } from '../support/network-rows';
import { type Measured } from './measured-server';

/** So many events and as many coincidences, all searched and final, as they are long after they came. */
export function fillStored(db: Db, { versionId }: Measured, rows: number): void {
  const { $client: client } = db;
  const table = client.prepare<[], number>('SELECT id FROM leap_second_tables WHERE is_in_force = 1').pluck().get();
  client.exec(`INSERT INTO groundings (site_version_id, segment_id, reference_version_id, run_id, leap_second_table_id)
    SELECT v.id, s.id, r.id, 1, ${table ?? 0} FROM site_versions v JOIN clock_segments s ON s.clock_id = v.clock_id, time_reference_versions r ORDER BY v.id`);
  fillEvents(client, rows);
  fillCoincidences(client, rows);
  client.exec(`UPDATE coincidences SET state = 'final' WHERE state = 'open'`);
  // The numbers of changes that the filled rows name; the last says that all has been searched.
  const last = 2 + rows / 100;
  const none = { ids: [] };
  const body = JSON.stringify({ coincidences: { appeared: none, ended: none, final: none }, crowded: 0, searchedTo: last });
  client
    .prepare(
      `WITH RECURSIVE n(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM n WHERE i < ?)
       INSERT INTO changes (network_id, number, at_ms, kind, body) SELECT 1, i, i, 'records', ? FROM n`,
    )
    .run(last, body);
  const job = { network_id: 1, kind: 'search-log', body: JSON.stringify({ ruleVersionId: versionId }), state: 'done' };
  insertRow(db, 'jobs', { ...job, run_after_ms: 1, created_at_ms: 1, ended_at_ms: 1 });
}
