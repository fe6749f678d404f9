import { hash } from 'node:crypto';
import { type SiteRecord } from '#shared/contract/site-record';
import { type StoredEvent } from '../reconcile/stored-event';

/** The columns that every record may have; none of the further ones may be called so. */
export const OWN_COLUMNS = ['amplitude', 'kind', 'reading', 'reading_form', 'sequence', 'series', 'sigma_ns', 'site'] as const;

/** A cell, told apart from every other one: its column, its length, its text. An empty cell is like a missing column. */
const cell = (name: string, text: string): string => (text === '' ? '' : `${name}:${text.length}:${text};`);

/** Line ends within a text count alike, as in logs. */
const unixLines = (text: string): string => (text.includes('\r') ? text.replaceAll('\r\n', '\n') : text);

/** By way of a text of one character a byte, which takes half the time of asking for the bytes. */
const sha256 = (content: string | Uint8Array): Buffer => Buffer.from(hash('sha256', content, 'binary'), 'binary');

/**
 * SHA-256 over a record's content by column name: the same for the same texts, whatever the order of the columns; what tells the same record
 * again from a conflict.
 */
export function contentHash(record: SiteRecord): Buffer {
  const { series, sequence, kind, reading, readingForm, sigmaNs, amplitude, extra } = record;
  let content =
    cell('amplitude', amplitude) +
    cell('kind', kind) +
    cell('reading', reading) +
    (readingForm === 'iso' ? '' : cell('reading_form', readingForm)) +
    cell('sequence', sequence) +
    cell('series', series) +
    cell('sigma_ns', sigmaNs);
  if (extra) for (const name of Object.keys(extra).sort()) content += `+${cell(name, extra[name] ?? '')}`;
  return sha256(unixLines(content));
}

/** What the hash of an event is over: as computed, or as its row has it. */
export type HashedEvent = Omit<StoredEvent, 'site' | 'series' | 'sequence' | 'version' | 'segment' | 'sinceEpochRestDays'>;

/** What a row of events holds beside the event's numbers. */
export interface RowGround {
  readonly networkId: number;
  readonly groundingId: number;
  readonly changeNumber: number;
}

const NUMBERS_OF_ROW = 17;
const row = new DataView(new ArrayBuffer(8 * NUMBERS_OF_ROW));
const rowBytes = new Uint8Array(row.buffer);
const KIND_NUMBERS = { trigger: 0, reference: 1, test: 2 } as const;
const SOURCE_NUMBERS = { record: 0, site: 1, resolution: 2 } as const;

/**
 * SHA-256 over all that a row of `events` or `event_versions` holds of an event, as doubles (big-endian; an amplitude that is not given as NaN):
 * finds a flipped bit.
 */
export function eventRowHash(event: HashedEvent, { networkId, groundingId, changeNumber }: RowGround): Buffer {
  const numbers = [
    event.triggerId,
    networkId,
    event.siteId,
    KIND_NUMBERS[event.kind],
    groundingId,
    event.taiS,
    event.ps,
    event.xM,
    event.yM,
    event.zM,
    event.readingSigmaNs,
    SOURCE_NUMBERS[event.sigmaSource],
    event.sigmaNs,
    event.sinceEpochDays,
    event.amplitude,
    event.eventVersion,
    changeNumber,
  ];
  for (let at = 0; at < NUMBERS_OF_ROW; at++) row.setFloat64(8 * at, numbers[at] ?? NaN); // a damaged row may have a word that is none
  return sha256(rowBytes);
}
