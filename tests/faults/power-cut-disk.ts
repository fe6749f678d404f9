import { type DiskCall } from './power-cut-record';

/**
 * What is on the disk after the power was cut:
 * - `everything`: all that was written up to the point;
 * - `synced`: only what was synced before it, names of files too;
 * - `some`: what was synced, and of the rest a part that the dice choose, by sectors of 512 bytes, one of them torn.
 */
export const CUTS = ['everything', 'synced', 'some'] as const;
export type Cut = (typeof CUTS)[number];

/** A disk writes a sector as a whole or not at all, or tears it. */
const SECTOR_BYTES = 512;
/** How much of what was not synced is on the disk, in the mode `some`. */
const SHARES = [0.1, 0.5, 0.9];

type Change = { readonly offset: number; readonly bytes: Buffer } | { readonly length: number };
type Naming = Extract<DiskCall, { is: 'removed' | 'renamed' }> | { readonly is: 'made'; readonly name: string; readonly file: DiskFile };

/** Bytes that grow. */
class Bytes {
  private room: Buffer;
  private length: number;

  constructor(content: Buffer = Buffer.alloc(0)) {
    this.room = Buffer.from(content);
    this.length = content.length;
  }

  take(change: Change): void {
    const end = 'length' in change ? change.length : Math.max(this.length, change.offset + change.bytes.length);
    if (end > this.room.length) {
      const larger = Buffer.alloc(2 * end);
      this.room.copy(larger, 0, 0, this.length);
      this.room = larger;
    }
    if (end < this.length) this.room.fill(0, end, this.length);
    if ('bytes' in change) change.bytes.copy(this.room, change.offset);
    this.length = end;
  }

  get value(): Buffer {
    return this.room.subarray(0, this.length);
  }
}

class DiskFile {
  readonly now = new Bytes();
  readonly synced = new Bytes();
  waiting: Change[] = [];

  take(change: Change): void {
    this.now.take(change);
    this.waiting.push(change);
  }

  sync(): void {
    for (const change of this.waiting) this.synced.take(change);
    this.waiting = [];
  }

  /** A failed sync has dropped what waited: the system takes it for written, and no later sync brings it back. */
  loseWaiting(): void {
    this.waiting = [];
  }
}

/** A folder on a disk that does what it is told, and knows what of it would outlast a power cut. */
export class Disk {
  private readonly files = new Map<number, DiskFile>();
  private readonly names = new Map<string, DiskFile>();
  private syncedNames = new Map<string, DiskFile>();
  private waiting: Naming[] = [];

  /** A file that was there, and on the disk, before. */
  begin(name: string, content: Buffer): void {
    const file = new DiskFile();
    file.take({ offset: 0, bytes: content });
    file.sync();
    this.names.set(name, file);
    this.syncedNames.set(name, file);
  }

  /** Whether a file of the record holds anything that is not synced. */
  isWaiting(file: number): boolean {
    return this.fileOf(file).waiting.length > 0;
  }

  take(call: DiskCall): void {
    switch (call.is) {
      case 'made': {
        const known = this.names.get(call.name);
        const file = known ?? new DiskFile();
        this.files.set(call.file, file);
        if (!known) this.name({ is: 'made', name: call.name, file });
        return;
      }
      case 'written':
        this.fileOf(call.file).take({ offset: call.offset, bytes: call.bytes });
        return;
      case 'cut':
        this.fileOf(call.file).take({ length: call.length });
        return;
      case 'synced':
        this.fileOf(call.file).sync();
        return;
      case 'failed':
        if (call.call === 'synced' && call.file !== 0) this.fileOf(call.file).loseWaiting();
        return;
      case 'folder-synced':
        this.syncedNames = new Map(this.names);
        this.waiting = [];
        return;
      case 'removed':
      case 'renamed':
        this.name(call);
    }
  }

  /** The files that are there after a power cut at this point. */
  after(cut: Cut, roll: () => number): ReadonlyMap<string, Buffer> {
    if (cut === 'everything') return contentsOf(this.names, ({ now }) => now.value);
    if (cut === 'synced') return contentsOf(this.syncedNames, ({ synced }) => synced.value);
    // A file system keeps the order of names, so that those of a part are the first ones.
    const names = new Map(this.syncedNames);
    for (const naming of this.waiting.slice(0, Math.floor(roll() * (this.waiting.length + 1)))) put(names, naming);
    const share = SHARES[Math.floor(roll() * SHARES.length)] ?? 0;
    return contentsOf(names, (file) => someOf(file, share, roll));
  }

  private name(naming: Naming): void {
    put(this.names, naming);
    this.waiting.push(naming);
  }

  private fileOf(number: number): DiskFile {
    const file = this.files.get(number);
    if (!file) throw new Error(`the record says nothing of how file ${number} was made`);
    return file;
  }
}

const contentsOf = (names: ReadonlyMap<string, DiskFile>, content: (file: DiskFile) => Buffer): ReadonlyMap<string, Buffer> =>
  new Map([...names].map(([name, file]) => [name, content(file)]));

function put(names: Map<string, DiskFile>, naming: Naming): void {
  if (naming.is === 'made') names.set(naming.name, naming.file);
  else if (naming.is === 'removed') names.delete(naming.name);
  else {
    const file = names.get(naming.name);
    names.delete(naming.name);
    if (file) names.set(naming.to, file);
  }
}

/** What was synced and a share of the sectors that were not. */
function someOf({ synced, waiting }: DiskFile, share: number, roll: () => number): Buffer {
  const bytes = new Bytes(synced.value);
  const torn = Math.floor(roll() * waiting.length);
  for (const [at, change] of waiting.entries()) {
    if ('length' in change) {
      if (roll() < share) bytes.take(change);
      continue;
    }
    const { offset, bytes: written } = change;
    for (let from = 0; from < written.length;) {
      const to = Math.min(written.length, from + SECTOR_BYTES - ((offset + from) % SECTOR_BYTES));
      if (at === torn && from === 0) bytes.take({ offset, bytes: written.subarray(0, Math.floor(roll() * to)) });
      else if (roll() < share) bytes.take({ offset: offset + from, bytes: written.subarray(from, to) });
      from = to;
    }
  }
  return bytes.value;
}
