import { type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { type SeriesBooks, UNREAD_SERIES } from './series-books';

/** Ranges of one series that a site is told; what it sends again beyond them is known, no more. */
export const MOST_RANGES_TOLD = 1_000;

/** Where a series stands. */
export interface SeriesStanding {
  readonly series: string;
  /** All numbers from the first to the contiguous one are held; null where none is. */
  readonly first: string | null;
  readonly contiguous: string | null;
  /** What is held above it, lowest first, both ends included. */
  readonly held: readonly (readonly [first: string, last: string])[];
  /** There are more ranges than are told. */
  readonly isCut: boolean;
  readonly received: number;
  readonly stored: number;
  readonly known: number;
  readonly setAside: number;
}

/** Where a site's stream goes on. */
export interface Resume {
  readonly connectionId: number;
  readonly series: readonly SeriesStanding[];
  readonly completeUpTo: Instant | undefined;
}

/** Keeps the connections of sites, and says where their streams go on. */
export class Connections {
  private readonly begin;
  private readonly end;
  private readonly connected;
  private readonly complete;

  constructor(
    private readonly db: Db,
    private readonly books: SeriesBooks,
  ) {
    const { $client: client } = db;
    this.begin = client.prepare('INSERT INTO site_connections (site_id, key_id, from_ms) VALUES (?, ?, ?)');
    this.end = client
      .prepare<[number, string, number], number>(
        'UPDATE site_connections SET to_ms = max(from_ms, ?), ended = ? WHERE id = ? AND to_ms IS NULL RETURNING site_id',
      )
      .pluck();
    this.connected = client.prepare(
      `UPDATE site_streams SET connected_at_ms = (SELECT max(from_ms) FROM site_connections WHERE site_id = @siteId AND to_ms IS NULL)
       WHERE site_id = @siteId`,
    );
    this.complete = client.prepare<[number], { taiS: number; ps: number }>(
      'SELECT complete_tai_s AS taiS, complete_ps AS ps FROM site_streams WHERE site_id = ? AND complete_tai_s IS NOT NULL',
    );
  }

  /** Connections that no process holds any more, since it ended before them. */
  endAll(why: string, nowMs: number): void {
    this.db.$client.transaction(() => {
      this.db.$client.prepare('UPDATE site_connections SET to_ms = max(from_ms, ?), ended = ? WHERE to_ms IS NULL').run(nowMs, why);
      this.db.$client.prepare('UPDATE site_streams SET connected_at_ms = NULL WHERE connected_at_ms IS NOT NULL').run();
    })();
  }

  hello(siteId: number, keyId: number | null, nowMs: number): Resume {
    const connectionId = this.db.$client.transaction(() => {
      const { lastInsertRowid } = this.begin.run(siteId, keyId, nowMs);
      this.connected.run({ siteId });
      return Number(lastInsertRowid);
    })();
    return { connectionId, series: this.standing(siteId), completeUpTo: this.complete.get(siteId) };
  }

  bye(connectionId: number, why: string, nowMs: number): void {
    this.db.$client.transaction(() => {
      const siteId = this.end.get(nowMs, why, connectionId);
      if (siteId !== undefined) this.connected.run({ siteId });
    })();
  }

  private standing(siteId: number): readonly SeriesStanding[] {
    return [...this.books.ofSite(siteId).values()]
      .filter(({ series }) => series !== UNREAD_SERIES)
      .map(({ series, held, received, stored, known, setAside }) => {
        const [lowest, ...above] = held.ranges;
        return {
          series,
          first: lowest ? String(lowest.first) : null,
          contiguous: lowest ? String(lowest.last) : null,
          held: above.slice(0, MOST_RANGES_TOLD).map(({ first, last }) => [String(first), String(last)] as const),
          isCut: above.length > MOST_RANGES_TOLD,
          received,
          stored,
          known,
          setAside,
        };
      });
  }
}
