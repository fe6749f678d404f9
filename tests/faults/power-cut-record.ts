import { readFileSync } from 'node:fs';

/** What a disk was told, as `disk-calls.c` writes it down. */
export type DiskCall =
  | { readonly is: 'made'; readonly file: number; readonly name: string }
  | { readonly is: 'written'; readonly file: number; readonly offset: number; readonly bytes: Buffer }
  | { readonly is: 'cut'; readonly file: number; readonly length: number }
  | { readonly is: 'synced'; readonly file: number }
  | { readonly is: 'folder-synced' }
  | { readonly is: 'removed'; readonly name: string }
  /** A call that was made to fail; the file is 0 for the folder. */
  | { readonly is: 'failed'; readonly file: number; readonly call: 'written' | 'cut' | 'synced' }
  | { readonly is: 'renamed'; readonly name: string; readonly to: string };

const HEAD_BYTES = 24;

/** Reads a record; the calls in the order in which they happened. */
export function readRecord(path: string): readonly DiskCall[] {
  const record = readFileSync(path);
  const calls: DiskCall[] = [];
  for (let at = 0; at < record.length;) {
    const [kind, file] = [record.readUInt32LE(at), record.readUInt32LE(at + 4)];
    const offset = Number(record.readBigUInt64LE(at + 8));
    const bytes = record.subarray(at + HEAD_BYTES, at + HEAD_BYTES + Number(record.readBigUInt64LE(at + 16)));
    calls.push(callOf(kind, file, offset, bytes));
    at += HEAD_BYTES + bytes.length;
  }
  return calls;
}

function callOf(kind: number, file: number, offset: number, bytes: Buffer): DiskCall {
  switch (kind) {
    case 1:
      return { is: 'made', file, name: bytes.toString() };
    case 2:
      return { is: 'written', file, offset, bytes };
    case 3:
      return { is: 'cut', file, length: offset };
    case 4:
      return { is: 'synced', file };
    case 5:
      return { is: 'folder-synced' };
    case 6:
      return { is: 'removed', name: bytes.toString() };
    case 7: {
      const [name = '', to = ''] = bytes.toString().split('\0');
      return { is: 'renamed', name, to };
    }
    case 8:
      return { is: 'failed', file, call: offset === 2 ? 'written' : offset === 3 ? 'cut' : 'synced' };
    default:
      throw new Error(`the record has a call of the unknown kind ${kind}`);
  }
}
