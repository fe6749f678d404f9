/**
 * A record as a site sends it: every text verbatim, so that nothing is lost before it is looked at, and what was written is what is kept.
 */
export interface SiteRecord {
  /** The numbering, empty unless the site had to start anew. */
  readonly series: string;
  /** A whole number as digits. */
  readonly sequence: string;
  /** `trigger`, `reference`, `test`; empty means trigger. */
  readonly kind: string;
  /** The timestamp as the site wrote it. */
  readonly reading: string;
  /** `tai-pair`: `SECONDS PICOSECONDS` of TAI since 1970-01-01T00:00:00 TAI, two whole numbers. */
  readonly readingForm: 'iso' | 'tai-pair';
  /** One standard error of the reading in nanoseconds; empty where the site states none. */
  readonly sigmaNs: string;
  /** Empty where the site gives none. */
  readonly amplitude: string;
  /** Further columns by name; absent for none. */
  readonly extra?: Readonly<Record<string, string>>;
}

/**
 * What became of a record. `unknown` means that nobody knows: it must be sent again, and doing so is safe.
 */
export type RecordFate = 'stored' | 'known' | 'set-aside' | 'unknown';
