import { compareInstants, type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { movedBy, type SearchSetup } from './search-setup';
import { type Stretch } from './stretch-search';

/** Of a network's gaps, the newest so many are watched. */
const MOST_GAPS = 1_000;

interface GapRow {
  readonly siteId: number;
  readonly series: string;
  readonly last: string | null;
  readonly next: string;
}

/** Numbers that are missing at a site: between two of its events in time. */
export interface Gap extends Stretch {
  readonly siteId: number;
}

const GAPS = `SELECT siteId, series, last, next FROM (
  SELECT h.site_id AS siteId, h.series AS series, h.first AS next, h.since_ms AS since,
    coalesce(lag(h.last) OVER (PARTITION BY h.site_id, h.series ORDER BY h.first_digits, h.first), s.contiguous) AS last
  FROM held_ranges h JOIN series s ON s.site_id = h.site_id AND s.series = h.series
  WHERE h.site_id IN (SELECT id FROM sites WHERE network_id = ?))
  ORDER BY since DESC LIMIT ${MOST_GAPS}`;

/** Knows when a network's sites have numbers missing. */
export class GapWatch {
  private gaps: readonly Gap[] = [];
  private seen = '';
  private readonly selectGaps;
  private readonly selectInstant;

  constructor(
    db: Db,
    private readonly networkId: number,
  ) {
    this.selectGaps = db.$client.prepare<[number], GapRow>(GAPS);
    this.selectInstant = db.$client.prepare<[number, string, string], Instant>(
      `SELECT e.tai_s AS taiS, e.ps FROM triggers t JOIN events e ON e.trigger_id = t.id WHERE t.site_id = ? AND t.series = ? AND t.sequence = ?`,
    );
  }

  /** Looks at the numbers anew. */
  refresh(): void {
    const rows = this.selectGaps.all(this.networkId);
    const text = JSON.stringify(rows);
    if (text === this.seen) return;
    this.seen = text;
    this.gaps = rows.flatMap((row) => this.gapOf(row));
  }

  /** Whether the window of a set may hold events that are missing: those of a rule's sites, as near to its ends as events can be. */
  touches({ active, geometryNs }: SearchSetup, first: Instant, spanNs: number): boolean {
    if (this.gaps.length === 0) return false;
    const from = movedBy(first, -geometryNs);
    const to = movedBy(first, spanNs + geometryNs);
    return this.gaps.some(
      (gap) =>
        (!active.siteIds || active.siteIds.has(gap.siteId)) && compareInstants(gap.from, to) <= 0 && compareInstants(from, gap.to) <= 0,
    );
  }

  /** A gap lies between the events on both sides; where the record on one side is no event, it is taken to lie at the other's instant. */
  private gapOf({ siteId, series, last, next }: GapRow): Gap[] {
    const after = this.selectInstant.get(siteId, series, next);
    const before = last === null ? undefined : this.selectInstant.get(siteId, series, last);
    const from = before ?? after;
    const to = after ?? before;
    return from && to ? [compareInstants(from, to) <= 0 ? { siteId, from, to } : { siteId, from: to, to: from }] : [];
  }
}
