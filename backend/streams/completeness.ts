import { type SiteStream } from '#shared/contract/stream-routes';
import { compareInstants, type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { part, rowsOf, type Query } from '../search/query';

const HOUR_MS = 3_600_000;
const MOST_COUNTED = 1_000;

interface StreamRow extends Omit<SiteStream, 'completeTo' | 'lastEventAt'> {
  readonly completeTaiS: number | null;
  readonly completePs: number | null;
  readonly lastTaiS: number | null;
  readonly lastPs: number | null;
}

const instantOrNull = (taiS: number | null, ps: number | null): Instant | null => (taiS === null || ps === null ? null : { taiS, ps });

/** How far the streams of a network's open sites have come, by code. */
export const streamsQuery = (networkId: number, nowMs: number): Query =>
  part(
    `SELECT s.id AS siteId, s.code AS site, f.complete_tai_s AS completeTaiS, f.complete_ps AS completePs, f.complete_said_at_ms AS completeSaidAtMs,
       f.last_tai_s AS lastTaiS, f.last_ps AS lastPs, f.last_received_at_ms AS lastReceivedAtMs, f.connected_at_ms AS connectedAtMs,
       (SELECT count(*) FROM (SELECT 1 FROM set_asides a INDEXED BY set_asides_of_site WHERE a.site_id = s.id AND a.received_at_ms >= ?
         LIMIT ${MOST_COUNTED})) AS setAsidesLastHour
     FROM sites s JOIN site_streams f ON f.site_id = s.id WHERE s.network_id = ? AND s.closed_at IS NULL ORDER BY s.code`,
    nowMs - HOUR_MS,
    networkId,
  );

/** The streams of a network's open sites. */
export const streamsOf = (db: Pick<Db, '$client'>, networkId: number, nowMs: number): SiteStream[] =>
  rowsOf<StreamRow>(db, streamsQuery(networkId, nowMs)).map(({ completeTaiS, completePs, lastTaiS, lastPs, ...row }) => ({
    ...row,
    completeTo: instantOrNull(completeTaiS, completePs),
    lastEventAt: instantOrNull(lastTaiS, lastPs),
  }));

/** Up to when a network is complete: the least of its sites', and null while one has said nothing or there is none. */
export function leastComplete(streams: readonly Pick<SiteStream, 'completeTo'>[]): Instant | null {
  let least: Instant | null = null;
  for (const { completeTo } of streams) {
    if (completeTo === null) return null;
    if (least === null || compareInstants(completeTo, least) < 0) least = completeTo;
  }
  return least;
}
