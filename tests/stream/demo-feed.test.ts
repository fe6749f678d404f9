import { createServer, type Server } from 'node:http';
import { type AddressInfo } from 'node:net';
import { setTimeout as sleep } from 'node:timers/promises';
import { afterEach, beforeEach, expect, it } from 'vitest';
import { eq } from 'drizzle-orm';
import { sites } from '#schema/schema';
import { compareInstants } from '#shared/time/instant';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { readDemoFile } from '../../backend/demo/demo-file';
import { feedSite } from '../../backend/demo/feed/feed-site';
import { runFeed } from '../../backend/demo/feed/run-feed';
import { siteQueues } from '../../backend/demo/feed/site-queues';
import { HISTORY_S, SEED } from '../../backend/demo/scenario';
import { seedDemo } from '../../backend/demo/seed';
import { isLinkUp } from '../../backend/demo/stream/link';
import { SLICE_S } from '../../backend/demo/stream/plan';
import { writeSlice } from '../../backend/demo/stream/slice';
import { makeWorld } from '../../backend/demo/stream/world';
import { type SiteDesk } from '../../backend/sites-gate/site-desk';
import { openSitesGate, type SitesGate } from '../../backend/sites-gate/sites-gate';
import { startApp, type RunningApp } from '../support/app';
import { recordingDesk } from './gate';

/** Its link may be down for the whole of a test. */
const UNSTABLE = 'GIL';
const HISTORY_SLICES = HISTORY_S / SLICE_S;
const LATE_SLICES = 3; // what a site keeps back for 20 s is not there yet
const WAIT_MS = 20_000;

let app: RunningApp;
let server: Server;
let gate: SitesGate;
const desk = recordingDesk();
const conflicts: string[] = [];
beforeEach(async () => {
  app = await startApp();
  await seedDemo(app.ground, { dataDir: app.dataDir, production: false, demo: true });
  const checking: SiteDesk = {
    ...desk,
    batch: (sender, records) => {
      for (const record of records) {
        const name = `${sender.siteId}:${record.series}:${record.sequence}`;
        const known = desk.kept.get(name);
        if (known && JSON.stringify(known) !== JSON.stringify(record)) conflicts.push(name);
      }
      return desk.batch(sender, records);
    },
  };
  server = createServer((_req, res) => res.writeHead(404).end());
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as AddressInfo;
  gate = openSitesGate(server, { ...app.ground, origin: `http://127.0.0.1:${port}` }, checking);
});
afterEach(async () => {
  await gate.close();
  server.closeAllConnections();
  await new Promise((resolve) => server.close(resolve));
  await app.close();
});

const said: string[] = [];
const feed = (signal: AbortSignal): Promise<void> =>
  runFeed({
    url: `http://127.0.0.1:${(server.address() as AddressInfo).port}`,
    dataDir: app.dataDir,
    signal,
    say: (line) => said.push(line),
  });

async function until(isSo: () => boolean): Promise<boolean> {
  const startMs = performance.now();
  while (!isSo() && performance.now() - startMs < WAIT_MS) await sleep(50);
  return isSo();
}

it('the demo streams its history and goes on, by the key and link of each site, and a restart doubles or alters nothing', async () => {
  const { firstTaiS } = readDemoFile(app.dataDir)!;
  const idOf = new Map(app.ground.db.select({ id: sites.id, code: sites.code }).from(sites).all().map(({ id, code }) => [code, id])); // prettier-ignore
  const world = makeWorld(SEED, firstTaiS, shippedLeapSeconds());
  const counts = new Map<string, number>();
  const expected = Array.from({ length: HISTORY_SLICES - LATE_SLICES }, (_, slice) => writeSlice(world, slice, counts))
    .flat()
    .filter(({ site }) => site !== UNSTABLE)
    .map(({ site, record }): [string, typeof record] => [`${idOf.get(site)}::${record.sequence}`, record]);
  expect(expected.length).toBeGreaterThan(1_500);
  const isHeld = (): boolean => expected.every(([name]) => desk.kept.has(name));

  const first = new AbortController();
  const running = feed(first.signal);
  expect(await until(isHeld)).toBe(true);
  for (const [name, record] of expected) expect(desk.kept.get(name), name).toEqual(record);
  const states = (): string[] => desk.said.filter((line) => line.startsWith('state'));
  expect(await until(() => states().filter((line) => line.includes('"live"')).length >= 7)).toBe(true);
  expect(states().every((line) => line.includes('"completeTo"'))).toBe(true);
  const before = desk.kept.size;
  expect(await until(() => desk.kept.size > before)).toBe(true);
  first.abort();
  await running;

  const second = new AbortController();
  const hellos = (): number => desk.said.filter((line) => line.startsWith('hello demo')).length;
  const helloed = hellos();
  const again = feed(second.signal);
  expect(await until(() => hellos() >= helloed + 7)).toBe(true);
  const resumed = desk.kept.size;
  expect(await until(() => desk.kept.size > resumed)).toBe(true);
  second.abort();
  await again;
  expect(conflicts).toEqual([]);
  expect([...desk.kept.values()].every(({ series }) => series === '')).toBe(true);
  expect(said).toEqual([]);
});

it('the demo gives the link of one site up now and then, and sends what was written meanwhile once it is back', async () => {
  const demo = readDemoFile(app.dataDir)!;
  const { id } = app.ground.db.select().from(sites).where(eq(sites.code, UNSTABLE)).get()!;
  const world = makeWorld(SEED, demo.firstTaiS, shippedLeapSeconds());
  const isUp = (afterS: number): boolean => isLinkUp(world, UNSTABLE, demo.firstTaiS + afterS);
  const downFromS = Array.from({ length: 2_000 }, (_, s) => s + 1).find((s) => isUp(s - 1) && !isUp(s))!;
  const upFromS = Array.from({ length: 60 }, (_, s) => downFromS + s).find(isUp)!;
  const times = [downFromS - 1, downFromS + 1, upFromS + 1];
  const resumed = { session: { series: '', firstSlice: 0, lastTaiS: demo.firstTaiS }, fromSlice: 0 };
  const ending = new AbortController();
  const url = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  const sent = (): number => [...desk.kept.keys()].filter((name) => name.startsWith(`${id}:`)).length;
  const counts: number[] = [];
  desk.kept.clear();
  desk.said.length = 0;
  const running = feedSite({
    code: UNSTABLE,
    world,
    queues: siteQueues(world, resumed),
    resumed,
    server: { url, key: demo.keys[UNSTABLE]!, software: 'demo' },
    now: () => {
      counts.push(sent());
      return { taiS: demo.firstTaiS + (times[Math.min(counts.length, times.length) - 1] ?? 0), ps: 0 };
    },
    signal: ending.signal,
  });
  expect(await until(() => counts.length > times.length)).toBe(true);
  ending.abort();
  await running;
  expect(desk.said.map((line) => line.split(' ')[0])).toEqual(expect.arrayContaining(['hello', 'bye', 'hello']));
  expect(desk.said.filter((line) => line.startsWith('hello'))).toHaveLength(2);
  const [, whenDown = 0, whenUp = 0, after = 0] = counts;
  expect(whenUp).toBe(whenDown);
  const written = Array.from({ length: Math.ceil(upFromS / SLICE_S) + 1 }, (_, slice) => writeSlice(world, slice, new Map())).flat();
  const back = { taiS: demo.firstTaiS + upFromS + 1, ps: 0 };
  expect(after).toBe(written.filter(({ site, at }) => site === UNSTABLE && compareInstants(at, back) <= 0).length);
  expect(after).toBeGreaterThan(whenUp);
});

it('the demo says so when a site is refused', async () => {
  app.ground.db.$client.exec(`UPDATE site_keys SET revoked_at = '2026-01-01T00:00:00.000Z'`);
  const ending = new AbortController();
  const running = feed(ending.signal);
  expect(await until(() => said.length >= 7)).toBe(true);
  ending.abort();
  await running;
  for (const line of said) expect(line).toMatch(/^the demo's site [A-Z]{3} streams no more: /);
});
