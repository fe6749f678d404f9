import { setTimeout as sleep } from 'node:timers/promises';
import { afterEach, expect, it } from 'vitest';
import { checkConservation } from '../../backend/ingest/conservation';
import { History, judge, keptIn } from './history';
import { streamSite } from './kills-and-cuts';
import { StreamedServer } from './streamed-server';

const END_MS = 5_000; // what whoever stops the server may count on
const STREAM_MS = 1_500;

let server: StreamedServer | undefined;
afterEach(() => server?.close());

it('the server ends within 5 s of SIGTERM while sites stream, keeps what it acknowledged, and the sites go on after its next start', async () => {
  server = await StreamedServer.start();
  const history = new History();
  const streaming = new AbortController();
  const streams = server.sites.map((_, at) => streamSite({ server: server!, history, seed: 1, at, signal: streaming.signal }));
  await sleep(STREAM_MS);
  const startMs = performance.now();
  const { code, stderr } = await server.end('SIGTERM');
  const tookMs = performance.now() - startMs;
  expect([code, stderr]).toEqual([0, '']);
  expect(tookMs).toBeLessThan(END_MS);
  const before = server.read((db) => judge(history, keptIn(db)));
  expect(before.acknowledged).toBeGreaterThan(0);
  expect(before.lost).toEqual([]);
  await server.startAgain();
  await sleep(STREAM_MS);
  streaming.abort();
  await Promise.all(streams);
  const { lost, duplicated, unexpected, misjudged, acknowledged, attempted } = server.read((db) => judge(history, keptIn(db)));
  expect({ lost, duplicated, unexpected, misjudged }).toEqual({ lost: [], duplicated: [], unexpected: [], misjudged: [] });
  expect(acknowledged).toBe(attempted);
  expect(attempted).toBeGreaterThan(before.acknowledged);
  expect(server.read(checkConservation)).toEqual([]);
}, 60_000);
