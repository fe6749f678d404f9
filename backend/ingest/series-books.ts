import { type Db } from '../db';
import { HeldNumbers } from './held-numbers';

/** The numbering that counts records whose own could not be read. */
export const UNREAD_SERIES = '*';

/** No site may begin more numberings than this; a record that would is set aside. */
export const MOST_SERIES = 10_000;

/** What came of one numbering of a site; received = stored + known + set aside + withdrawn, after each record. */
export interface SeriesBook {
  readonly siteId: number;
  readonly series: string;
  received: number;
  stored: number;
  known: number;
  setAside: number;
  /** Stored once, then withdrawn with their intake. */
  readonly withdrawn: number;
  readonly held: HeldNumbers;
  firstReceivedAtMs: number | null;
  lastReceivedAtMs: number | null;
}

interface SeriesRow {
  series: string;
  received: number;
  stored: number;
  known: number;
  set_aside: number;
  withdrawn: number;
  first: string | null;
  contiguous: string | null;
  first_received_at_ms: number | null;
  last_received_at_ms: number | null;
}

interface RangeRow {
  series: string;
  first: string;
  last: string;
  since_ms: number;
}

/**
 * Keeps the books of all series: read once, written at the end of each transaction that touched them. After a transaction that failed they
 * must be forgotten.
 */
export class SeriesBooks {
  private sites = new Map<number, Map<string, SeriesBook>>();
  private readonly touched = new Set<SeriesBook>();
  private readonly readSeries;
  private readonly readRanges;
  private readonly writeSeries;
  private readonly writeRange;
  private readonly deleteRange;

  constructor({ $client: client }: Db) {
    this.readSeries = client.prepare<[number], SeriesRow>(
      `SELECT series, received, stored, known, set_aside, withdrawn, first, contiguous, first_received_at_ms, last_received_at_ms
       FROM series WHERE site_id = ?`,
    );
    this.readRanges = client.prepare<[number], RangeRow>(
      'SELECT series, first, last, since_ms FROM held_ranges WHERE site_id = ? ORDER BY series, first_digits, first',
    );
    this.writeSeries = client.prepare(
      `INSERT INTO series (site_id, series, received, stored, known, set_aside, withdrawn, first, contiguous, first_received_at_ms,
         last_received_at_ms) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)
       ON CONFLICT DO UPDATE SET received = excluded.received, stored = excluded.stored, known = excluded.known, set_aside = excluded.set_aside,
         first = excluded.first, contiguous = excluded.contiguous, first_received_at_ms = excluded.first_received_at_ms,
         last_received_at_ms = excluded.last_received_at_ms`,
    );
    this.writeRange = client.prepare(
      `INSERT INTO held_ranges (site_id, series, first_digits, first, last, since_ms) VALUES (?, ?, ?, ?, ?, ?)
       ON CONFLICT DO UPDATE SET last = excluded.last, since_ms = excluded.since_ms`,
    );
    this.deleteRange = client.prepare('DELETE FROM held_ranges WHERE site_id = ? AND series = ? AND first_digits = ? AND first = ?');
  }

  /** The books of a site, by series. */
  ofSite(siteId: number): ReadonlyMap<string, SeriesBook> {
    return this.sites.get(siteId) ?? this.read(siteId);
  }

  /** The book of a series, which is written at the end of the transaction; undefined where the site has begun too many. */
  open(siteId: number, series: string): SeriesBook | undefined {
    const books = this.sites.get(siteId) ?? this.read(siteId);
    let book = books.get(series);
    if (!book) {
      if (books.size >= MOST_SERIES && series !== UNREAD_SERIES) return undefined;
      book = emptyBook(siteId, series);
      books.set(series, book);
    }
    this.touched.add(book);
    return book;
  }

  /** Writes what was touched. */
  write(): void {
    for (const book of this.touched) {
      const [lowest] = book.held.ranges;
      this.writeSeries.run(
        book.siteId,
        book.series,
        book.received,
        book.stored,
        book.known,
        book.setAside,
        book.withdrawn,
        lowest ? String(lowest.first) : null,
        lowest ? String(lowest.last) : null,
        book.firstReceivedAtMs,
        book.lastReceivedAtMs,
      );
      const { gone, written } = book.held.settle();
      for (const first of gone) this.deleteRange.run(book.siteId, book.series, String(first).length, String(first));
      for (const { first, last, sinceMs } of written)
        this.writeRange.run(book.siteId, book.series, String(first).length, String(first), String(last), sinceMs);
    }
    this.touched.clear();
  }

  forget(): void {
    this.sites = new Map();
    this.touched.clear();
  }

  private read(siteId: number): Map<string, SeriesBook> {
    const ranges = this.readRanges.all(siteId);
    const books = new Map<string, SeriesBook>();
    for (const row of this.readSeries.all(siteId)) {
      const lowest =
        row.first === null || row.contiguous === null ? [] : [{ first: BigInt(row.first), last: BigInt(row.contiguous), sinceMs: 0 }];
      const above = ranges
        .filter(({ series }) => series === row.series)
        .map(({ first, last, since_ms }) => ({ first: BigInt(first), last: BigInt(last), sinceMs: since_ms }));
      books.set(row.series, {
        siteId,
        series: row.series,
        received: row.received,
        stored: row.stored,
        known: row.known,
        setAside: row.set_aside,
        withdrawn: row.withdrawn,
        held: new HeldNumbers([...lowest, ...above]),
        firstReceivedAtMs: row.first_received_at_ms,
        lastReceivedAtMs: row.last_received_at_ms,
      });
    }
    this.sites.set(siteId, books);
    return books;
  }
}

const emptyBook = (siteId: number, series: string): SeriesBook => ({
  siteId,
  series,
  received: 0,
  stored: 0,
  known: 0,
  setAside: 0,
  withdrawn: 0,
  held: new HeldNumbers(),
  firstReceivedAtMs: null,
  lastReceivedAtMs: null,
});
