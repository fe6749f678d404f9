import { createHash, type Hash } from 'node:crypto';
import { closeSync, existsSync, fsyncSync, mkdirSync, mkdtempSync, openSync, renameSync, rmSync, statSync, writeSync } from 'node:fs';
import { basename, dirname, join, resolve } from 'node:path';
import { faultText } from './fault-text';
import { UsageProblem } from './usage-problem';

/** Characters that are gathered before they are written. */
const BUFFER_CHARACTERS = 1 << 18;

/** One result file in the making: lines in, bytes and their SHA-256 out. */
export class ResultFile {
  private readonly descriptor: number;
  private readonly hash: Hash = createHash('sha256');
  private pending = '';

  constructor(
    readonly name: string,
    path: string,
  ) {
    this.descriptor = openSync(path, 'wx');
  }

  /** Adds text; line ends are the caller's. */
  write(text: string): void {
    this.pending += text;
    if (this.pending.length >= BUFFER_CHARACTERS) this.flush();
  }

  private flush(): void {
    const bytes = Buffer.from(this.pending);
    this.pending = '';
    this.hash.update(bytes);
    for (let done = 0; done < bytes.length;) done += writeSync(this.descriptor, bytes, done);
  }

  /** Puts everything on the disk and returns the SHA-256, 64 lower-case hex digits. */
  finish(): string {
    this.flush();
    fsyncSync(this.descriptor);
    closeSync(this.descriptor);
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
    if (!this.isNew && !statSync(this.folder).isDirectory())
      throw new UsageProblem(`--out: "${path}" is a file; it must be a folder, or a name at which one can be made`);
    this.stage = makeStage(this.folder, path, this.isNew);
  }

  /** Begins a file. */
  file(name: string): ResultFile {
    const file = new ResultFile(name, join(this.stage, name));
    this.files.set(name, file);
    return file;
  }

  /** Finishes the files begun so far and returns their hashes by name. */
  finishFiles(): ReadonlyMap<string, string> {
    const hashes = new Map([...this.files].map(([name, file]) => [name, file.finish()]));
    this.files.clear();
    return hashes;
  }

  /** Moves finished files into the folder; the order is that of the names. */
  publish(names: readonly string[]): void {
    if (this.isNew) mkdirSync(this.folder, { recursive: true });
    for (const name of names) renameSync(join(this.stage, name), join(this.folder, name));
    this.discard();
  }

  /** Takes away what has not been moved. */
  discard(): void {
    rmSync(this.stage, { recursive: true, force: true });
  }
}

function makeStage(folder: string, path: string, isNew: boolean): string {
  try {
    const parent = dirname(folder);
    if (isNew) mkdirSync(parent, { recursive: true });
    else if (statSync(parent).dev !== statSync(folder).dev) return mkdtempSync(join(folder, '.unfinished-'));
    return mkdtempSync(join(parent, `.${basename(folder)}-unfinished-`));
  } catch (fault) {
    if (!isNew) return mkdtempSync(join(folder, '.unfinished-'));
    throw new UsageProblem(`--out: "${path}" cannot be made (${faultText(fault)}); it must be a place where you may write`);
  }
}
