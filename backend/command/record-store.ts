import { type ReconciledRecord, SET_ASIDE_REASONS, type SetAsideReason } from '#shared/reconcile/record';
import { type ContentHash } from './content-hash';
import { GrowingColumns } from './growing-columns';
import { type RecordPlace } from './log-file';
import { Sequences } from './sequences';

/** Columns of records that were accepted by themselves, in the order in which they came. */
const acceptedColumns = (rows: number) => ({
  taiS: new Float64Array(rows),
  ps: new Float64Array(rows),
  readingSigmaNs: new Float64Array(rows),
  sinceEpochDays: new Float64Array(rows),
  sinceEpochRestDays: new Float64Array(rows),
  amplitude: new Float64Array(rows),
  sequence: new Float64Array(rows),
  site: new Uint16Array(rows),
  series: new Uint32Array(rows),
  segment: new Int32Array(rows),
  /** Kind and source of the standard error: kind + 4 x source. */
  flags: new Uint8Array(rows),
  hashFirst: new Int32Array(rows),
  hashSecond: new Int32Array(rows),
  ...placeColumns(rows),
});

const placeColumns = (rows: number) => ({
  file: new Uint16Array(rows),
  line: new Uint32Array(rows),
  offsetBytes: new Float64Array(rows),
  lengthBytes: new Float64Array(rows),
});

const repeatedColumns = (rows: number) => ({ ...placeColumns(rows), original: new Uint32Array(rows) });

const setAsideColumns = (rows: number) => ({
  ...placeColumns(rows),
  /** Index in SET_ASIDE_REASONS. */
  reason: new Uint8Array(rows),
});

export type AcceptedColumns = ReturnType<typeof acceptedColumns>;
export type SetAsideColumns = ReturnType<typeof setAsideColumns>;
type PlaceColumns = ReturnType<typeof placeColumns>;

function putPlace(columns: PlaceColumns, row: number, file: number, place: RecordPlace): void {
  columns.file[row] = file;
  columns.line[row] = place.line;
  columns.offsetBytes[row] = place.offsetBytes;
  columns.lengthBytes[row] = place.lengthBytes;
}

function placeAt(columns: PlaceColumns, row: number): RecordPlace {
  return { line: columns.line[row] ?? 0, offsetBytes: columns.offsetBytes[row] ?? 0, lengthBytes: columns.lengthBytes[row] ?? 0 };
}

/** How often something was seen, for each site; the last row is for records whose site is unknown. */
export interface SiteCounts {
  readonly lines: Float64Array;
  readonly repeated: Float64Array;
  /** Per site, one count for each of SET_ASIDE_REASONS. */
  readonly setAside: readonly Float64Array[];
}

/** What the logs held, once all are read. */
export interface FoundRecords {
  readonly accepted: AcceptedColumns;
  /** Rows of `accepted` that stand, in no order. */
  readonly rows: Uint32Array;
  readonly setAside: SetAsideColumns;
  readonly setAsideCount: number;
  /** Series by their codes. */
  readonly series: readonly string[];
  readonly sequences: Sequences;
  readonly counts: SiteCounts;
}

const LEAST_SLOTS = 4096;
/** Identities whose slots stand beside each other; a power of 2. */
const SLOT_GROUP = 8;
/** No more slots are made on a guess, since the guess may be wrong. */
const MOST_SLOTS = 1 << 24;

/**
 * All records of the logs: what was accepted, what was said again, what is set aside, and where each stands.
 *
 * The same identity (site, series, sequence) with the same content counts once; with another content, all records of that identity are set
 * aside. Neither depends on the order in which they come.
 */
export class RecordStore {
  private readonly sequences = new Sequences();
  private readonly counts: SiteCounts;
  private readonly accepted = new GrowingColumns(acceptedColumns);
  private readonly repeated = new GrowingColumns(repeatedColumns);
  private readonly aside = new GrowingColumns(setAsideColumns);
  private readonly seriesCodes = new Map<string, number>([['', 0]]);
  /** Rows whose identity has more than one content. */
  private readonly inConflict = new Set<number>();
  /** Open addressing: row + 1, or 0 where a slot is empty. */
  private slots = new Int32Array(LEAST_SLOTS);

  constructor(private readonly siteCount: number) {
    const perSite = () => new Float64Array(siteCount + 1);
    this.counts = {
      lines: perSite(),
      repeated: perSite(),
      setAside: Array.from({ length: siteCount + 1 }, () => new Float64Array(SET_ASIDE_REASONS.length)),
    };
  }

  /** Makes room for about so many records, so that columns need not be copied as they grow. */
  expect(records: number): void {
    this.accepted.reserve(records);
    let slots = this.slots.length;
    while (slots < 2 * records && slots < MOST_SLOTS) slots *= 2;
    if (slots > this.slots.length) this.rehash(slots);
  }

  /** A record that is at fault by itself; `site` is the row of its site, or -1 where that is unknown. */
  setAside(reason: SetAsideReason, site: number, file: number, place: RecordPlace): void {
    const bySite = site < 0 ? this.siteCount : site;
    this.counts.lines[bySite] = (this.counts.lines[bySite] ?? 0) + 1;
    this.putAside(SET_ASIDE_REASONS.indexOf(reason), bySite, file, place);
  }

  /** A record that would be accepted by itself. */
  put(record: ReconciledRecord, content: ContentHash, file: number, place: RecordPlace): void {
    this.counts.lines[record.site] = (this.counts.lines[record.site] ?? 0) + 1;
    const sequence = this.sequences.codeOf(record.sequence);
    const series = this.seriesOf(record.series);
    const slot = this.slotOf(record.site, series, sequence);
    const known = (this.slots[slot] ?? 0) - 1;
    if (known >= 0) {
      this.putAgain(known, content, file, place);
      return;
    }
    const row = this.accepted.add();
    const columns = this.accepted.columns;
    columns.taiS[row] = record.taiS;
    columns.ps[row] = record.ps;
    columns.readingSigmaNs[row] = record.readingSigmaNs;
    columns.sinceEpochDays[row] = record.sinceEpochDays;
    columns.sinceEpochRestDays[row] = record.sinceEpochRestDays;
    columns.amplitude[row] = record.amplitude;
    columns.sequence[row] = sequence;
    columns.site[row] = record.site;
    columns.series[row] = series;
    columns.segment[row] = record.segment;
    columns.flags[row] = record.kind + 4 * record.sigmaSource;
    columns.hashFirst[row] = content.first;
    columns.hashSecond[row] = content.second;
    putPlace(columns, row, file, place);
    this.slots[slot] = row + 1;
    if (2 * this.accepted.count > this.slots.length) this.rehash(2 * this.slots.length);
  }

  /** Ends the collection: settles conflicts and returns what was accepted, what is set aside, and the series by their codes. */
  finish(): FoundRecords {
    const { accepted, repeated } = this;
    const conflict = SET_ASIDE_REASONS.indexOf('conflict');
    for (let again = 0; again < repeated.count; again++) {
      const original = repeated.columns.original[again] ?? 0;
      const site = accepted.columns.site[original] ?? 0;
      if (this.inConflict.has(original)) this.putAside(conflict, site, repeated.columns.file[again] ?? 0, placeAt(repeated.columns, again));
      else this.counts.repeated[site] = (this.counts.repeated[site] ?? 0) + 1;
    }
    const rows = new Uint32Array(accepted.count - this.inConflict.size);
    let kept = 0;
    for (let row = 0; row < accepted.count; row++) {
      if (this.inConflict.size > 0 && this.inConflict.has(row))
        this.putAside(conflict, accepted.columns.site[row] ?? 0, accepted.columns.file[row] ?? 0, placeAt(accepted.columns, row));
      else rows[kept++] = row;
    }
    return {
      accepted: accepted.columns,
      rows,
      setAside: this.aside.columns,
      setAsideCount: this.aside.count,
      series: [...this.seriesCodes.keys()],
      sequences: this.sequences,
      counts: this.counts,
    };
  }

  private putAside(reason: number, site: number, file: number, place: RecordPlace): void {
    const counts = this.counts.setAside[site];
    if (counts) counts[reason] = (counts[reason] ?? 0) + 1;
    const row = this.aside.add();
    putPlace(this.aside.columns, row, file, place);
    this.aside.columns.reason[row] = reason;
  }

  private putAgain(original: number, content: ContentHash, file: number, place: RecordPlace): void {
    const { hashFirst, hashSecond } = this.accepted.columns;
    if (hashFirst[original] !== content.first || hashSecond[original] !== content.second) this.inConflict.add(original);
    const row = this.repeated.add();
    putPlace(this.repeated.columns, row, file, place);
    this.repeated.columns.original[row] = original;
  }

  private seriesOf(text: string): number {
    if (text === '') return 0;
    const known = this.seriesCodes.get(text);
    if (known !== undefined) return known;
    const code = this.seriesCodes.size;
    this.seriesCodes.set(text, code);
    return code;
  }

  /** The slot in which an identity stands or would stand. */
  private slotOf(site: number, series: number, sequence: number): number {
    const columns = this.accepted.columns;
    const mask = this.slots.length - 1;
    for (let slot = identityHash(site, series, sequence) & mask; ; slot = (slot + 1) & mask) {
      const row = (this.slots[slot] ?? 0) - 1;
      if (row < 0 || (columns.sequence[row] === sequence && columns.site[row] === site && columns.series[row] === series)) return slot;
    }
  }

  private rehash(slots: number): void {
    this.slots = new Int32Array(slots);
    const { site, series, sequence } = this.accepted.columns;
    for (let row = 0; row < this.accepted.count; row++)
      this.slots[this.slotOf(site[row] ?? 0, series[row] ?? 0, sequence[row] ?? 0)] = row + 1;
  }
}

/**
 * Where an identity's slot is looked for. Numbers that follow each other share a group of slots, so that a log in its own order finds its
 * slots beside each other in the cache.
 */
function identityHash(site: number, series: number, sequence: number): number {
  const group = Math.floor(sequence / SLOT_GROUP);
  const low = group | 0;
  const high = (group / 4294967296) | 0;
  let hash = Math.imul(low ^ Math.imul(high, 0x9e3779b1) ^ Math.imul(site + 1, 0x85ebca6b) ^ Math.imul(series + 1, 0xc2b2ae35), 0x7feb352d);
  hash ^= hash >>> 15;
  hash = Math.imul(hash, 0x846ca68b);
  return ((hash ^ (hash >>> 16)) * SLOT_GROUP + (sequence - group * SLOT_GROUP)) >>> 0;
}
