import { appendFileSync, readFileSync, renameSync, truncateSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { ingestDesk } from '../../backend/sites-gate/ingest-desk';
import { root } from '../../scripts/lib.mjs';
import { startChaosProxy } from '../support/chaos-proxy';
import { skewline, SKEWLINE, startProgram } from '../support/command';
import { newFolder } from '../support/folder';
import { count, newIngest } from '../support/ingest';
import { recordingDesk, startGate, startGateOver, type RecordingDesk, type RunningGate } from './gate';

const HEADER = 'sequence,reading,sigma_ns,remark';
const open: { close: () => Promise<void> | void }[] = [];
afterEach(async () => {
  for (const one of open.splice(0).reverse()) await one.close();
});

async function started(): Promise<{ gate: RunningGate; desk: RecordingDesk; folder: string; arguments: string[]; log: string }> {
  const desk = recordingDesk();
  const gate = await startGate(desk);
  open.push(gate);
  const folder = newFolder('feed');
  writeFileSync(join(folder, 'key'), `${gate.keys[0]}\n`);
  const log = join(folder, 'log.csv');
  return { gate, desk, folder, log, arguments: ['feed', '--server', gate.url, '--key-file', join(folder, 'key')] };
}

const lines = (from: number, to: number): string =>
  Array.from({ length: to - from }, (_, n) => `${from + n},2026-03-01T12:00:00.${String(n).padStart(6, '0')},20,\n`).join('');
const numbersOf = ({ kept }: RecordingDesk): number[] => [...kept.values()].map(({ sequence }) => Number(sequence)).sort((a, b) => a - b);

describe('skewline feed', () => {
  it('puts the log of an example into the database as the batch command reads it, and knows it when it comes again', async () => {
    const example = join(root, 'examples/cairnway');
    const at = newIngest(JSON.parse(readFileSync(join(example, 'network.json'), 'utf8')));
    const gate = await startGateOver(at.db, ingestDesk(at.ingest), [at.siteId('KNF'), at.siteId('CND')]);
    open.push(gate);
    const key = join(newFolder('feed'), 'key');
    writeFileSync(key, gate.keys[0]);
    const args = ['feed', '--server', gate.url, '--key-file', key, '--complete', join(example, 'logs/KNF.csv')];
    const first = await skewline(args);
    expect([first.code, first.stdout]).toEqual([0, '']);
    const [, sent, stored] = /^(\d+) sent: (\d+) stored, (\d+) known already, \d+ set aside/.exec(first.stderr) ?? [];
    expect(Number(stored)).toBe(count(at.db, 'SELECT count(*) FROM events'));
    expect(Number(stored)).toBeGreaterThan(0);
    expect(count(at.db, 'SELECT count(*) FROM site_streams WHERE complete_tai_s IS NOT NULL')).toBe(1);
    const again = await skewline(args);
    expect(again.stderr).toMatch(new RegExp(`^${sent ?? ''} sent: 0 stored, ${sent ?? ''} known already, 0 set aside`));
  });

  it('sends what is malformed as it stands, so that nothing is dropped, and counts it by reason', async () => {
    const { desk, arguments: args, log } = await started();
    writeFileSync(
      log,
      `site,${HEADER}\nORL,1,2026-03-01T12:00:00,,Δ\nORL,2,x\nVES,3,2026-03-01T12:00:00,,\nORL,"4" ,y,,\nORL,5,"never closed,,\n`,
    );
    const { code, stderr } = await skewline([...args, log]);
    expect(code).toBe(0);
    expect(stderr).toContain('line 6: a quote is not closed');
    expect(stderr).toContain('5 sent: 1 stored, 0 known already, 4 set aside (sequence 4)');
    expect([...desk.kept.values()]).toEqual([expect.objectContaining({ sequence: '1', extra: { remark: 'Δ' } })]);
  });

  it('goes on over lost links and a slow server, without losing or doubling', async () => {
    const { gate, desk, arguments: args, log } = await started();
    const proxy = await startChaosProxy(gate.port);
    open.push(proxy);
    desk.delayMs = 20;
    writeFileSync(log, `${HEADER}\n${lines(0, 20_000)}`);
    const running = startProgram([...SKEWLINE, ...args.map((one) => (one === gate.url ? `http://127.0.0.1:${proxy.port}` : one)), log]);
    await vi.waitFor(() => expect(desk.kept.size).toBeGreaterThan(2_000), 15_000);
    proxy.cut();
    const { code, stderr } = await running.ended;
    expect(code).toBe(0);
    expect(stderr).toMatch(/trying again in/);
    expect(numbersOf(desk)).toEqual(Array.from({ length: 20_000 }, (_, n) => n));
  });

  it('follows a file that grows, is cut, and is replaced, until it is stopped', async () => {
    const { desk, arguments: args, log } = await started();
    writeFileSync(log, `${HEADER}\n${lines(0, 10)}10,2026-03-01T12`);
    const running = startProgram([...SKEWLINE, ...args, '--follow', log]);
    await vi.waitFor(() => expect(desk.kept.size).toBe(10), 15_000);
    appendFileSync(log, `:00:00,20,\n${lines(11, 20)}`);
    await vi.waitFor(() => expect(desk.kept.size).toBe(20), 15_000);
    truncateSync(log, 0);
    await new Promise((resolve) => setTimeout(resolve, 600));
    appendFileSync(log, `${HEADER}\n${lines(20, 25)}`);
    await vi.waitFor(() => expect(desk.kept.size).toBe(25), 15_000);
    renameSync(log, `${log}.1`);
    writeFileSync(log, `${HEADER}\n${lines(25, 30)}`);
    await vi.waitFor(() => expect(desk.kept.size).toBe(30), 15_000);
    running.process.kill('SIGINT');
    const { code, stderr } = await running.ended;
    expect([code, stderr.split('\n').slice(0, -2)]).toEqual([
      0,
      [expect.stringContaining('it became shorter: read from its start'), expect.stringContaining('another file stands in its place')],
    ]);
    expect(stderr).toContain('30 sent: 30 stored');
  });

  it.each<[string, (folder: string) => string[], string]>([
    ['a key that is refused', (folder) => (writeFileSync(join(folder, 'key'), 'swk_wrong'), []), 'skewline: The key is unknown here'],
    ['a key file that is empty', (folder) => (writeFileSync(join(folder, 'key'), ''), []), 'skewline: --key-file: '],
    ['a log of another site', (folder) => (writeFileSync(join(folder, 'log.csv'), `site,${HEADER}\nVES,1,x,,\n`), []), 'line 2: the site is "VES"; the key is for ORL'], // prettier-ignore
    ['a log without a header', (folder) => (writeFileSync(join(folder, 'log.csv'), ''), []), 'is empty; its first line must be a header'],
    ['a server that is none', () => ['--server', 'ftp://x'], '--server: "ftp://x" cannot be used'],
  ])('ends with one line and status 2 for %s', async (_what, spoil, said) => {
    const { folder, arguments: args, log } = await started();
    writeFileSync(log, `${HEADER}\n${lines(0, 3)}`);
    const { code, stderr } = await skewline([...args, ...spoil(folder), log]);
    expect(code).toBe(2);
    expect(stderr).toContain(said);
    expect(stderr.trim().split('\n')).toHaveLength(1);
  });
});
