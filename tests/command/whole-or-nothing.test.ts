import { spawnSync } from 'node:child_process';
import { cpSync, readFileSync, rmSync, truncateSync, unlinkSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { quietNetworkFile, writeQuietLogs } from '../makers/quiet-network';
import { SKEWLINE, startProgram } from '../support/command';
import { newFolder } from '../support/folder';
import { contentOf, isBeingWritten, until } from '../support/folder-watch';
import { type Ended } from '../support/server';

/** What whoever stops the command may count on. */
const END_MS = 2_000;
/** Enough that a run is still at work when it has been seen to begin: most of a second on a fast machine. */
const TRIGGERS = 100_000;
/** Between signals that come in a row. */
const AGAIN_MS = 2;
/** Less than the events of the run that must fail, more than all that was there before. */
const SPACE_KIB = 512;

const quiet = { sites: 4, triggers: TRIGGERS, rateHz: 4, seed: 7 };

let inputs: string;
let logs: readonly string[];
let network: string;
let few: string;
let older: string;

beforeAll(async () => {
  inputs = newFolder('whole-inputs');
  network = join(inputs, 'network.json');
  writeFileSync(network, JSON.stringify(quietNetworkFile(quiet)));
  logs = writeQuietLogs(quiet, inputs);
  few = join(inputs, 'few.csv');
  writeFileSync(few, readFileSync(logs[0]!, 'utf8').split('\n').slice(0, 20).join('\n'));
  older = newFolder('whole-older');
  const { code, stderr } = await startProgram(command(older, [few])).ended;
  expect([code, stderr]).toEqual([0, '19 events, 0 coincidences; 0 records set aside, 0 repeated\n']);
});

/** A folder with older results in `out`, and nothing else. */
function olderResults(): string {
  const place = newFolder('whole');
  cpSync(older, place, { recursive: true });
  return place;
}

const command = (place: string, files = logs): string[] => [
  ...SKEWLINE,
  'reconcile',
  '--network',
  network,
  '--out',
  join(place, 'out'),
  ...files,
];

/** A writer as it should not be: it makes a folder beside the results and writes into the results themselves, in the end of its own accord. */
const inPlace = (place: string): string[] => [
  process.execPath,
  '-e',
  `const { mkdirSync, openSync, writeSync } = require('node:fs');
  const file = openSync(process.argv[1] + '/out/events.csv', 'w');
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, () => process.exit(1));
  mkdirSync(process.argv[1] + '/.out-unfinished-x', { recursive: true });
  let lines = 0;
  setInterval(() => { writeSync(file, 'x'.repeat(1 << 16)); if (++lines > 1000) process.exit(1); }, 5);
  process.on('uncaughtException', () => process.exit(1));`,
  place,
];

const quoted = (words: readonly string[]): string => words.map((word) => `'${word.replaceAll("'", "'\\''")}'`).join(' ');

/** Runs a program that may write no file above a size: a disk that is full, to whoever writes. */
const inSmallSpace = (words: readonly string[]): Promise<Ended> =>
  startProgram(['bash', '-c', `ulimit -f ${SPACE_KIB}; exec ${quoted(words)}`]).ended;

describe('when there is no room for the results', () => {
  it('the command ends with status 1 and one line, and older results stand as they were', async () => {
    const place = olderResults();
    const before = contentOf(place);
    const { code, stdout, stderr } = await inSmallSpace(command(place));
    expect(stderr).toBe(`skewline: results cannot be written to ${join(place, 'out')} (EFBIG: file too large, write)\n`);
    expect([code, stdout]).toEqual([1, '']);
    expect(contentOf(place)).toEqual(before);
  });

  it('and a folder that was not there is not there', async () => {
    const place = newFolder('whole-new');
    expect((await inSmallSpace(command(place))).code).toBe(1);
    expect(contentOf(place)).toEqual({});
  });

  it('and a writer in place is caught', async () => {
    const place = olderResults();
    const before = contentOf(place);
    expect((await inSmallSpace(inPlace(place))).code).toBe(1);
    expect(contentOf(place)).not.toEqual(before);
  });

  const canMount = spawnSync('unshare', ['-rm', 'mount', '-t', 'tmpfs', '-o', 'size=64k', 'none', '/mnt']).status === 0;

  /** Runs a program where a folder is a small disk of its own, which goes with it, and says what on that disk has changed at the end. */
  function onSmallDisk(disk: string, words: readonly string[]): { code: number | null; stderr: string; changes: string } {
    const list = `(cd '${disk}' && find . -mindepth 1 -type d -print -o -type f -exec sha256sum {} + | sort)`;
    const script = `mount -t tmpfs -o size=${SPACE_KIB}k none '${disk}' && cp -r '${disk}.kept/.' '${disk}' && ${list} > '${disk}.before'
      ${quoted(words)}; status=$?; ${list} > '${disk}.after'; exit $status`;
    cpSync(disk, `${disk}.kept`, { recursive: true });
    const { status, stderr } = spawnSync('unshare', ['-rm', 'bash', '-c', script], { encoding: 'utf8' });
    expect(readFileSync(`${disk}.before`, 'utf8')).toContain('summary.json');
    return { code: status, stderr, changes: spawnSync('diff', [`${disk}.before`, `${disk}.after`], { encoding: 'utf8' }).stdout };
  }

  // Where no disk of its own may be made, the limit above stands for it.
  it.runIf(canMount)('on a full disk it is the same', () => {
    const place = olderResults();
    const { code, stderr, changes } = onSmallDisk(place, command(place));
    expect(stderr).toBe(`skewline: results cannot be written to ${join(place, 'out')} (ENOSPC: no space left on device, write)\n`);
    expect([code, changes]).toEqual([1, '']);
  });

  it.runIf(canMount)('and when the folder of results is that disk itself, nothing hidden stays in it', () => {
    const place = olderResults();
    const full = onSmallDisk(join(place, 'out'), command(place));
    expect([full.code, full.changes]).toEqual([1, '']);
    const other = olderResults();
    const done = onSmallDisk(join(other, 'out'), command(other, [few]));
    expect([done.code, done.changes]).toEqual([0, '']);
  });

  it.runIf(canMount)('and on a full disk a writer in place is caught', () => {
    const place = olderResults();
    expect(onSmallDisk(place, inPlace(place)).changes).not.toBe('');
  });
});

describe('when it is stopped', () => {
  /** Starts a program, sends it a signal once it is so far, perhaps again and again, and measures how long it takes to end. */
  async function stopped(
    words: readonly string[],
    isSoFar: () => boolean,
    signal: NodeJS.Signals,
    againMs?: number,
  ): Promise<Ended & { tookMs: number }> {
    const { process: child, ended } = startProgram(words);
    await until('beginning', isSoFar);
    const startMs = performance.now();
    child.kill(signal);
    const again = againMs === undefined ? undefined : setInterval(() => child.kill(signal), againMs);
    const end = await ended;
    clearInterval(again);
    return { ...end, tookMs: performance.now() - startMs };
  }

  it.each<[string, string, NodeJS.Signals]>([
    ['Ctrl-C while it reads', '', 'SIGINT'],
    ['SIGTERM while it reads', '', 'SIGTERM'],
    ['the end of its terminal while it reads', '', 'SIGHUP'],
    ['Ctrl-C while it writes events', 'events.csv', 'SIGINT'],
    ['SIGTERM while it writes pairs', 'pairs.csv', 'SIGTERM'],
  ])('by %s it ends within 2 s with status 1 and one line, and older results stand as they were', async (_what, file, signal) => {
    const place = olderResults();
    const before = contentOf(place);
    const { code, stdout, stderr, tookMs } = await stopped(command(place), () => isBeingWritten(place, file), signal);
    expect(stderr).toMatch(/^skewline: stopped by SIG(?:INT|TERM|HUP); nothing was written\n$/);
    expect([code, stdout]).toEqual([1, '']);
    expect(tookMs).toBeLessThan(END_MS);
    expect(contentOf(place)).toEqual(before);
  });

  // From a terminal in which npm runs it, Ctrl-C comes twice. A signal may meet the process when it has cleared up and all but ended: then it
  // has no status of its own.
  it.each(['', 'events.csv'])('by Ctrl-C that comes again and again it leaves nothing behind either: %j', async (file) => {
    const place = olderResults();
    const before = contentOf(place);
    const { code, tookMs } = await stopped(command(place), () => isBeingWritten(place, file), 'SIGINT', AGAIN_MS);
    expect([1, null]).toContain(code);
    expect(tookMs).toBeLessThan(END_MS);
    expect(contentOf(place)).toEqual(before);
  });

  it('and a writer in place is caught', async () => {
    const place = olderResults();
    const before = contentOf(place);
    const { code } = await stopped(inPlace(place), () => isBeingWritten(place), 'SIGINT');
    expect(code).toBe(1);
    expect(contentOf(place)).not.toEqual(before);
  });
});

describe('a log that changes under its reader', () => {
  /** Logs of which the last has a record that is set aside, and so is read again. */
  function ownLogs(place: string): string[] {
    const files = logs.map((path, at) => join(place, `${at}.csv`));
    logs.forEach((path, at) => cpSync(path, files[at]!));
    writeFileSync(files[0]!, 'Q00,x,2026-01-01T00:00:00,,\n', { flag: 'a' });
    return files;
  }

  it.each<[string, (log: string) => void, RegExp]>([
    ['becomes shorter', (log) => truncateSync(log, 1000), /^skewline: .*0\.csv became shorter while it was read\n$/],
    ['goes away', (log) => unlinkSync(log), /^skewline: ENOENT: no such file or directory, open '.*0\.csv'\n$/],
  ])('and %s between its two readings ends the command with status 1, and older results stand', async (_what, harm, words) => {
    const place = olderResults();
    const sources = newFolder('whole-logs');
    const files = ownLogs(sources);
    const before = contentOf(place);
    const { ended } = startProgram(command(place, files));
    await until('events', () => isBeingWritten(place, 'events.csv'));
    harm(files[0]!);
    const { code, stdout, stderr } = await ended;
    expect(stderr).toMatch(words);
    expect([code, stdout]).toEqual([1, '']);
    expect(contentOf(place)).toEqual(before);
    rmSync(sources, { recursive: true });
  });

  it('or that is left alone is read twice', async () => {
    const place = olderResults();
    const sources = newFolder('whole-logs');
    const { code } = await startProgram(command(place, ownLogs(sources))).ended;
    expect(code).toBe(0);
    expect(readFileSync(join(place, 'out', 'set-aside.csv'), 'utf8')).toMatch(/^file,line,reason,text\n0\.csv,\d+,sequence,/);
    rmSync(sources, { recursive: true });
  });
});
