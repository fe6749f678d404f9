import { spawnSync } from 'node:child_process';
import { closeSync, mkdirSync, openSync, readFileSync, writeFileSync, writeSync } from 'node:fs';
import { join } from 'node:path';
import { root } from '../../scripts/lib.mjs';
import { newFolder } from '../support/folder';

const SOURCE = 'tests/faults/disk-calls.c';

/** Compilers that take C, in the order in which they are tried; better-sqlite3 needs one of them where it is not compiled yet. */
const compilers = (): readonly string[] =>
  [process.env['CC'], process.env['CXX'], 'cc', 'c++', 'gcc', 'g++', 'clang', 'clang++'].flatMap((name) => name ?? []);

let compiled: string | undefined;

/** Compiles what stands between a process and the disk, once for a test file; answers the library's path. */
export function diskCalls(): string {
  if (compiled !== undefined) return compiled;
  if (process.platform !== 'linux')
    throw new Error(`the fault tests of the disk preload a library with LD_PRELOAD, which ${process.platform} has not: run them on Linux`);
  const library = join(newFolder('disk-calls'), 'disk-calls.so');
  const said: string[] = [];
  for (const compiler of compilers()) {
    const options = ['-x', 'c', '-std=gnu11', '-O2', '-Wall', '-Wextra', '-Werror', '-shared', '-fPIC', '-o', library, SOURCE];
    const { status, error, stderr } = spawnSync(compiler, [...options, '-ldl', '-lpthread'], { cwd: root, encoding: 'utf8' });
    if (status === 0) return (compiled = library);
    said.push(`${compiler}: ${error?.message ?? stderr}`);
  }
  throw new Error(`no compiler makes ${SOURCE}, and one is needed (install g++, or set CC):\n${said.join('\n')}`);
}

/** The calls that a fault may be planted in. */
export const CALLS = { write: 2, cut: 3, sync: 4 } as const;
export type Call = keyof typeof CALLS;

/** The numbers of Linux. */
const CODES = { EIO: 5, ENOSPC: 28 } as const;

/** Which calls fail, from now on. */
export interface PlannedFault {
  readonly calls: readonly Call[];
  /** How many of them pass before. */
  readonly after: number;
  /** How many fail from there on; as good as for ever unless given. */
  readonly failing?: number;
  readonly code: keyof typeof CODES;
}

const FOR_EVER = 0xffffffff;
const PLAN_BYTES = 24;
const SEEN_AT = 16;
const FAILED_AT = 20;

/** The faults of a process: planned in a file that it shares, at any time. */
export class DiskFaults {
  private readonly file: string;

  constructor(private readonly dataDir: string) {
    this.file = join(newFolder('disk-faults'), 'plan');
    writeFileSync(this.file, Buffer.alloc(PLAN_BYTES));
  }

  /** What the process is started with. */
  get env(): Readonly<Record<string, string>> {
    return { LD_PRELOAD: diskCalls(), DISK_FOLDER: this.dataDir, DISK_FAULT: this.file };
  }

  /** Counts from here, and lets calls fail. */
  plan({ calls, after, failing = FOR_EVER, code }: PlannedFault): void {
    const kinds = calls.reduce((bits, call) => bits | (1 << CALLS[call]), 0);
    this.put([kinds, after, failing, CODES[code], 0, 0]);
  }

  /** The disk is as it should be again; what was counted stays. */
  mend(): void {
    this.put([0, 0, 0, 0]);
  }

  /** How many calls of the planned kinds there were since the plan, and how many of them failed. */
  get counted(): { readonly seen: number; readonly failed: number } {
    const plan = readFileSync(this.file);
    return { seen: plan.readUInt32LE(SEEN_AT), failed: plan.readUInt32LE(FAILED_AT) };
  }

  private put(numbers: readonly number[]): void {
    const file = openSync(this.file, 'r+');
    writeSync(file, new Uint8Array(Uint32Array.from(numbers).buffer), 0, 4 * numbers.length, 0);
    closeSync(file);
  }
}

/** A new empty data folder, as its path is written by the process that uses it. */
export function newDataDir(name: string): string {
  const dataDir = join(newFolder(name), 'data');
  mkdirSync(dataDir, 0o700);
  return dataDir;
}
