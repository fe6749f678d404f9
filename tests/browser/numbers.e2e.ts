import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { type BrowserContext, expect, type Page, test } from '@playwright/test';
import { pino } from 'pino';
import { type PairInFull } from '#shared/contract/pair-routes';
import { LIVE_CROWD_LIMIT } from '../../backend/coincidences/active-rule';
import { reconcileFiles } from '../../backend/command/reconcile-command';
import { readConfig } from '../../backend/config';
import { closeDb, openDb } from '../../backend/db';
import { makeGround } from '../../backend/make-ground';
import { signedIn } from '../bench/desk-page';
import { type Client } from '../support/client';
import { newFolder } from '../support/folder';
import { insertRow } from '../support/network-rows';
import { type Row, rowsOf } from '../support/results';
import { type RunningServer, startServer } from '../support/server';
import { signIn } from '../support/sign-in';
import { CAIRNWAY, CAIRNWAY_LOGS, storeCairnway } from '../support/stored-example';

const AT = '2026-03-01T00:00:00.000Z';
const SEARCHED_MS = 30_000;

let server: RunningServer;
let context: BrowserContext;
let page: Page;
let sets: readonly Row[];
let pairs: readonly Row[];

/** The example as the batch command reconciles it. */
async function batchTables(): Promise<void> {
  const out = join(newFolder('browser-numbers-batch'), 'out');
  const progress = { begin: () => undefined, at: () => undefined, end: () => undefined };
  const reports = { signal: new AbortController().signal, progress, say: () => undefined };
  const logs = CAIRNWAY_LOGS.map(([site, path]) => (site === undefined ? path : `${site}=${path}`));
  await reconcileFiles({ network: join(CAIRNWAY, 'network.json'), out, logs, limit: LIVE_CROWD_LIMIT }, reports);
  const table = (name: string): readonly Row[] => rowsOf(readFileSync(join(out, name), 'utf8'));
  sets = table('coincidences.csv');
  pairs = table('pairs.csv').filter(({ set }) => sets.some((one) => one['set'] === set));
}

/** The same records through the ingest into a database, with the file's rule in force and an analyst who is signed in. */
async function storedIn(dataDir: string): Promise<Client> {
  const config = readConfig({ DATA_DIR: dataDir, NODE_ENV: 'test' });
  if (!config.ok) throw new Error(config.problem.text);
  const db = openDb(dataDir);
  const log = pino({ level: 'silent' });
  const made = await makeGround({ config: config.value, db, log, version: '0', port: 0, nowMs: Date.now });
  if (!made.ok) throw new Error(made.problem.text);
  const { ground, leave } = made.value;
  const { networkId } = await storeCairnway({ ground });
  const { rule } = JSON.parse(readFileSync(join(CAIRNWAY, 'network.json'), 'utf8')) as {
    rule: { code: string; minimum_fold?: number; sigmas?: number; window: { speed_c?: number; margin_ns?: number } };
  };
  const ruleId = insertRow(db, 'rules', { network_id: networkId, code: rule.code, name: '', is_active: 1, created_at: AT });
  insertRow(db, 'rule_versions', {
    rule_id: ruleId,
    number: 1,
    minimum_fold: rule.minimum_fold ?? 2,
    sigmas: rule.sigmas ?? 3,
    window_kind: 'light-time',
    speed_c: rule.window.speed_c ?? 1,
    margin_ns: rule.window.margin_ns ?? 0,
    created_at: AT,
  });
  const client = signIn({ ground, url: '' }, [{ role: 'analyst', networkId, siteId: null }]);
  await leave();
  closeDb(db);
  return client;
}

test.beforeAll(async ({ browser }) => {
  await batchTables();
  const dataDir = newFolder('browser-numbers');
  const client = await storedIn(dataDir);
  server = await startServer({ DATA_DIR: dataDir });
  context = await signedIn(browser, { url: server.url, client });
  page = await context.newPage();
});
test.afterAll(async () => {
  await context.close();
  await server.stop();
});

async function exported<T>(item: string): Promise<T> {
  const download = page.waitForEvent('download');
  await page.getByRole('button', { name: 'Export' }).click();
  await page.getByRole('menuitem', { name: item }).click();
  return JSON.parse(readFileSync(await (await download).path(), 'utf8')) as T;
}

test('the coincidences on the desk are those of the batch command on the same records, number by number', async () => {
  await page.goto('/desk');
  await expect(page.locator('sw-set-table [role=grid]')).toHaveAttribute('aria-rowcount', /^[2-9]|\d\d/, { timeout: SEARCHED_MS });
  let shown: Record<string, string | number>[] = [];
  await expect
    .poll(async () => (shown = await exported('Table as JSON')).length, { timeout: SEARCHED_MS, intervals: [500] })
    .toBe(sets.length);
  expect(sets.length).toBeGreaterThan(2);
  for (const set of sets) {
    const one = shown.find((row) => row['set'] === set['set']);
    expect(one, set['set']).toMatchObject({
      fold: Number(set['fold']),
      sites: set['sites'],
      first_tai: set['first_tai']?.replace(/ TAI$/, ''),
      span_ns: Number(set['span_ns']),
      events: set['events'],
    });
    // The pair nearest to light gives the set its class.
    const own = pairs.filter((pair) => pair['set'] === set['set']);
    const nearest = Math.min(...own.map((pair) => Math.abs(Number(pair['margin_sigma']))));
    expect(Math.abs(Number(one?.['nearest_margin_sigma']))).toBe(nearest);
  }
});

test('a pair on its page has the numbers of the batch command', async () => {
  const answer = await page.request.get('api/networks/1/coincidences?limit=100');
  const { items } = (await answer.json()) as { items: { name: string; members: { eventId: number; name: string }[] }[] };
  const [pair] = pairs.filter((one) => one['class'] === 'spacelike');
  const set = items.find(({ name }) => name.startsWith(pair!['set']!.slice(0, 12)) || pair!['set']!.startsWith(name));
  const ids = [pair!['a'], pair!['b']].map((name) => set!.members.find((member) => member.name === name)!.eventId);
  await page.goto(`/pair/${ids.join('/')}`);
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('Order depends on the frame.');
  const [stated] = (await exported<{ pairs: PairInFull[] }>('Numbers as JSON')).pairs;
  expect(stated).toMatchObject({
    class: pair!['class'],
    dtNs: Number(pair!['dt_ns']),
    distanceM: Number(pair!['distance_m']),
    sigmaDtNs: Number(pair!['sigma_dt_ns']),
    marginSigma: Number(pair!['margin_sigma']),
    reverseMarginSigma: Number(pair!['reverse_margin_sigma']),
    intervalM2: Number(pair!['interval_m2']),
    turning: { speedC: Number(pair!['turning_speed']), sigmaC: Number(pair!['turning_sigma']) },
  });
  await expect(page.locator('header.verdict')).toContainText(`Turning speed ${Number(pair!['turning_speed']).toFixed(3)} c`);
});
