import { appendFileSync, readFileSync, renameSync, truncateSync, writeFileSync } from 'node:fs';
import { createServer as createHttp } from 'node:http';
import { createServer, type AddressInfo, type Server } from 'node:net';
import { join } from 'node:path';
import { eq } from 'drizzle-orm';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { siteKeys } from '#schema/schema';
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

  it.each(['--follow', '-'])('ends with the reason and the counts when its key is revoked while nothing comes: %s', async (how) => {
    const { gate, desk, arguments: args, log } = await started();
    writeFileSync(log, `${HEADER}\n${lines(0, 3)}`);
    const running = startProgram([...SKEWLINE, ...args, ...(how === '-' ? ['-'] : ['--follow', log])], undefined, 'pipe');
    if (how === '-') running.process.stdin?.write(readFileSync(log));
    await vi.waitFor(() => expect(desk.kept.size).toBe(3), 15_000);
    const revoked = { revokedAt: '2026-01-02T00:00:00.000Z' };
    gate.db.update(siteKeys).set(revoked).where(eq(siteKeys.id, gate.keyIds[0])).run();
    const { code, stderr } = await running.ended;
    expect(code).toBe(2);
    expect(stderr).toMatch(/^skewline: The key .*; 3 sent: 3 stored, 0 known already, 0 set aside\n$/);
  });

  it('is stopped while standard input is silent', async () => {
    const { desk, arguments: args } = await started();
    const running = startProgram([...SKEWLINE, ...args, '-'], undefined, 'pipe');
    running.process.stdin?.write(`${HEADER}\n${lines(0, 3)}`);
    await vi.waitFor(() => expect(desk.kept.size).toBe(3), 15_000);
    running.process.kill('SIGINT');
    const { code, stderr } = await running.ended;
    expect(code).toBe(1);
    expect(stderr).toMatch(/^3 sent: 3 stored.*\nskewline: stopped before the end/);
  });

  it('says how far it is complete by what the server has, not by a reading of the future, also when it is fed again', async () => {
    const example = join(root, 'examples/cairnway');
    const at = newIngest(JSON.parse(readFileSync(join(example, 'network.json'), 'utf8')));
    const gate = await startGateOver(at.db, ingestDesk(at.ingest), [at.siteId('KNF'), at.siteId('CND')]);
    open.push(gate);
    const folder = newFolder('feed');
    writeFileSync(join(folder, 'key'), gate.keys[0]);
    const text = readFileSync(join(example, 'logs/KNF.csv'), 'utf8').trimEnd();
    const [last = ''] = text.split('\n').slice(-1);
    const future = last.replace(/\d{4}-\d\d-\d\dT/, '2061-03-01T').replace('KNF,', 'KNF,9');
    writeFileSync(join(folder, 'log.csv'), `${text}\n${future}\n`);
    const args = ['feed', '--server', gate.url, '--key-file', join(folder, 'key'), '--complete'];
    for (const more of [[], [], ['--resume']]) {
      const { code, stderr } = await skewline([...args, ...more, join(folder, 'log.csv')]);
      expect([code, stderr]).toEqual([0, expect.stringMatching(/^\d+ sent/)]);
    }
    const [stream] = at.db.$client.prepare('SELECT complete_tai_s AS taiS FROM site_streams').all();
    expect(stream).toEqual({ taiS: expect.closeTo(Date.parse(`${/\d{4}-[\dT:-]*/.exec(last)?.[0] ?? ''}Z`) / 1000, -2) as number });
  });

  it('says that it is connected again, and why it was not, in words', async () => {
    const { gate, desk, arguments: args, log } = await started();
    const proxy = await startChaosProxy(gate.port);
    open.push(proxy);
    writeFileSync(log, `${HEADER}\n${lines(0, 3)}`);
    const through = args.map((one) => (one === gate.url ? `http://127.0.0.1:${proxy.port}` : one));
    const running = startProgram([...SKEWLINE, ...through, '--follow', log]);
    await vi.waitFor(() => expect(desk.kept.size).toBe(3), 15_000);
    proxy.cut();
    appendFileSync(log, lines(3, 5));
    await vi.waitFor(() => expect(desk.kept.size).toBe(5), 15_000);
    running.process.kill('SIGINT');
    const { stderr } = await running.ended;
    expect(stderr).toMatch(/^skewline: the link was lost; trying again in [\d.]+ s\nskewline: connected again\n5 sent/);
  });

  it('keeps trying an address that refuses it, and names both', async () => {
    const { arguments: args, gate, log } = await started();
    writeFileSync(log, `${HEADER}\n`);
    await gate.close();
    const running = startProgram([...SKEWLINE, ...args, log]);
    await new Promise<void>((resolve) => running.process.stderr?.once('data', () => resolve()));
    running.process.kill('SIGINT');
    expect((await running.ended).stderr).toContain(
      `skewline: ${gate.url} refuses the connection: no server listens there; trying again in`,
    );
  });

  it.each<[string, () => Server, string]>([
    ['has no such path', () => createHttp((_req, res) => res.writeHead(404).end()), 'answers, but is no Skewline server (status 404)'],
    [
      'is no server of pages',
      () => createServer((socket) => void socket.on('error', () => undefined).end('220 ready\r\n')),
      'answers, but is no Skewline server (Parse Error',
    ],
  ])('ends with one line when what answers %s', async (_what, other, said) => {
    const { arguments: args, gate, log } = await started();
    writeFileSync(log, `${HEADER}\n`);
    const server = other();
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    open.push({ close: () => void server.close() });
    const url = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
    const { code, stderr } = await skewline([...args.map((one) => (one === gate.url ? url : one)), log]);
    expect(code).toBe(2);
    expect(stderr).toContain(`skewline: ${url} ${said}`);
    expect(stderr.trim().split('\n')).toHaveLength(1);
  });

  it.each<[string, (folder: string) => string[], string]>([
    ['a key that is refused', (folder) => (writeFileSync(join(folder, 'key'), 'swk_wrong'), []), 'skewline: The key is unknown here'],
    ['a key file that is empty', (folder) => (writeFileSync(join(folder, 'key'), ''), []), 'skewline: --key-file: '],
    ['a log of another site', (folder) => (writeFileSync(join(folder, 'log.csv'), `site,${HEADER}\nVES,1,x,,\n`), []), 'line 2: the site is "VES"; the key is for ORL'], // prettier-ignore
    ['a log without a header', (folder) => (writeFileSync(join(folder, 'log.csv'), ''), []), 'is empty; its first line must be a header'],
    ['a server that is none', () => ['--server', 'ftp://x'], '--server: "ftp://x" cannot be used'],
    ['an address with a path', () => ['--server', 'http://127.0.0.1:1/api'], 'it must be the address alone: http://127.0.0.1:1'],
  ])('ends with one line and status 2 for %s', async (_what, spoil, said) => {
    const { folder, arguments: args, log } = await started();
    writeFileSync(log, `${HEADER}\n${lines(0, 3)}`);
    const { code, stderr } = await skewline([...args, ...spoil(folder), log]);
    expect(code).toBe(2);
    expect(stderr).toContain(said);
    expect(stderr.trim().split('\n')).toHaveLength(1);
  });
});
