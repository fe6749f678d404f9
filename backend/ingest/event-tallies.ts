import { type Db } from '../db';
import { type StoredEvent } from '../reconcile/stored-event';

const MINUTE_S = 60;
/** Widths of the spans that are counted, s. */
const WIDTHS_S = [MINUTE_S, 3_600, 86_400] as const;
const BINS_PER_DECADE = 10;

/** What of an event the counts look at. */
export type Counted = Pick<StoredEvent, 'siteId' | 'kind' | 'taiS' | 'sigmaNs' | 'amplitude'>;

/** The bin of a size: ten to a factor of ten, with the sign apart; 0 by itself. */
export function binOf(size: number): { readonly sign: number; readonly bin: number } {
  if (size === 0) return { sign: 0, bin: 0 };
  return { sign: Math.sign(size), bin: Math.floor(BINS_PER_DECADE * Math.log10(Math.abs(size))) };
}

const plus = (counts: Map<string, number>, key: string, by: number): void => void counts.set(key, (counts.get(key) ?? 0) + by);

/** Counts events that come and go in one transaction, and adds the counts to the tables of rates and sizes at its end. */
export class EventTallies {
  /** By site, kind and minute. */
  private readonly minutes = new Map<string, number>();
  /** By site, quantity, sign and bin. */
  private readonly sizes = new Map<string, number>();
  private readonly addRate;
  private readonly dropRate;
  private readonly addSize;
  private readonly dropSize;

  constructor({ $client: client }: Db) {
    this.addRate = client.prepare(
      `INSERT INTO event_rates (site_id, kind, width_s, from_tai_s, events) VALUES (?, ?, ?, ?, ?)
       ON CONFLICT DO UPDATE SET events = events + excluded.events`,
    );
    this.dropRate = client.prepare(
      'UPDATE event_rates SET events = events - ? WHERE site_id = ? AND kind = ? AND width_s = ? AND from_tai_s = ? RETURNING events',
    );
    this.addSize = client.prepare(
      `INSERT INTO event_histograms (site_id, quantity, sign, bin, events) VALUES (?, ?, ?, ?, ?)
       ON CONFLICT DO UPDATE SET events = events + excluded.events`,
    );
    this.dropSize = client.prepare(
      'UPDATE event_histograms SET events = events - ? WHERE site_id = ? AND quantity = ? AND sign = ? AND bin = ? RETURNING events',
    );
    this.deleteRate = client.prepare('DELETE FROM event_rates WHERE site_id = ? AND kind = ? AND width_s = ? AND from_tai_s = ?');
    this.deleteSize = client.prepare('DELETE FROM event_histograms WHERE site_id = ? AND quantity = ? AND sign = ? AND bin = ?');
  }

  private readonly deleteRate;
  private readonly deleteSize;

  /** An event came (+1) or went (-1). */
  count({ siteId, kind, taiS, sigmaNs, amplitude }: Counted, by: 1 | -1): void {
    plus(this.minutes, `${siteId} ${kind} ${Math.floor(taiS / MINUTE_S)}`, by);
    if (kind !== 'trigger') return;
    this.countSize(siteId, 'sigma_ns', sigmaNs, by);
    if (!Number.isNaN(amplitude)) this.countSize(siteId, 'amplitude', amplitude, by);
  }

  private countSize(siteId: number, quantity: string, size: number, by: number): void {
    const { sign, bin } = binOf(size);
    plus(this.sizes, `${siteId} ${quantity} ${sign} ${bin}`, by);
  }

  /** Adds what was counted to the tables; rows that come to 0 are no more. */
  write(): void {
    const spans = new Map<string, number>();
    for (const [key, by] of this.minutes) {
      const [siteId = '', kind = '', minute = ''] = key.split(' ');
      for (const widthS of WIDTHS_S)
        plus(spans, `${siteId} ${kind} ${widthS} ${Math.floor((Number(minute) * MINUTE_S) / widthS) * widthS}`, by);
    }
    for (const [key, by] of spans) {
      const [siteId = '', kind = '', widthS = '', fromTaiS = ''] = key.split(' ');
      const place = [Number(siteId), kind, Number(widthS), Number(fromTaiS)] as const;
      if (by > 0) this.addRate.run(...place, by);
      else if (by < 0 && isNone(this.dropRate.get(-by, ...place))) this.deleteRate.run(...place);
    }
    for (const [key, by] of this.sizes) {
      const [siteId = '', quantity = '', sign = '', bin = ''] = key.split(' ');
      const place = [Number(siteId), quantity, Number(sign), Number(bin)] as const;
      if (by > 0) this.addSize.run(...place, by);
      else if (by < 0 && isNone(this.dropSize.get(-by, ...place))) this.deleteSize.run(...place);
    }
    this.forget();
  }

  forget(): void {
    this.minutes.clear();
    this.sizes.clear();
  }
}

const isNone = (row: unknown): boolean => typeof row === 'object' && row !== null && 'events' in row && row.events === 0;
