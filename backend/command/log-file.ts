import { isAscii } from 'node:buffer';
import { closeSync, fstatSync, openSync, readSync } from 'node:fs';
import Papa from 'papaparse';
import { type Pace } from './pace';
import { UsageProblem } from './usage-problem';

/** Where a record stands in its file, so that its text can be read again when it is needed. */
export interface RecordPlace {
  /** Line on which the record starts; the file's first line is 1. */
  readonly line: number;
  readonly offsetBytes: number;
  /** Without the line end. */
  readonly lengthBytes: number;
}

/**
 * Who takes the records of a file, in their order; the header is the first. `isWhole` is false where the quoting is broken: there are no fields
 * then, but the text as it stands, of a record that swallowed the rest its beginning.
 */
export type RecordTaker = (fields: string[], place: RecordPlace, isWhole: boolean, asItStands?: string) => void;

/** A record that took everything from its first line to the end of its file. */
export interface Swallowed {
  readonly line: number;
  /** Why, such as `a quote is not closed`. */
  readonly why: string;
}

/** Bytes read at once: few enough that a block's rows are gone before they would be kept with the old ones. */
const BLOCK_BYTES = 1 << 17;

/**
 * Longest record, bytes. An open quote that is not closed within this is taken as never closed: it swallows the rest of the file.
 */
const LONGEST_RECORD_BYTES = 1 << 24;

/** What is handed over of a record that swallowed the rest of its file, bytes. */
const SHOWN_OF_SWALLOWED_BYTES = 1 << 15;

const LF = 0x0a;
const CR = 0x0d;
const QUOTE = 0x22;
const BYTE_ORDER_MARK = Buffer.from([0xef, 0xbb, 0xbf]);

const NOT_ASCII = /[^\0-\x7f]/;

const CSV = { delimiter: ',', newline: '\n', quoteChar: '"', escapeChar: '"' } as const;

/**
 * Reads a CSV file (RFC 4180, UTF-8; LF or CRLF) record by record, with the place of each.
 *
 * Empty lines and a byte order mark are skipped; bytes that are not UTF-8 become U+FFFD in the fields. A quote that is followed by something
 * else than a separator spoils its own line and no other; a quote that is never closed spoils everything from its record's first line on.
 * Either is handed over as a record that is not whole. A blank
 * behind a closing quote is such a thing too (RFC 4180, 2.5).
 *
 * @param path a file that can be read twice
 * @param take called for each record
 * @param options the pace, and who is told of the bytes read
 * @returns the record that took the rest of the file, if one did; a file in UTF-16 is a usage problem
 */
export async function readRecords(
  path: string,
  take: RecordTaker,
  options: { pace: Pace; onBytes: (bytes: number) => void },
): Promise<Swallowed | undefined> {
  const descriptor = openSync(path, 'r');
  try {
    refuseUtf16(descriptor, path);
    const sizeBytes = fstatSync(descriptor).size;
    const reader = new RecordReader(take, { fileBytes: sizeBytes, fileEnd: lastBytes(descriptor, sizeBytes) });
    const block = Buffer.allocUnsafe(BLOCK_BYTES);
    for (;;) {
      const bytes = readSync(descriptor, block, 0, BLOCK_BYTES, null);
      if (bytes === 0) break;
      reader.add(block.subarray(0, bytes));
      options.onBytes(bytes);
      if (reader.swallowed) break;
      await options.pace.breathe();
    }
    reader.end();
    return reader.swallowed;
  } finally {
    closeSync(descriptor);
  }
}

/** Reads records from blocks of bytes as they come. */
export class RecordReader {
  swallowed: Swallowed | undefined;
  private rest: Buffer = Buffer.alloc(0);
  private offsetBytes = 0;
  private line = 1;
  private isFirst = true;
  private isAscii = true;

  constructor(
    private readonly take: RecordTaker,
    /** Of a file whose end is known: its size, and its last two bytes. */
    private readonly file?: { readonly fileBytes: number; readonly fileEnd: Buffer },
  ) {}

  /** Whether a record has begun and not ended. */
  get isWithinRecord(): boolean {
    return this.rest.length > 0;
  }

  /** Takes the next block, whose buffer may be used again. */
  add(block: Buffer): void {
    // The block's buffer is used again for the next one, so what is left over is always a copy.
    let bytes = this.rest.length === 0 ? Buffer.from(block) : Buffer.concat([this.rest, block]);
    if (this.isFirst && bytes.length >= BYTE_ORDER_MARK.length) {
      this.isFirst = false;
      if (bytes.subarray(0, 3).equals(BYTE_ORDER_MARK)) {
        bytes = bytes.subarray(3);
        this.offsetBytes = 3;
      }
    }
    const end = bytes.lastIndexOf(LF) + 1;
    this.rest = bytes.subarray(this.parse(bytes.subarray(0, end), false));
    if (this.rest.length > LONGEST_RECORD_BYTES) this.swallow();
  }

  /** There is no more: what is left is the last record. */
  end(): void {
    if (this.swallowed || this.rest.length === 0) return;
    this.rest = this.rest.subarray(this.parse(this.rest, true));
    if (this.rest.length > 0) this.swallow();
  }

  /** Everything from here to the end of the file is one record that is not whole. */
  private swallow(): void {
    const why = this.rest.includes(QUOTE) ? 'a quote is not closed' : `the line is longer than ${LONGEST_RECORD_BYTES} bytes`;
    this.swallowed = { line: this.line, why };
    const leftBytes = (this.file?.fileBytes ?? 0) - this.offsetBytes;
    const [bytes, end] = this.file && leftBytes > this.rest.length ? [leftBytes, this.file.fileEnd] : [this.rest.length, this.rest];
    const shown = this.rest.subarray(0, SHOWN_OF_SWALLOWED_BYTES).toString('utf8');
    this.take([], { line: this.line, offsetBytes: this.offsetBytes, lengthBytes: bytes - lineEndBytes(end) }, false, shown);
  }

  /**
   * Hands over the records in `bytes`, whole lines or the end of the file, and returns how many bytes they took.
   *
   * Each byte is read as one character, so that places are exact whatever the bytes are; fields are made UTF-8 when they are handed over.
   */
  private parse(bytes: Buffer, isEnd: boolean): number {
    if (bytes.length === 0) return 0;
    this.isAscii = isAscii(bytes);
    const text = bytes.toString('latin1');
    if (bytes.includes(QUOTE)) return this.parseQuoted(text, isEnd);
    this.parsePlain(text);
    return bytes.length;
  }

  /** Without quotes a record is a line, and its length is that of its fields and the commas between them. */
  private parsePlain(text: string): void {
    const rows = Papa.parse<string[]>(text, CSV).data;
    // A line end closes the last record; what the parser sees behind it is no line.
    if (text.endsWith('\n')) rows.pop();
    for (const fields of rows) {
      const characters = charactersOf(fields);
      const hasReturn = withoutReturn(fields);
      this.handOver(fields, hasReturn ? characters - 1 : characters, characters + 1, 1);
    }
  }

  /** `lengthBytes` without the line end, `wholeBytes` with it. */
  private handOver(fields: string[], lengthBytes: number, wholeBytes: number, lines: number): void {
    if (!this.isAscii) makeUtf8(fields);
    if (lengthBytes > 0) this.take(fields, { line: this.line, offsetBytes: this.offsetBytes, lengthBytes }, true);
    this.offsetBytes += wholeBytes;
    this.line += lines;
  }

  private parseQuoted(whole: string, isEnd: boolean): number {
    let text = whole;
    while (text !== '') {
      const step = this.parseUntilBroken(text, isEnd);
      text = text.slice(step.characters);
      if (step.isOpen) break;
      if (!step.isBroken) continue;
      const end = text.indexOf('\n');
      const spoilt = end < 0 ? text : text.slice(0, end + 1);
      const lengthBytes = spoilt.length - lineEndOf(spoilt).length;
      const asItStands = Buffer.from(spoilt.slice(0, lengthBytes), 'latin1').toString('utf8');
      this.take([], { line: this.line, offsetBytes: this.offsetBytes, lengthBytes }, false, asItStands);
      this.offsetBytes += spoilt.length;
      this.line++;
      text = text.slice(spoilt.length);
    }
    return whole.length - text.length;
  }

  /** Parses until the text ends, a quote stands open at its end, or a quote is broken; says how many characters were handed over. */
  private parseUntilBroken(text: string, isEnd: boolean): { characters: number; isOpen: boolean; isBroken: boolean } {
    let characters = 0;
    let isOpen = false;
    let isBroken = false;
    Papa.parse<string[]>(text, {
      ...CSV,
      step: ({ data, errors, meta }, parser) => {
        if (errors.some(({ code }) => code === 'InvalidQuotes')) isBroken = true;
        else if (errors.some(({ code }) => code === 'MissingQuotes')) isOpen = true;
        else {
          const raw = text.slice(characters, meta.cursor);
          if (raw !== '' && (raw.endsWith('\n') || isEnd)) {
            const end = lineEndOf(raw);
            if (!standsAsWritten(raw.slice(0, raw.length - end.length), end, data)) {
              isBroken = true;
              parser.abort();
              return;
            }
            this.handOver(data, raw.length - end.length, raw.length, lineEnds(raw));
            characters = meta.cursor;
          }
          return;
        }
        parser.abort();
      },
    });
    return { characters, isOpen, isBroken };
  }
}

const lineEnds = (text: string): number => {
  let count = 0;
  for (let at = text.indexOf('\n'); at >= 0; at = text.indexOf('\n', at + 1)) count++;
  return count;
};

function charactersOf(fields: readonly string[]): number {
  let length = fields.length - 1;
  for (const field of fields) length += field.length;
  return length;
}

/** Takes the carriage return of a CRLF, or of the end of the file, from the last field; says whether there was one. */
function withoutReturn(fields: string[]): boolean {
  const last = fields.at(-1) ?? '';
  if (!last.endsWith('\r')) return false;
  fields[fields.length - 1] = last.slice(0, -1);
  return true;
}

/**
 * Whether a record, without its line end, is what RFC 4180 makes of its fields: the parser passes over blanks behind a closing quote.
 *
 * It takes the carriage return of the line end from a last field without quotes, where the parser leaves it.
 */
function standsAsWritten(record: string, end: string, fields: string[]): boolean {
  const last = fields.length - 1;
  let at = 0;
  for (let index = 0; index <= last; index++) {
    const isQuoted = record.startsWith('"', at);
    if (index === last && !isQuoted && end.startsWith('\r')) withoutReturn(fields);
    const field = fields[index] ?? '';
    const written = isQuoted ? `"${field.includes('"') ? field.replaceAll('"', '""') : field}"` : field;
    if (!record.startsWith(written, at)) return false;
    at += written.length;
    if (index < last && !record.startsWith(',', at++)) return false;
  }
  return at === record.length;
}

function makeUtf8(fields: string[]): void {
  for (const [at, field] of fields.entries()) {
    if (NOT_ASCII.test(field)) fields[at] = Buffer.from(field, 'latin1').toString('utf8');
  }
}

/** The line end of a record, or the carriage return that stands at the end of the file in its place. */
function lineEndOf(raw: string): string {
  if (raw.endsWith('\r\n')) return '\r\n';
  return raw.endsWith('\n') ? '\n' : raw.endsWith('\r') ? '\r' : '';
}

/** Byte order marks of UTF-16, little end first and big end first. */
const UTF_16_MARKS = [Buffer.from([0xff, 0xfe]), Buffer.from([0xfe, 0xff])];

function refuseUtf16(descriptor: number, path: string): void {
  const start = Buffer.alloc(2);
  readSync(descriptor, start, 0, 2, 0);
  if (UTF_16_MARKS.some((mark) => mark.equals(start))) throw new UsageProblem(`${path}: is in UTF-16; it must be in UTF-8`);
}

function lastBytes(descriptor: number, sizeBytes: number): Buffer {
  const end = Buffer.alloc(2);
  return end.subarray(0, readSync(descriptor, end, 0, 2, Math.max(0, sizeBytes - 2)));
}

function lineEndBytes(bytes: Buffer): number {
  if (bytes.at(-1) !== LF) return 0;
  return bytes.at(-2) === CR ? 2 : 1;
}
