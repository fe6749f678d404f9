import { compareInstants, type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { part, rowsOf } from '../search/query';

interface CompleteRow {
  complete_tai_s: number | null;
  complete_ps: number | null;
}

/**
 * Up to when a network is complete: the least of what its sites that are not closed have said.
 *
 * @returns undefined while one of them has not said, or there is none
 */
export function completenessOf(db: Db, networkId: number): Instant | undefined {
  const query = part(
    `SELECT complete_tai_s, complete_ps FROM site_streams
     WHERE site_id IN (SELECT id FROM sites WHERE network_id = ? AND closed_at IS NULL)`,
    networkId,
  );
  let least: Instant | undefined;
  for (const { complete_tai_s: taiS, complete_ps: ps } of rowsOf<CompleteRow>(db, query)) {
    if (taiS === null || ps === null) return undefined;
    const said = { taiS, ps };
    if (!least || compareInstants(said, least) < 0) least = said;
  }
  return least;
}

/** A span in which a site could trigger, both ends included; without an end while it goes on. */
export interface LiveSpan {
  readonly from: Instant;
  readonly to?: Instant | undefined;
}

/** What a site says of its stream. */
export interface CompletenessSaid {
  /** It has sent everything before this instant; undefined to say nothing of it. */
  readonly upTo: Instant | undefined;
  readonly live: readonly LiveSpan[];
}

/** Keeps what sites say of their streams: never going back, and the same whatever the order in which it is said. */
export class Completeness {
  private readonly advance;
  private readonly putSpan;
  private readonly touch;
  private readonly read;

  constructor({ $client: client }: Db) {
    this.advance = client.prepare(
      `UPDATE site_streams SET complete_tai_s = @taiS, complete_ps = @ps, complete_said_at_ms = @nowMs WHERE site_id = @siteId
       AND (complete_tai_s IS NULL OR (complete_tai_s, complete_ps) < (@taiS, @ps))`,
    );
    // A span that has begun ends once it is said when; of two ends the later one holds.
    this.putSpan = client.prepare(
      `INSERT INTO live_spans (site_id, from_tai_s, from_ps, to_tai_s, to_ps, received_at_ms) VALUES (?, ?, ?, ?, ?, ?)
       ON CONFLICT (site_id, from_tai_s, from_ps) WHERE withdrawn_at IS NULL DO UPDATE SET to_tai_s = excluded.to_tai_s, to_ps = excluded.to_ps
       WHERE excluded.to_tai_s IS NOT NULL AND (to_tai_s IS NULL OR (to_tai_s, to_ps) < (excluded.to_tai_s, excluded.to_ps))`,
    );
    this.read = client.prepare<[number], Instant>(
      'SELECT complete_tai_s AS taiS, complete_ps AS ps FROM site_streams WHERE site_id = ? AND complete_tai_s IS NOT NULL',
    );
    this.touch = client.prepare(
      `UPDATE site_streams SET last_received_at_ms = @nowMs,
         (last_tai_s, last_ps) = (SELECT tai_s, ps FROM events WHERE site_id = @siteId ORDER BY tai_s DESC, ps DESC LIMIT 1)
       WHERE site_id = @siteId`,
    );
  }

  /** Up to when a site is complete; undefined until it has said so. */
  upTo(siteId: number): Instant | undefined {
    return this.read.get(siteId);
  }

  /** Whether the site is now complete up to a later instant than before. */
  say(siteId: number, { upTo, live }: CompletenessSaid, nowMs: number): boolean {
    for (const { from, to } of live) this.putSpan.run(siteId, from.taiS, from.ps, to?.taiS ?? null, to?.ps ?? null, nowMs);
    return upTo !== undefined && this.advance.run({ taiS: upTo.taiS, ps: upTo.ps, nowMs, siteId }).changes > 0;
  }

  /** When a site was last heard, and its latest event. */
  heard(siteId: number, nowMs: number): void {
    this.touch.run({ nowMs, siteId });
  }
}
