import { MOST_RECORD_BYTES } from '#schema/words';
import { isCode } from '#shared/reconcile/code';
import { quoted } from '#shared/quoted';
import { type SiteRecord } from '#shared/contract/site-record';
import { OWN_COLUMNS } from './hashes';
import { verbatimOf } from './set-aside-store';
import { UNREAD_SERIES } from './series-books';

/** Digits that a sequence may have. */
export const MOST_SEQUENCE_DIGITS = 4_096;
/** Bytes of a standard error or an amplitude as it is written. */
const MOST_NUMBER_BYTES = 400;
const MOST_READING_BYTES = 200;

/** What a record is counted under: its numbering and number, so far as they can be read. */
export interface RecordIdentity {
  readonly series: string;
  /** null where it cannot be read. */
  readonly sequence: string | null;
}

/** The numbering and number of a record that may be at fault. */
export function identityOf({ series, sequence }: SiteRecord): RecordIdentity {
  const isNumber = sequence.length <= MOST_SEQUENCE_DIGITS && /^\d+$/.test(sequence);
  return {
    series: series === '' || isCode(series) ? series : UNREAD_SERIES,
    sequence: isNumber ? sequence.replace(/^0+(?=\d)/, '') : null,
  };
}

/** A fault of a record's form, before anything is computed. */
export interface FormFault {
  readonly reason: 'columns' | 'too-long';
  readonly detail: string;
}

const tooLong = (what: string, bytes: number, most: number): FormFault => ({
  reason: 'too-long',
  detail: `${what} has ${bytes} bytes; at most ${most} are kept`,
});

/** Whether a record has further columns of its own names, or more than is kept. */
export function formFault(record: SiteRecord): FormFault | undefined {
  const { sequence, sigmaNs, amplitude, reading, extra } = record;
  if (sequence.length > MOST_SEQUENCE_DIGITS) return tooLong('the sequence', Buffer.byteLength(sequence), MOST_SEQUENCE_DIGITS);
  if (sigmaNs.length > MOST_NUMBER_BYTES) return tooLong('sigma_ns', Buffer.byteLength(sigmaNs), MOST_NUMBER_BYTES);
  if (amplitude.length > MOST_NUMBER_BYTES) return tooLong('amplitude', Buffer.byteLength(amplitude), MOST_NUMBER_BYTES);
  if (reading.length > MOST_READING_BYTES) return tooLong('the reading', Buffer.byteLength(reading), MOST_READING_BYTES);
  if (!extra) return undefined;
  const own = OWN_COLUMNS.find((name) => Object.hasOwn(extra, name));
  if (own !== undefined)
    return { reason: 'columns', detail: `the further column ${quoted(own)} has the name of one that every record has; it needs another` };
  const bytes = Buffer.byteLength(JSON.stringify(record));
  return bytes > MOST_RECORD_BYTES ? tooLong('the record', bytes, MOST_RECORD_BYTES) : undefined;
}

/** A record that was kept as its own text. */
export function parseVerbatim(text: string): SiteRecord | undefined {
  try {
    const value: unknown = JSON.parse(text);
    // What was written by `verbatimOf` reads back as it was; anything else is an upload's line or was cut.
    return typeof value === 'object' && value !== null && verbatimOf(value as SiteRecord) === text ? (value as SiteRecord) : undefined;
  } catch {
    return undefined;
  }
}
