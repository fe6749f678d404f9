import { closeSync, fstatSync, openSync, readSync } from 'node:fs';
import Papa from 'papaparse';
import { type Pace } from './pace';

/** Where a record stands in its file, so that its text can be read again when it is needed. */
export interface RecordPlace {
  /** Line on which the record starts; the file's first line is 1. */
  readonly line: number;
  readonly offsetBytes: number;
  /** Without the line end. */
  readonly lengthBytes: number;
}

/** Who takes the records of a file, in their order; the header is the first. `isWhole` is false where the quoting is broken. */
export type RecordTaker = (fields: string[], place: RecordPlace, isWhole: boolean) => void;

/** Bytes read at once: few enough that a block's rows are gone before they would be kept with the old ones. */
const BLOCK_BYTES = 1 << 17;

/**
 * Longest record, bytes. An open quote that is not closed within this is taken as never closed: it swallows the rest of the file.
 */
const LONGEST_RECORD_BYTES = 1 << 24;

const LF = 0x0a;
const CR = 0x0d;
const QUOTE = 0x22;
const BYTE_ORDER_MARK = Buffer.from([0xef, 0xbb, 0xbf]);

const CSV = { delimiter: ',', newline: '\n', quoteChar: '"', escapeChar: '"' } as const;

/**
 * Reads a CSV file (RFC 4180, UTF-8; LF or CRLF) record by record, with the place of each.
 *
 * Empty lines and a byte order mark are skipped. A quote that is followed by something else than a separator spoils its own line and no other;
 * a quote that is never closed spoils everything from its record's first line on. Either is handed over as a record that is not whole.
 *
 * @param path a file that can be read twice
 * @param take called for each record
 * @param options the pace, and who is told of the bytes read
 */
export async function readRecords(
  path: string,
  take: RecordTaker,
  options: { pace: Pace; onBytes: (bytes: number) => void },
): Promise<void> {
  const descriptor = openSync(path, 'r');
  try {
    const sizeBytes = fstatSync(descriptor).size;
    const reader = new BlockReader(take, sizeBytes);
    const block = Buffer.allocUnsafe(BLOCK_BYTES);
    for (;;) {
      const bytes = readSync(descriptor, block, 0, BLOCK_BYTES, null);
      if (bytes === 0) break;
      reader.add(block.subarray(0, bytes));
      options.onBytes(bytes);
      if (reader.isSwallowed) break;
      await options.pace.breathe();
    }
    reader.end();
  } finally {
    closeSync(descriptor);
  }
}

class BlockReader {
  isSwallowed = false;
  private rest: Buffer = Buffer.alloc(0);
  private offsetBytes = 0;
  private line = 1;
  private isFirst = true;

  constructor(
    private readonly take: RecordTaker,
    private readonly fileBytes: number,
  ) {}

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

  end(): void {
    if (this.isSwallowed || this.rest.length === 0) return;
    this.rest = this.rest.subarray(this.parse(this.rest, true));
    if (this.rest.length > 0) this.swallow();
  }

  /** Everything from here to the end of the file is one record that is not whole. */
  private swallow(): void {
    this.isSwallowed = true;
    let lengthBytes = Math.max(this.fileBytes - this.offsetBytes, this.rest.length);
    if (lengthBytes === this.rest.length) lengthBytes -= lineEndBytes(this.rest);
    this.take([], { line: this.line, offsetBytes: this.offsetBytes, lengthBytes }, false);
  }

  /** Hands over the records in `bytes`, whole lines or the end of the file, and returns how many bytes they took. */
  private parse(bytes: Buffer, isEnd: boolean): number {
    if (bytes.length === 0) return 0;
    if (!bytes.includes(QUOTE)) {
      this.parsePlain(bytes);
      return bytes.length;
    }
    return this.parseQuoted(bytes, isEnd);
  }

  /** Without quotes a record is a line, and its length is that of its fields and the commas between them. */
  private parsePlain(bytes: Buffer): void {
    const text = bytes.toString('utf8');
    const isAscii = text.length === bytes.length;
    const rows = Papa.parse<string[]>(text, CSV).data;
    // A line end closes the last record; what the parser sees behind it is no line.
    if (text.endsWith('\n')) rows.pop();
    for (const fields of rows) {
      const lengthBytes = isAscii ? charactersOf(fields) : Buffer.byteLength(fields.join(','));
      this.handOver(fields, lengthBytes, lengthBytes + 1, 1);
    }
  }

  private handOver(fields: string[], lengthBytes: number, wholeBytes: number, lines: number): void {
    const last = fields.at(-1) ?? '';
    const hasReturn = last.endsWith('\r');
    if (hasReturn) fields[fields.length - 1] = last.slice(0, -1);
    if (fields.length > 1 || fields[0] !== '')
      this.take(fields, { line: this.line, offsetBytes: this.offsetBytes, lengthBytes: lengthBytes - (hasReturn ? 1 : 0) }, true);
    this.offsetBytes += wholeBytes;
    this.line += lines;
  }

  private parseQuoted(bytes: Buffer, isEnd: boolean): number {
    let text = bytes.toString('utf8');
    let taken = 0;
    while (text !== '') {
      const step = this.parseUntilBroken(text, isEnd);
      taken += Buffer.byteLength(text.slice(0, step.characters));
      text = text.slice(step.characters);
      if (step.isOpen) break;
      if (!step.isBroken) continue;
      const end = text.indexOf('\n');
      const spoilt = end < 0 ? text : text.slice(0, end + 1);
      const lengthBytes = Buffer.byteLength(spoilt);
      const place = {
        line: this.line,
        offsetBytes: this.offsetBytes,
        lengthBytes: lengthBytes - lineEndBytes(Buffer.from(spoilt.slice(-2))),
      };
      this.take([], place, false);
      this.offsetBytes += lengthBytes;
      this.line++;
      taken += lengthBytes;
      text = text.slice(spoilt.length);
    }
    return taken;
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
          const isClosed = raw.endsWith('\n');
          if (raw !== '' && (isClosed || isEnd)) {
            const wholeBytes = Buffer.byteLength(raw);
            const returns = raw.endsWith('\r\n') && !(data.at(-1) ?? '').endsWith('\r') ? 1 : 0;
            this.handOver(data, wholeBytes - (isClosed ? 1 : 0) - returns, wholeBytes, lineEnds(raw));
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

function lineEndBytes(bytes: Buffer): number {
  if (bytes.at(-1) !== LF) return 0;
  return bytes.at(-2) === CR ? 2 : 1;
}
