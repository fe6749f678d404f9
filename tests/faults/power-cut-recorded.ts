import { spawnSync } from 'node:child_process';
import { join } from 'node:path';
import { buildSync } from 'esbuild';
import { root } from '../../scripts/lib.mjs';
import { newFolder } from '../support/folder';
import { type Acknowledged, ACKNOWLEDGED } from './power-cut-acknowledged';
import { type DiskCall, readRecord } from './power-cut-record';
import { diskCalls, newDataDir } from './disk-preload';

const RUN_MS = 120_000;

/** A run of the writer, as the disk saw it. */
export interface Recorded {
  readonly calls: readonly DiskCall[];
  /** What was acknowledged, each with the number of calls that came before it. */
  readonly acknowledged: readonly { readonly after: number; readonly what: Acknowledged }[];
}

/** Bundles the process around the writer, below the root, where it finds packages and migrations. */
function buildWriter(): string {
  const outfile = join(newFolder('power-cut'), 'writer.mjs');
  buildSync({
    absWorkingDir: root,
    entryPoints: ['tests/faults/power-cut-writer.ts'],
    outfile,
    bundle: true,
    platform: 'node',
    target: 'node20',
    format: 'esm',
    packages: 'external',
    logLevel: 'warning',
  });
  return outfile;
}

/**
 * Streams records through the writer in a process of its own, from an empty data folder on.
 *
 * @param batches of each site
 * @param pragma said to the writing connection behind the product's back
 */
export function recordWriter({ batches, seed, pragma }: { batches: number; seed: number; pragma?: string }): Recorded {
  const dataDir = newDataDir('power-cut');
  const record = join(newFolder('power-cut-record'), 'record');
  const { status, stderr } = spawnSync(process.execPath, [buildWriter(), dataDir, String(batches), String(seed)], {
    cwd: root,
    encoding: 'utf8',
    timeout: RUN_MS,
    env: {
      PATH: process.env['PATH'],
      LD_PRELOAD: diskCalls(),
      DISK_FOLDER: dataDir,
      DISK_RECORD: record,
      ...(pragma === undefined ? {} : { PRAGMA: pragma }),
    },
  });
  if (status !== 0) throw new Error(`the recorded writer ended with ${status ?? 'a signal'}: ${stderr}`);
  return withAcknowledgements(readRecord(record));
}

/** Takes the acknowledgements out of the calls. */
function withAcknowledgements(all: readonly DiskCall[]): Recorded {
  const calls: DiskCall[] = [];
  const acknowledged: { after: number; what: Acknowledged }[] = [];
  let file = -1;
  for (const call of all) {
    if (call.is === 'made' && call.name === ACKNOWLEDGED) file = call.file;
    else if (call.is === 'written' && call.file === file)
      acknowledged.push({ after: calls.length, what: JSON.parse(call.bytes.toString()) as Acknowledged });
    else calls.push(call);
  }
  return { calls, acknowledged };
}
