import { problemOf, valueOf, type Outcome } from '../outcome';
import { quoted } from '../quoted';
import { type SiteRecord } from './site-record';
import { isColumnName, SITE_LIMITS } from './site-socket';

/**
 * A batch of records as one run of bytes, by columns. All numbers are little-endian; nothing is aligned.
 *
 *     4  the letters SKRB
 *     2  version of this form, 1
 *     2  E, how many further columns
 *     4  N, how many records, 1 to 1,000
 *     4  T, bytes of the text block
 *        7 columns: series, sequence, kind, reading form, reading, sigma in ns, amplitude
 *        E further columns, each behind the length of its name in bytes (2)
 *     T  the text block: UTF-8, the texts of all columns one behind another in the order above; a further column's name before its texts
 *
 * A column is one byte that says how it is written, then
 *
 *     0  nothing: every text of it is empty
 *     1  one length (2): every record has this text
 *     2  N lengths (2 each): a text for each record
 *     3  N whole numbers of 0 to 2^53 - 1: low half (4), high half (4); they stand for their digits
 *     4  N times of two whole numbers, seconds (low 4, high 4 with sign) and picoseconds (low 4, high 4); they stand for `SECONDS PICOSECONDS`
 */
const MAGIC = 0x42524b53;
const VERSION = 1;
const HEADER_BYTES = 16;
const EMPTY = 0;
const SAME = 1;
const TEXTS = 2;
const WHOLE = 3;
const PAIR = 4;
const HALF = 2 ** 32;
const WIDTHS = { [TEXTS]: 2, [WHOLE]: 8, [PAIR]: 16 } as const;
const PS_PER_S = 1e12;

const WHOLE_FORM = /^(?:0|[1-9]\d{0,15})$/;
const PAIR_FORM = /^(0|-?[1-9]\d{0,15}) (0|[1-9]\d{0,11})$/;

/** UTF-8 both ways; `decode` keeps a byte order mark, and answers undefined for bytes that are not UTF-8. */
export interface Utf8 {
  readonly encode: (text: string) => Uint8Array;
  readonly decode: (bytes: Uint8Array) => string | undefined;
}

type Cells = readonly string[];

/** How a column is written, and the texts that it puts into the text block. */
interface WrittenColumn {
  readonly mode: number;
  readonly texts: Cells;
  readonly cells: Cells;
  readonly name?: string;
}

const readingForms: Readonly<Record<SiteRecord['readingForm'], string>> = { iso: '', 'tai-pair': 'tai-pair' };

function modeOf(cells: Cells): number {
  const [first = ''] = cells;
  if (cells.every((cell) => cell === first)) return first === '' ? EMPTY : SAME;
  if (cells.every((cell) => WHOLE_FORM.test(cell) && Number.isSafeInteger(Number(cell)))) return WHOLE;
  return cells.every(isPair) ? PAIR : TEXTS;
}

function isPair(cell: string): boolean {
  const found = PAIR_FORM.exec(cell);
  return found !== null && Number.isSafeInteger(Number(found[1]));
}

function written(cells: Cells, name?: string): WrittenColumn {
  const mode = modeOf(cells);
  const texts = mode === TEXTS ? cells : mode === SAME ? cells.slice(0, 1) : [];
  return { mode, cells, texts: name === undefined ? texts : [name, ...texts], ...(name !== undefined && { name }) };
}

/**
 * Packs records into the bytes of one batch.
 *
 * @param records 1 to 1,000; an empty text of a further column counts as absent
 * @param utf8 the platform's
 * @returns the bytes, at most 256 KiB; or the problem `batch-records`, `batch-bytes`, `record-text` or `record-columns`
 */
export function packRecords(records: readonly SiteRecord[], utf8: Utf8): Outcome<Uint8Array> {
  if (records.length === 0 || records.length > SITE_LIMITS.batchRecords)
    return problemOf('batch-records', 'records', `are ${records.length}; a batch has 1 to ${SITE_LIMITS.batchRecords}`);
  const names = [...new Set(records.flatMap(({ extra }) => (extra ? Object.keys(extra).filter((name) => extra[name] !== '') : [])))];
  const wrong = names.find((name) => !isColumnName(name) || utf8.encode(name).length > SITE_LIMITS.columnNameBytes);
  if (wrong !== undefined || names.length > SITE_LIMITS.extraColumns)
    return problemOf(
      'record-columns',
      'extra',
      wrong === undefined
        ? `has ${names.length} columns; there are at most ${SITE_LIMITS.extraColumns}`
        : `has a column ${quoted(wrong)}; a name has 1 to ${SITE_LIMITS.columnNameBytes} bytes and is not __proto__`,
    );
  const columns = [
    written(records.map(({ series }) => series)),
    written(records.map(({ sequence }) => sequence)),
    written(records.map(({ kind }) => kind)),
    written(records.map(({ readingForm }) => readingForms[readingForm])),
    written(records.map(({ reading }) => reading)),
    written(records.map(({ sigmaNs }) => sigmaNs)),
    written(records.map(({ amplitude }) => amplitude)),
    ...names.map((name) =>
      written(
        records.map(({ extra }) => (extra && Object.hasOwn(extra, name) ? (extra[name] ?? '') : '')),
        name,
      ),
    ),
  ];
  return laidOut(columns, records.length, names.length, utf8);
}

function laidOut(columns: readonly WrittenColumn[], rows: number, extraColumns: number, utf8: Utf8): Outcome<Uint8Array> {
  const texts = columns.flatMap((column) => column.texts);
  const block = texts.join('');
  const blockBytes = utf8.encode(block);
  // In ASCII a text has as many bytes as characters.
  const lengths = texts.map((text) => (blockBytes.length === block.length ? text.length : utf8.encode(text).length));
  const tooLong = lengths.findIndex((length) => length > SITE_LIMITS.textBytes);
  if (tooLong >= 0)
    return problemOf('record-text', 'records', `have a text of ${lengths[tooLong] ?? 0} bytes; the longest has ${SITE_LIMITS.textBytes}`);
  const columnBytes = columns.reduce((bytes, column) => bytes + 1 + (column.name === undefined ? 0 : 2) + fixedBytes(column.mode, rows), 0);
  const allBytes = HEADER_BYTES + columnBytes + blockBytes.length;
  if (allBytes > SITE_LIMITS.batchBytes)
    return problemOf('batch-bytes', 'records', `take ${allBytes} bytes; a batch has at most ${SITE_LIMITS.batchBytes}`);
  const ofTexts = lengthsOf(columns, lengths, rows);
  if (ofTexts > SITE_LIMITS.unpackedBytes)
    return problemOf('batch-bytes', 'records', `have ${ofTexts} bytes of text; a batch has at most ${SITE_LIMITS.unpackedBytes}`);
  const bytes = new Uint8Array(allBytes);
  const view = new DataView(bytes.buffer);
  view.setUint32(0, MAGIC, true);
  view.setUint16(4, VERSION, true);
  view.setUint16(6, extraColumns, true);
  view.setUint32(8, rows, true);
  view.setUint32(12, blockBytes.length, true);
  let at = HEADER_BYTES;
  let text = 0;
  const putLength = (): void => {
    view.setUint16(at, lengths[text++] ?? 0, true);
    at += 2;
  };
  for (const { mode, cells, name } of columns) {
    if (name !== undefined) putLength();
    view.setUint8(at++, mode);
    if (mode === SAME) putLength();
    else if (mode === TEXTS) cells.forEach(putLength);
    else if (mode === WHOLE) for (const cell of cells) at = putWhole(view, at, Number(cell));
    else if (mode === PAIR) for (const cell of cells) for (const part of cell.split(' ')) at = putWhole(view, at, Number(part));
  }
  bytes.set(blockBytes, at);
  return valueOf(bytes);
}

/** Bytes of text once each record has its own. */
function lengthsOf(columns: readonly WrittenColumn[], lengths: readonly number[], rows: number): number {
  let text = 0;
  let total = 0;
  for (const { mode, texts, name } of columns) {
    const own = lengths.slice(text, (text += texts.length));
    const named = name === undefined ? 0 : (own.shift() ?? 0);
    total += unpackedBytes(mode, named, own, rows);
  }
  return total;
}

const unpackedBytes = (mode: number, nameBytes: number, lengths: readonly number[], rows: number): number =>
  lengths.reduce((total, length) => total + length, 0) * (mode === SAME ? rows : 1) + (mode === EMPTY ? 0 : nameBytes * rows);

const fixedBytes = (mode: number, rows: number): number =>
  mode === SAME ? 2 : mode === TEXTS || mode === WHOLE || mode === PAIR ? rows * WIDTHS[mode] : 0;

function putWhole(view: DataView, at: number, value: number): number {
  const high = Math.floor(value / HALF);
  view.setUint32(at, value - high * HALF, true);
  view.setInt32(at + 4, high, true);
  return at + 8;
}

/** A column as it was read: where its lengths stand, or the texts themselves. */
interface ReadColumn {
  readonly name: number | undefined;
  readonly mode: number;
  /** Byte lengths of its texts. */
  readonly lengths: readonly number[];
  readonly cells: Cells;
}

/** What is wrong with bytes that are no batch; thrown and caught in this file alone. */
class Unreadable extends Error {}

/**
 * Reads the bytes of one batch, whatever they are.
 *
 * @param bytes as they came, at any offset of their buffer
 * @param utf8 the platform's
 * @returns 1 to 1,000 records; or the problem `batch-form`. Nothing is thrown, and no more is kept than the limits of `SITE_LIMITS` allow.
 */
export function unpackRecords(bytes: Uint8Array, utf8: Utf8): Outcome<readonly SiteRecord[]> {
  try {
    return valueOf(new BatchReader(bytes, utf8).records());
  } catch (fault) {
    if (fault instanceof Unreadable) return problemOf('batch-form', 'packed', fault.message);
    throw fault;
  }
}

class BatchReader {
  private readonly view: DataView;
  private at = HEADER_BYTES;
  private rows = 0;

  constructor(
    private readonly bytes: Uint8Array,
    private readonly utf8: Utf8,
  ) {
    this.view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  }

  records(): readonly SiteRecord[] {
    const { view } = this;
    const size = this.bytes.length;
    if (size < HEADER_BYTES || size > SITE_LIMITS.batchBytes)
      throw new Unreadable(`has ${size} bytes; a batch has ${HEADER_BYTES} to ${SITE_LIMITS.batchBytes}`);
    if (view.getUint32(0, true) !== MAGIC) throw new Unreadable('does not begin with the letters SKRB');
    const version = view.getUint16(4, true);
    if (version !== VERSION) throw new Unreadable(`is of version ${version}; this server reads version ${VERSION}`);
    const extraColumns = view.getUint16(6, true);
    if (extraColumns > SITE_LIMITS.extraColumns)
      throw new Unreadable(`has ${extraColumns} further columns; there are at most ${SITE_LIMITS.extraColumns}`);
    this.rows = view.getUint32(8, true);
    if (this.rows === 0 || this.rows > SITE_LIMITS.batchRecords)
      throw new Unreadable(`has ${this.rows} records; a batch has 1 to ${SITE_LIMITS.batchRecords}`);
    const columns = Array.from({ length: FIXED_COLUMNS + extraColumns }, (_, index) => this.column(index >= FIXED_COLUMNS));
    const textBytes = view.getUint32(12, true);
    if (this.at + textBytes !== size)
      throw new Unreadable(`has ${size - this.at} bytes behind its columns; its header says that the text block has ${textBytes}`);
    return this.assembled(this.withTexts(columns));
  }

  private column(isNamed: boolean): ReadColumn {
    const name = isNamed ? this.length() : undefined;
    this.need(1);
    const mode = this.view.getUint8(this.at++);
    if (mode > PAIR) throw new Unreadable(`has a column written in the way ${mode}; there are 0 to ${PAIR}`);
    this.need(fixedBytes(mode, this.rows));
    const lengths = Array.from({ length: mode === TEXTS ? this.rows : mode === SAME ? 1 : 0 }, () => this.length());
    const cells =
      mode === WHOLE
        ? Array.from({ length: this.rows }, () => this.whole(0))
        : mode === PAIR
          ? Array.from({ length: this.rows }, () => `${this.whole(-Number.MAX_SAFE_INTEGER)} ${this.whole(0, PS_PER_S - 1)}`)
          : [];
    return { name, mode, lengths, cells };
  }

  private need(bytes: number): void {
    if (this.at + bytes > this.bytes.length) throw new Unreadable('ends within its columns');
  }

  private length(): number {
    this.need(2);
    const length = this.view.getUint16(this.at, true);
    this.at += 2;
    return length;
  }

  private whole(least: number, most: number = Number.MAX_SAFE_INTEGER): string {
    const value = this.view.getInt32(this.at + 4, true) * HALF + this.view.getUint32(this.at, true);
    this.at += 8;
    if (value < least || value > most) throw new Unreadable(`has the number ${value}; it must be ${least} to ${most}`);
    return String(value);
  }

  /** The columns with their texts, each taken from the text block. */
  private withTexts(columns: readonly ReadColumn[]): { readonly name: string; readonly cells: Cells; readonly mode: number }[] {
    const block = this.bytes.subarray(this.at);
    const whole = this.decoded(block);
    const isAscii = whole.length === block.length;
    let at = 0;
    let ofTexts = 0;
    const text = (length: number): string => {
      const end = at + length;
      if (end > block.length) throw new Unreadable('has texts that are longer than its text block');
      const found = isAscii ? whole.slice(at, end) : this.decoded(block.subarray(at, end));
      at = end;
      return found;
    };
    const read = columns.map(({ name: nameBytes, mode, lengths, cells }) => {
      const name = nameBytes === undefined ? '' : text(nameBytes);
      if (nameBytes !== undefined && (!isColumnName(name) || nameBytes > SITE_LIMITS.columnNameBytes))
        throw new Unreadable(`has a column ${quoted(name)}; a name has 1 to ${SITE_LIMITS.columnNameBytes} bytes and is not __proto__`);
      ofTexts += unpackedBytes(mode, nameBytes ?? 0, lengths, this.rows);
      if (ofTexts > SITE_LIMITS.unpackedBytes)
        throw new Unreadable(`has texts of more than ${SITE_LIMITS.unpackedBytes} bytes once each record has its own`);
      return { name, mode, cells: mode === TEXTS || mode === SAME ? lengths.map(text) : cells };
    });
    if (at !== block.length) throw new Unreadable('has more text than its columns take');
    return read;
  }

  private decoded(bytes: Uint8Array): string {
    const found = this.utf8.decode(bytes);
    if (found === undefined) throw new Unreadable('has text that is not UTF-8');
    return found;
  }

  private assembled(columns: readonly { readonly name: string; readonly cells: Cells; readonly mode: number }[]): SiteRecord[] {
    const further = columns.slice(FIXED_COLUMNS).filter(({ mode }) => mode !== EMPTY);
    if (new Set(further.map(({ name }) => name)).size !== further.length) throw new Unreadable('has two columns of one name');
    const cell = (column: number, row: number): string => {
      const found = columns[column];
      if (!found || found.mode === EMPTY) return '';
      return found.cells[found.mode === SAME ? 0 : row] ?? '';
    };
    return Array.from({ length: this.rows }, (_, row) => {
      const form = cell(3, row);
      if (form !== '' && form !== 'tai-pair') throw new Unreadable(`has the reading form ${quoted(form)}; it is empty or tai-pair`);
      const named = further
        .map(({ name, mode, cells }): [string, string] => [name, cells[mode === SAME ? 0 : row] ?? ''])
        .filter(([, value]) => value !== '');
      return {
        series: cell(0, row),
        sequence: cell(1, row),
        kind: cell(2, row),
        reading: cell(4, row),
        readingForm: form === '' ? 'iso' : form,
        sigmaNs: cell(5, row),
        amplitude: cell(6, row),
        ...(named.length > 0 && { extra: Object.fromEntries(named) }),
      };
    });
  }
}

const FIXED_COLUMNS = 7;
