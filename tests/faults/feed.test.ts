import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { afterEach, expect, it, vi } from 'vitest';
import { checkConservation } from '../../backend/ingest/conservation';
import { SKEWLINE, startProgram } from '../support/command';
import { count } from '../support/ingest';
import { plainRecord } from './records';
import { StreamedServer } from './streamed-server';

const { LONG } = process.env;
const KILLS = LONG ? 10 : 2;
const LINES_UNTIL_KILL = 15_000;
const STALL_MS = 300;
const WAIT_MS = 30_000;

let server: StreamedServer | undefined;
afterEach(() => server?.close());

it(`skewline feed has each line of a log stored once, through ${KILLS} lost links and ${KILLS} kills of the server`, async () => {
  server = await StreamedServer.start({ siteCount: 1, preload: ['planted-writer.mjs'] });
  const { folder, sites, url, proxy } = server;
  const [log, key] = [join(folder, 'log.csv'), join(folder, 'key')];
  const lines = LINES_UNTIL_KILL * (KILLS + 1);
  const texts = Array.from({ length: lines }, (_, n) => plainRecord(n, n * 1e6)).map(
    ({ sequence, reading, sigmaNs }) => `${sequence},${reading},${sigmaNs}\n`,
  );
  writeFileSync(log, `sequence,reading,sigma_ns\n${texts.join('')}`);
  writeFileSync(key, sites[0]!.key);
  const stored = (): number => server!.read((db) => count(db, 'SELECT count(*) FROM events'));
  server.plant('slow'); // so that it is not done before the harm
  const running = startProgram([...SKEWLINE, 'feed', '--server', url, '--key-file', key, '--complete', log]);
  for (let kill = 0; kill < KILLS; kill++) {
    const before = stored();
    await vi.waitFor(() => expect(stored()).toBeGreaterThan(before), WAIT_MS);
    proxy.stall(true);
    await sleep(STALL_MS);
    proxy.stall(false);
    expect(proxy.cut()).toBe(1);
    await vi.waitFor(() => expect(stored()).toBeGreaterThan(before + 1_000), WAIT_MS);
    await server.end('SIGKILL');
    expect(stored()).toBeLessThan(lines);
    await server.startAgain();
  }
  server.clear('slow');
  const { code, stderr } = await running.ended;
  expect(code).toBe(0);
  expect(stderr.match(/trying again in/g)?.length).toBeGreaterThanOrEqual(KILLS);
  const told = /^(.*) sent: (.*) stored, (.*) known already, 0 set aside$/m.exec(stderr)?.slice(1) ?? [];
  const [sent = NaN, storedByIt = NaN, known = NaN] = told.map((text) => Number(text.replaceAll(/\D/g, '')));
  expect([sent, storedByIt + known]).toEqual([lines, lines]);
  expect(stored()).toBe(lines);
  expect(server.read((db) => count(db, 'SELECT count(*) FROM triggers'))).toBe(lines);
  expect(server.read((db) => count(db, 'SELECT count(*) FROM site_streams WHERE complete_tai_s IS NOT NULL'))).toBe(1);
  expect(server.read(checkConservation)).toEqual([]);
}, 180_000);
