import { closeSync, openSync, readSync } from 'node:fs';
import { StringDecoder } from 'node:string_decoder';
import Papa from 'papaparse';
import { compareText } from '#shared/compare-text';
import { SET_ASIDE_REASONS } from '#shared/reconcile/record';
import { type Pace } from './pace';
import { type FoundRecords } from './record-store';
import { type ResultFile } from './result-folder';

/** Records written between two breaths. */
const STRETCH = 1024;

/** What is read again at once: an open quote may have swallowed more than fits into a string, or into the time between two breaths. */
const PIECE_BYTES = 1 << 20;

/** A log as it was read: its path, and its name without folders. */
export interface ReadLog {
  readonly path: string;
  readonly name: string;
}

/** Reads stretches of files again, keeping the last file open. */
class Rereader {
  private descriptor = -1;
  private path = '';

  bytes(path: string, offsetBytes: number, lengthBytes: number): Buffer {
    if (path !== this.path) {
      this.close();
      this.descriptor = openSync(path, 'r');
      this.path = path;
    }
    const bytes = Buffer.alloc(lengthBytes);
    let done = 0;
    while (done < lengthBytes) {
      const read = readSync(this.descriptor, bytes, done, lengthBytes - done, offsetBytes + done);
      if (read === 0) throw new Error(`${path} became shorter while it was read`);
      done += read;
    }
    return bytes;
  }

  close(): void {
    if (this.descriptor >= 0) closeSync(this.descriptor);
    this.descriptor = -1;
    this.path = '';
  }
}

/** Writes a long text as one quoted cell at the end of its line, piece by piece. */
async function writeQuoted(next: (fromBytes: number, mostBytes: number) => Buffer, file: ResultFile, pace: Pace): Promise<void> {
  const decoder = new StringDecoder('utf8');
  const put = (text: string): void => void file.text(text.replaceAll('"', '""'));
  file.text('"');
  for (let from = 0; ; from += PIECE_BYTES) {
    const bytes = next(from, PIECE_BYTES);
    put(decoder.write(bytes));
    if (bytes.length < PIECE_BYTES) break;
    await pace.breathe();
  }
  put(decoder.end());
  file.text('"\n');
}

/**
 * Writes what is set aside: file, line, reason, and the record as it stands, read again from its file. Sorted by file name, line, reason and
 * place.
 */
export async function writeSetAside(found: FoundRecords, logs: readonly ReadLog[], file: ResultFile, pace: Pace): Promise<void> {
  const { setAside, setAsideCount } = found;
  const rows = Uint32Array.from({ length: setAsideCount }, (_, row) => row);
  const nameOf = (row: number): string => logs[setAside.file[row] ?? 0]?.name ?? '';
  rows.sort(
    (a, b) =>
      compareText(nameOf(a), nameOf(b)) ||
      (setAside.line[a] ?? 0) - (setAside.line[b] ?? 0) ||
      (setAside.reason[a] ?? 0) - (setAside.reason[b] ?? 0) ||
      compareText(logs[setAside.file[a] ?? 0]?.path ?? '', logs[setAside.file[b] ?? 0]?.path ?? ''),
  );
  const reread = new Rereader();
  try {
    for (const [at, row] of rows.entries()) {
      const path = logs[setAside.file[row] ?? 0]?.path ?? '';
      const lengthBytes = setAside.lengthBytes[row] ?? 0;
      const offsetBytes = setAside.offsetBytes[row] ?? 0;
      const cells = [nameOf(row), setAside.line[row] ?? 0, SET_ASIDE_REASONS[setAside.reason[row] ?? 0] ?? ''];
      if (lengthBytes > PIECE_BYTES) {
        file.text(`${Papa.unparse([cells])},`);
        await writeQuoted((from, most) => reread.bytes(path, offsetBytes + from, Math.min(most, lengthBytes - from)), file, pace);
      } else {
        const text = reread.bytes(path, offsetBytes, lengthBytes).toString('utf8');
        file.text(`${Papa.unparse([[...cells, text]], { newline: '\n' })}\n`);
      }
      if (at % STRETCH === 0) await pace.breathe();
    }
  } finally {
    reread.close();
  }
}
