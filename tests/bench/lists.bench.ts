import { createSecretKey, randomBytes } from 'node:crypto';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:http';
import { type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pino } from 'pino';
import { COINCIDENCE_SORTS, type CoincidenceSort } from '#shared/contract/coincidence-routes';
import { makeApp } from '../../backend/app';
import { readConfig } from '../../backend/config';
import { closeDb, openDb, openReading } from '../../backend/db';
import { ensureDeployment } from '../../backend/deployment';
import { makeReadingGround } from '../../backend/make-reading-ground';
import { positionText } from '../../backend/search/keyset';
import { fillCoincidences, fillEvents, fillGround, fillTheRest, FIRST_TAI_S } from '../database/filled';
import { type Client } from '../support/client';
import { signIn } from '../support/sign-in';
import { median } from './medians';

const MANY = Number(process.env['ROWS'] ?? 1_000_000);
const FEW = MANY / 10;
const PAGE = 100;
/** Rounds of all requests, each asked once of either server in turn; the first ones warm up. */
const ROUNDS = 25;
const WARM = 5;
const PER_SECOND = 20;

/** The lists' share: a page may cost so many times what one of the same size by its primary key costs. */
const MOST_TO_BASELINE = 6;
/** From a tenth of the rows to all of them. */
const MOST_GROWTH = 1.5;

interface Server {
  readonly rows: number;
  readonly client: Client;
  readonly close: () => Promise<void>;
}

const folder = mkdtempSync(join(tmpdir(), 'skewline-lists-'));

/** The least that counts as a built front end. */
function pageFolder(): string {
  writeFileSync(join(folder, 'index.html'), '<sw-root ngCspNonce="CSP_NONCE"></sw-root>');
  return folder;
}

/** A server over a database with so many events and as many coincidences. */
async function serverOf(rows: number): Promise<Server> {
  const dataDir = join(folder, String(rows));
  const db = openDb(dataDir);
  db.$client.transaction(() => {
    fillGround(db.$client);
    fillEvents(db.$client, rows);
    fillCoincidences(db.$client, rows);
    fillTheRest(db.$client, rows / 10);
  })();
  const config = readConfig({ DATA_DIR: dataDir, NODE_ENV: 'test' });
  if (!config.ok) throw new Error(config.problem.text);
  const server = createServer();
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as AddressInfo;
  const writer = { ask: () => Promise.reject(new Error('nothing is written here')) };
  const facts = { deploymentId: ensureDeployment(db, '0').id, signingKey: createSecretKey(randomBytes(48)), keepsMails: false };
  const sources = { config: config.value, log: pino({ level: 'silent' }), version: '0', port, nowMs: Date.now };
  const reading = makeReadingGround({ ...sources, db: openReading(dataDir) }, facts, writer);
  server.on('request', makeApp(reading, pageFolder(), writer));
  const client = signIn({ ground: { ...reading, db }, url: `http://127.0.0.1:${port}` }, [{ role: 'analyst', networkId: 1, siteId: null }]);
  return {
    rows,
    client,
    close: async () => {
      server.closeAllConnections();
      server.close();
      await reading.searcher.close();
      reading.db.$client.close();
      closeDb(db);
    },
  };
}

const query = (path: string, more: Readonly<Record<string, string>>): string =>
  `/networks/1/${path}?${new URLSearchParams({ limit: String(PAGE), ...more }).toString()}`;

/** A place in the middle of a list of so many rows. */
const middleOf: Readonly<Record<CoincidenceSort, (rows: number) => readonly number[]>> = {
  time: (rows) => [FIRST_TAI_S + rows / 2 / PER_SECOND, 0, 0],
  fold: (rows) => [2, FIRST_TAI_S + rows / 2 / PER_SECOND, 0, 0],
  margin: (rows) => [-4, rows / 2],
  span: (rows) => [500, rows / 2],
  turning: (rows) => [0.5, rows / 2],
  amplitude: (rows) => [500, rows / 2],
};

const inTheMiddle = (sort: CoincidenceSort, rows: number): string => positionText(sort, middleOf[sort](rows));
const middleS = (rows: number): number => FIRST_TAI_S + rows / 2 / PER_SECOND;

/** What is asked: a name and the path for a server of so many rows. The baseline is a page of the same size by its primary key. */
const BASELINE = 'changes by primary key (the baseline)';
const ASKED: readonly (readonly [name: string, path: (rows: number) => string])[] = [
  [BASELINE, (rows) => query('changes', { after: String(rows / 20) })],
  ['events, first page', () => query('events', {})],
  ['events, in the middle', (rows) => query('events', { cursor: inTheMiddle('time', rows) })],
  ['events, back from the middle', (rows) => query('events', { cursor: inTheMiddle('time', rows), order: 'down' })],
  ['events of three sites, in the middle', (rows) => query('events', { cursor: inTheMiddle('time', rows), siteIds: '1,4,6' })],
  ...COINCIDENCE_SORTS.flatMap((sort) => [
    [`coincidences by ${sort}, first page`, () => query('coincidences', { sort })] as const,
    [`coincidences by ${sort}, in the middle`, (rows: number) => query('coincidences', { sort, cursor: inTheMiddle(sort, rows) })] as const,
  ]),
  ['coincidences of a class, in the middle', (rows) => query('coincidences', { class: 'spacelike', cursor: inTheMiddle('time', rows) })],
  ['coincidences of a site, in the middle', (rows) => query('coincidences', { siteIds: '3', cursor: inTheMiddle('time', rows) })],
  ['set-asides, open', () => query('set-asides', {})],
];

/** Searches: no index answers these by itself. */
const SEARCHES: readonly (readonly [name: string, path: (rows: number) => string])[] = [
  ['a class, by margin', () => query('coincidences', { class: 'timelike', sort: 'margin' })],
  [
    '5 minutes, by margin',
    (rows) => query('coincidences', { from: String(middleS(rows)), to: String(middleS(rows) + 300), sort: 'margin' }),
  ],
  ['two sites that share nothing, by span', () => query('coincidences', { siteIds: '1,5', sort: 'span' })],
  ['events of a kind that there is not', () => query('events', { kind: 'test' })],
];

async function timed({ client }: Server, path: string): Promise<number> {
  const started = performance.now();
  const { status, text } = await client.get(path);
  if (status !== 200) throw new Error(`${path}: ${status} ${text}`);
  return performance.now() - started;
}

/** The median time of each request at each server, all asked in turn. */
async function measure(servers: readonly Server[], asked: typeof ASKED, rounds: number): Promise<readonly (readonly number[])[]> {
  const times = servers.map(() => asked.map((): number[] => []));
  for (let round = 0; round < rounds + WARM; round++)
    for (const [at, [, path]] of asked.entries())
      for (const [which, server] of servers.entries()) {
        const took = await timed(server, path(server.rows));
        if (round >= WARM) times[which]?.[at]?.push(took);
      }
  return times.map((ofServer) => ofServer.map(median));
}

const servers: Server[] = [];
try {
  for (const rows of [FEW, MANY]) servers.push(await serverOf(rows));
  const [few = [], many = []] = await measure(servers, ASKED, ROUNDS);
  const baseline = many[0] ?? NaN;
  console.log(`lists: ${MANY} events and as many coincidences, ${PAGE} a page, over HTTP`);
  console.log(`  to the baseline at most ${MOST_TO_BASELINE}, growth from a tenth of the rows at most ${MOST_GROWTH}`);
  ASKED.forEach(([name], at) => {
    const [ms, before] = [many[at] ?? NaN, few[at] ?? NaN];
    console.log(
      `  ${name.padEnd(42)} ${ms.toFixed(1).padStart(6)} ms   to baseline ${(ms / baseline).toFixed(2)}   growth ${(ms / before).toFixed(2)}`,
    );
  });
  console.log('  searches, in threads of their own, 5 s at most:');
  const [searchedFew = [], searchedMany = []] = await measure(servers, SEARCHES, WARM);
  SEARCHES.forEach(([name], at) => {
    const [ms, before] = [searchedMany[at] ?? NaN, searchedFew[at] ?? NaN];
    console.log(`  ${name.padEnd(42)} ${ms.toFixed(1).padStart(6)} ms   growth ${(ms / before).toFixed(2)}`);
  });
} finally {
  for (const server of servers) await server.close();
  rmSync(folder, { recursive: true, force: true });
}
