import { createHash, type Hash } from 'node:crypto';
import { closeSync, existsSync, fsyncSync, lstatSync, mkdtempSync, openSync, renameSync, rmSync, statSync, writeSync } from 'node:fs';
import { basename, dirname, join, resolve } from 'node:path';
import { makeFolders } from '../make-folders';
import { faultText } from './fault-text';
import { MOST_NUMBER_BYTES, putNumber } from './number-bytes';
import { UsageProblem } from './usage-problem';

/** Bytes that are gathered before they are written. */
const BUFFER_BYTES = 1 << 18;
/** A text up to this many characters is copied one by one, which is faster than a call for each. */
const SHORT_TEXT = 64;
/** No character takes more bytes in UTF-8. */
const MOST_BYTES_A_CHARACTER = 3;
const COMMA = 0x2c;
const LINE_FEED = 0x0a;

/** Does a piece of writing; a fault of the system names the folder of the results, such as one on a full disk. */
function writing<T>(folder: string, write: () => T): T {
  try {
    return write();
  } catch (fault) {
    throw new Error(`results cannot be written to ${folder} (${faultText(fault)})`, { cause: fault });
  }
}

/**
 * One result file in the making: cells in, bytes and their SHA-256 out.
 *
 * Cells are put into one buffer as they come, since strings that are glued together first cost more than all the numbers in them.
 */
export class ResultFile {
  private readonly descriptor: number;
  private readonly hash: Hash = createHash('sha256');
  private readonly buffer = Buffer.allocUnsafe(BUFFER_BYTES);
  private filled = 0;

  constructor(
    readonly name: string,
    path: string,
    /** The folder in which the results will stand, for messages. */
    private readonly folder = dirname(path),
  ) {
    this.descriptor = writing(folder, () => openSync(path, 'wx'));
  }

  /** Adds text as it is; separators and line ends are the caller's. */
  text(text: string): this {
    if (text.length > SHORT_TEXT) return this.longText(text);
    if (this.filled + text.length > BUFFER_BYTES) this.flush();
    const start = this.filled;
    for (let at = 0; at < text.length; at++) {
      const character = text.charCodeAt(at);
      if (character > 127) {
        this.filled = start;
        return this.longText(text);
      }
      this.buffer[this.filled++] = character;
    }
    return this;
  }

  /** Adds a number so that reading it back gives the same double. */
  number(value: number): this {
    if (this.filled + MOST_NUMBER_BYTES > BUFFER_BYTES) this.flush();
    const end = putNumber(value, this.buffer, this.filled);
    // JSON and String write the same digits, but String keeps each new text in a cache, which costs as much again in garbage.
    if (end < 0) return this.text(Number.isInteger(value) || !Number.isFinite(value) ? String(value) : JSON.stringify(value));
    this.filled = end;
    return this;
  }

  comma(): this {
    return this.byte(COMMA);
  }

  endLine(): this {
    return this.byte(LINE_FEED);
  }

  private byte(code: number): this {
    if (this.filled === BUFFER_BYTES) this.flush();
    this.buffer[this.filled++] = code;
    return this;
  }

  private longText(text: string): this {
    if (text.length * MOST_BYTES_A_CHARACTER > BUFFER_BYTES) {
      this.flush();
      this.put(Buffer.from(text));
      return this;
    }
    if (this.filled + text.length * MOST_BYTES_A_CHARACTER > BUFFER_BYTES) this.flush();
    this.filled += this.buffer.write(text, this.filled);
    return this;
  }

  private flush(): void {
    this.put(this.buffer.subarray(0, this.filled));
    this.filled = 0;
  }

  private put(bytes: Buffer): void {
    this.hash.update(bytes);
    writing(this.folder, () => {
      for (let done = 0; done < bytes.length;) done += writeSync(this.descriptor, bytes, done);
    });
  }

  /** Puts everything on the disk and returns the SHA-256, 64 lower-case hex digits. */
  finish(): string {
    this.flush();
    writing(this.folder, () => {
      fsyncSync(this.descriptor);
      closeSync(this.descriptor);
    });
    return this.hash.digest('hex');
  }
}

/**
 * The folder of results: files are made beside it and moved in when all are whole, so that it never holds a part of a result.
 *
 * Where nothing can be made beside it (a mount of its own, a parent that cannot be written), they are made in a hidden folder inside it, which
 * goes away.
 */
export class ResultFolder {
  private readonly folder: string;
  private readonly stage: string;
  private readonly isNew: boolean;
  private readonly files = new Map<string, ResultFile>();

  constructor(path: string) {
    this.folder = resolve(path);
    this.isNew = !existsSync(this.folder);
    if (this.isNew && isLink(this.folder))
      throw new UsageProblem(`--out: "${path}" is a link to what does not exist; it must be a folder, or a name at which one can be made`);
    if (!this.isNew && !statSync(this.folder).isDirectory())
      throw new UsageProblem(`--out: "${path}" is a file; it must be a folder, or a name at which one can be made`);
    this.stage = makeStage(this.folder, path, this.isNew);
  }

  /** Begins a file. */
  file(name: string): ResultFile {
    const file = new ResultFile(name, join(this.stage, name), this.folder);
    this.files.set(name, file);
    return file;
  }

  /** Finishes the files begun so far and returns their hashes by name. */
  finishFiles(): ReadonlyMap<string, string> {
    const hashes = new Map([...this.files].map(([name, file]) => [name, file.finish()]));
    this.files.clear();
    return hashes;
  }

  /** Moves finished files into the folder, all or none; the order is that of the names. */
  publish(names: readonly string[]): void {
    for (const name of names) {
      const target = join(this.folder, name);
      if (statSync(target, { throwIfNoEntry: false })?.isDirectory())
        throw new UsageProblem(`--out: "${target}" is a folder; it must be a file, or a name at which one can be made`);
    }
    writing(this.folder, () => {
      if (this.isNew) makeFolders(this.folder);
      for (const name of names) renameSync(join(this.stage, name), join(this.folder, name));
    });
    this.discard();
  }

  /** Takes away what has not been moved. */
  discard(): void {
    rmSync(this.stage, { recursive: true, force: true });
  }
}

function isLink(path: string): boolean {
  try {
    return lstatSync(path).isSymbolicLink();
  } catch {
    return false; // below a file, say: what is wrong is told when the folder is made
  }
}

function makeStage(folder: string, path: string, isNew: boolean): string {
  try {
    const parent = dirname(folder);
    if (isNew) makeFolders(parent);
    else if (statSync(parent).dev !== statSync(folder).dev) return mkdtempSync(join(folder, '.unfinished-'));
    return mkdtempSync(join(parent, `.${basename(folder)}-unfinished-`));
  } catch (fault) {
    if (!isNew) return mkdtempSync(join(folder, '.unfinished-'));
    throw new UsageProblem(`--out: "${path}" cannot be made (${faultText(fault)}); it must be a place where you may write`);
  }
}
