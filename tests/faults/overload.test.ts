import { setTimeout as sleep } from 'node:timers/promises';
import { afterEach, describe, expect, it } from 'vitest';
import { SiteClient } from '../../backend/site-client/site-client';
import { checkConservation } from '../../backend/ingest/conservation';
import { History, judge, keptIn } from './history';
import { QUICK } from './kills-and-cuts';
import { streamLoad } from './load';
import { plainRecord } from './records';
import { StreamedServer } from './streamed-server';

const { LONG } = process.env;

/** What the harmed writer takes: a group of at most 1,000 rows, and then 200 ms of nothing. */
const WRITER_PER_S = 4_000;
const TIMES_OVER = 5;
const SITES = 8;
const LINKS_OF_SITE = 5;
const OVERLOAD_MS = LONG ? 20_000 : 4_000;
const WARM_UP_MS = 3_000;
const MOST_GROWTH_BYTES = 100e6;
const MOST_RSS_BYTES = 512e6;

const CROWD = LONG ? 300 : 150;
const APART_NS = 1e7;
/** The gate lets 100 in at once and 50 a second after them. */
const MOST_BACK_MS = 40_000;

let server: StreamedServer | undefined;
afterEach(() => server?.close());

/** Every record that was acknowledged is there once, and nothing else. */
function expectNothingLost(history: History): void {
  const { lost, duplicated, unexpected, misjudged, attempted, acknowledged } = server!.read((db) => judge(history, keptIn(db)));
  expect({ lost, duplicated, unexpected, misjudged }).toEqual({ lost: [], duplicated: [], unexpected: [], misjudged: [] });
  expect(acknowledged).toBe(attempted);
  expect(server!.read(checkConservation)).toEqual([]);
}

describe('a server that is sent more than it can take', () => {
  it(`${TIMES_OVER} times, grows by 100 MB at most (heap and buffers of both threads after a collection) and loses nothing`, async () => {
    server = await StreamedServer.start({ siteCount: SITES, preload: ['planted-writer.mjs', 'measured.mjs', 'held.mjs'] });
    const history = new History();
    const links = Array.from({ length: SITES * LINKS_OF_SITE }, (_, link) => link);
    const streamAll = (first: number, perS: number, durationMs: number) =>
      Promise.all(
        links.map((link) => {
          const own = first + Math.floor(link / SITES) * 200_000;
          const load = { server: server!, history, at: link % SITES, first: own, perS: perS / links.length, durationMs, apartNs: 1e7 };
          return streamLoad(load);
        }),
      );
    await streamAll(0, WRITER_PER_S, WARM_UP_MS); // what a process takes once and keeps
    const before = server.mostHeldBytes();
    server.plant('slow');
    const overloaded = streamAll(1_000_000, WRITER_PER_S * TIMES_OVER, OVERLOAD_MS);
    await sleep(OVERLOAD_MS);
    const storedMeanwhile = server.read((db) => keptIn(db).triggers.length);
    server.clear('slow');
    const sent = (await overloaded).reduce((sum, one) => sum + one.sent, 0);
    const { mostRssBytes } = server.measured();
    const most = server.mostHeldBytes();
    console.log(
      `${sent} records sent, ${storedMeanwhile} stored while the writer was slow; held ${(before / 1e6).toFixed(0)} MB before, ${(most / 1e6).toFixed(0)} MB at most; RSS ${(mostRssBytes / 1e6).toFixed(0)} MB at most`,
    );
    expect(most - before).toBeLessThan(MOST_GROWTH_BYTES);
    expect(mostRssBytes).toBeLessThan(MOST_RSS_BYTES);
    expectNothingLost(history);
  }, 180_000);
});

describe('a server that is killed', () => {
  it(`has ${CROWD} sites back within ${MOST_BACK_MS / 1_000} s of its next start, and loses nothing`, async () => {
    server = await StreamedServer.start({ siteCount: CROWD });
    const history = new History();
    const { sites, directUrl } = server;
    const clients = sites.map(({ code, key }, at) => {
      const client = new SiteClient({
        url: directUrl,
        key,
        software: 'crowd 1',
        retry: QUICK,
        onFate: (record, fate) => history.answer(code, record, fate),
      });
      return {
        send: async (sequence: number): Promise<void> => {
          const record = plainRecord(sequence, (sequence * sites.length + at) * APART_NS); // no two are near each other
          history.attempt(code, record);
          await client.push(record);
        },
        client,
      };
    });
    await Promise.all(clients.map(({ client }) => client.welcome()));
    for (let sequence = 0; sequence < 20; sequence++) await Promise.all(clients.map(({ send }) => send(sequence)));
    await server.end('SIGKILL');
    for (let sequence = 20; sequence < 30; sequence++) await Promise.all(clients.map(({ send }) => send(sequence)));
    await server.startAgain();
    const startMs = performance.now();
    await Promise.all(clients.map(({ client }) => client.finish()));
    const backMs = performance.now() - startMs;
    console.log(`${CROWD} sites were back, with all they had, ${(backMs / 1_000).toFixed(1)} s after the start`);
    expect(backMs).toBeLessThan(MOST_BACK_MS);
    expectNothingLost(history);
  }, 180_000);
});
