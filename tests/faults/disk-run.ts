import { cpSync, mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { type Socket } from 'socket.io-client';
import { type SiteRecord } from '#shared/contract/site-record';
import { type SiteFates } from '#shared/contract/site-socket';
import { root } from '../../scripts/lib.mjs';
import { closeDb, openDb } from '../../backend/db';
import { contentHash } from '../../backend/ingest/hashes';
import { welcomedLink } from '../stream/gate';
import { newFolder } from '../support/folder';
import { type Ended, startServer } from '../support/server';
import { faultsOf } from './disk-kept';
import { type KeyedSite, makeDiskNetwork } from './disk-network';
import { DiskFaults, newDataDir, type PlannedFault } from './disk-preload';
import { type Acknowledged } from './power-cut-acknowledged';
import { Disk } from './power-cut-disk';
import { type DiskCall, readRecord } from './power-cut-record';
import { dice, recordsOf } from './records';

const SITES = 2;
const BATCH_RECORDS = 200;
/** Before the fault is planned, and after it: enough that the log is written back into the database once on the way. */
const SOUND_BATCHES = 2;
const BATCHES = 8;
const ANSWER_MS = 10_000;
const LOG = 'skewline.sqlite-wal';

let made: { readonly dataDir: string; readonly sites: readonly KeyedSite[] } | undefined;

/** A data folder with a network, made once for a test file. */
export function emptyNetwork(): NonNullable<typeof made> {
  if (made) return made;
  const dataDir = newDataDir('disk-network');
  const db = openDb(dataDir);
  const sites = makeDiskNetwork(db, SITES);
  closeDb(db);
  return (made = { dataDir, sites });
}

/** A copy of it that a server may use. */
export function copyOfNetwork(): string {
  const dataDir = newDataDir('disk');
  cpSync(emptyNetwork().dataDir, dataDir, { recursive: true });
  return dataDir;
}

/** What came of a server whose disk failed. */
export interface DiskRun {
  readonly acknowledged: readonly Acknowledged[];
  /** Rows that were answered as unknown, and batches that had no answer or a refusal. */
  readonly unknown: number;
  readonly unanswered: number;
  /** How the server ended, by itself or because it was stopped. */
  readonly ended: Ended;
  readonly endedByItself: boolean;
  readonly seen: number;
  readonly failed: number;
  /** The calls that failed, in their order. */
  readonly failures: readonly { readonly call: 'written' | 'cut' | 'synced'; readonly ofLog: boolean; readonly wasWaiting: boolean }[];
  /** What is wrong with what is kept: in the files as the process left them, and after a power cut, where a failed sync has dropped what waited. */
  readonly wrong: readonly string[];
}

/**
 * Streams from two sites into the built server, lets calls to the disk fail meanwhile, and looks at what is kept afterwards.
 *
 * @param goesOn plants the fault of a server that goes on after an I/O error
 */
export async function runOnFailingDisk(
  fault: PlannedFault,
  { seed, goesOn = false }: { seed: number; goesOn?: boolean },
): Promise<DiskRun> {
  const { sites, dataDir: template } = emptyNetwork();
  const dataDir = copyOfNetwork();
  const faults = new DiskFaults(dataDir);
  const record = join(newFolder('disk-record'), 'record');
  const planted = pathToFileURL(join(root, 'tests/faults/disk-planted.mjs')).href;
  const server = await startServer({
    DATA_DIR: dataDir,
    LOG_LEVEL: 'fatal',
    DISK_RECORD: record,
    ...faults.env,
    ...(goesOn ? { NODE_OPTIONS: `--import ${planted}` } : {}),
  });
  const acknowledged: Acknowledged[] = [];
  let unknown = 0;
  let unanswered = 0;
  const links = await Promise.all(sites.map(({ key }) => welcomedLink(server.url.replace(/\/$/, ''), key)));
  const sources = sites.map((_, at) => recordsOf(seed, at));
  for (let batch = 0; batch < SOUND_BATCHES + BATCHES; batch++) {
    if (batch === SOUND_BATCHES) faults.plan(fault);
    const sendings = links.map(async (link, at) => {
      const records = take(sources[at]!, BATCH_RECORDS);
      const answer = await send(link, batch, records);
      if (!answer?.ok) {
        unanswered++;
        return;
      }
      const known = kept(answer, records);
      unknown += records.length - known.length;
      acknowledged.push({ siteId: sites[at]!.siteId, contents: known.map((one) => contentHash(one).toString('hex')) });
    });
    await Promise.all(sendings);
    if (links.some(({ connected }) => !connected)) break;
  }
  const { seen, failed } = faults.counted;
  const endedByItself = links.some(({ connected }) => !connected);
  for (const link of links) link.disconnect();
  const ended = endedByItself ? await server.ended : await server.stop();
  const calls = readRecord(record);
  const { disk, failures } = replay(calls, template);
  const image = imageOf(disk);
  const wrong = [
    ...(await faultsOf(image, acknowledged)).map(({ is, text }) => `after a power cut: ${is}: ${text}`),
    ...(await faultsOf(dataDir, acknowledged)).map(({ is, text }) => `${is}: ${text}`),
  ];
  rmSync(image, { recursive: true });
  return { acknowledged, unknown, unanswered, ended, endedByItself, seen, failed, failures, wrong };
}

/**
 * What is wrong with a run, beside what is kept: whatever the disk refused to a commit must have ended the server with status 1, since nobody
 * knows what is on it; what it refused to the writing back of the log must not, since the log still holds all, and is written back again.
 */
export function wrongOf({ failures, ended, endedByItself, wrong }: DiskRun): readonly string[] {
  const ofCommit = failures.some(({ call, ofLog, wasWaiting }) => ofLog && (call === 'written' || (call === 'synced' && wasWaiting)));
  if (ofCommit && ended.code !== 1) return [`went on after a commit that failed, and ended with ${ended.code ?? 'a signal'}`, ...wrong];
  if (!ofCommit && endedByItself) return ['ended by itself although no commit had failed', ...wrong];
  return wrong;
}

function take(source: ReturnType<typeof recordsOf>, count: number): SiteRecord[] {
  return Array.from({ length: count }, () => {
    const next = source.next();
    if (next.done) throw new Error('the site has no more records');
    return next.value.record;
  });
}

/** Sends a batch; undefined where the link was lost before an answer. */
async function send(link: Socket, number: number, records: readonly SiteRecord[]): Promise<SiteFates | { readonly ok: false } | undefined> {
  const lost = new Promise<undefined>((resolve) => link.once('disconnect', () => resolve(undefined)));
  const rows = records.map(({ sequence, reading, sigmaNs }) => ({ sequence, reading, sigmaNs }));
  const answer = link.timeout(ANSWER_MS).emitWithAck('stream:batch', { number, rows }) as Promise<SiteFates | { readonly ok: false }>;
  return Promise.race([answer.catch(() => undefined), lost]);
}

/** The records of a batch that were answered with certainty. */
function kept({ unknown }: SiteFates, records: readonly SiteRecord[]): readonly SiteRecord[] {
  const rows = new Set(unknown.flatMap(([from, count]) => Array.from({ length: count }, (_, at) => from + at)));
  return records.filter((_, row) => !rows.has(row));
}

function replay(calls: readonly DiskCall[], template: string): { disk: Disk; failures: DiskRun['failures'] } {
  const disk = new Disk();
  for (const name of readdirSync(template)) if (!name.endsWith('-shm')) disk.begin(name, readFileSync(join(template, name)));
  const logs = new Set<number>();
  const failures: DiskRun['failures'][number][] = [];
  for (const call of calls) {
    if (call.is === 'made' && call.name === LOG) logs.add(call.file);
    if (call.is === 'failed') {
      const wasWaiting = call.file !== 0 && disk.isWaiting(call.file);
      failures.push({ call: call.call, ofLog: logs.has(call.file), wasWaiting });
    }
    disk.take(call);
  }
  return { disk, failures };
}

/** What is on the disk when the power is cut after all this. */
function imageOf(disk: Disk): string {
  const dataDir = join(newFolder('disk-image'), 'data');
  mkdirSync(dataDir, 0o700);
  for (const [name, content] of disk.after('synced', dice(1))) writeFileSync(join(dataDir, name), content);
  return dataDir;
}
