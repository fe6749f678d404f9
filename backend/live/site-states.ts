import { type SiteStateNow, type SiteStates } from '#shared/contract/site-state';
import { nanosecondsOf } from '#shared/time/instant';
import { type LeapSecondTable } from '#shared/time/leap-seconds';
import { type Ground } from '../ground';
import { atChange } from '../search/at-change';
import { part, rowsOf, type Query } from '../search/query';
import { leastComplete, streamsOf } from '../streams/completeness';
import { leapSecondsInForce } from '../tables/leap-seconds-in-force';
import { taiOf } from '../tables/present';

const MINUTE_S = 60;
const NS_PER_MS = 1e6;

interface LatestRow {
  readonly siteId: number;
  readonly taiS: number;
  readonly ps: number;
  readonly sigmaNs: number;
  readonly receivedAtMs: number;
}

/** The latest event of each open site of a network. */
export const latestEventsQuery = (networkId: number): Query =>
  part(
    `SELECT s.id AS siteId, e.tai_s AS taiS, e.ps, e.sigma_ns AS sigmaNs, t.received_at_ms AS receivedAtMs
     FROM sites s JOIN events e ON e.trigger_id = (SELECT l.trigger_id FROM events l INDEXED BY events_of_site WHERE l.site_id = s.id
       ORDER BY l.tai_s DESC, l.ps DESC, l.trigger_id DESC LIMIT 1)
     JOIN triggers t ON t.id = e.trigger_id WHERE s.network_id = ? AND s.closed_at IS NULL`,
    networkId,
  );

/** How many events of each kind each open site had in a minute, and in the one before. */
export const ratesQuery = (networkId: number, minuteTaiS: number): Query =>
  part(
    `SELECT s.id AS siteId, r.from_tai_s AS fromTaiS, r.events FROM sites s
     JOIN event_rates r ON r.site_id = s.id AND r.kind IN ('trigger', 'reference', 'test') AND r.width_s = ${MINUTE_S} AND r.from_tai_s IN (?, ?)
     WHERE s.network_id = ? AND s.closed_at IS NULL`,
    minuteTaiS - MINUTE_S,
    minuteTaiS,
    networkId,
  );

/**
 * How the open sites of a network do.
 *
 * Events are counted by whole minutes: those of the last minute are the present one's and so much of the former one as lies within 60 s, taken
 * as even.
 */
export function siteStatesOf({ db, nowMs }: Pick<Ground, 'db' | 'nowMs'>, networkId: number): SiteStates {
  const atMs = nowMs();
  return atChange(db, networkId, () => {
    const leapSeconds = leapSecondsInForce(db);
    const now = taiOf(atMs, leapSeconds);
    const minuteTaiS = Math.floor(now.taiS / MINUTE_S) * MINUTE_S;
    const formerPart = 1 - (now.taiS - minuteTaiS) / MINUTE_S;
    const streams = streamsOf(db, networkId, atMs);
    const latest = new Map(rowsOf<LatestRow>(db, latestEventsQuery(networkId)).map((row) => [row.siteId, row]));
    const events = new Map<number, number>();
    for (const row of rowsOf<{ siteId: number; fromTaiS: number; events: number }>(db, ratesQuery(networkId, minuteTaiS)))
      events.set(row.siteId, (events.get(row.siteId) ?? 0) + row.events * (row.fromTaiS === minuteTaiS ? 1 : formerPart));
    const sites = streams.map((stream): SiteStateNow => {
      const last = latest.get(stream.siteId);
      return {
        ...stream,
        delayMs: last ? delayMs(last, leapSeconds) : null,
        lastSigmaNs: last?.sigmaNs ?? null,
        eventsLastMinute: Math.round(events.get(stream.siteId) ?? 0),
      };
    });
    return { networkId, atMs, completeTo: leastComplete(streams), sites };
  });
}

function delayMs({ taiS, ps, receivedAtMs }: LatestRow, leapSeconds: LeapSecondTable): number {
  const received = taiOf(receivedAtMs, leapSeconds);
  return Math.round(nanosecondsOf(received.taiS - taiS, received.ps - ps) / NS_PER_MS);
}
