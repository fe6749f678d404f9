import { afterEach, expect, it } from 'vitest';
import { checkConservation } from '../../backend/ingest/conservation';
import { History, judge, keptIn } from '../faults/history';
import { percentile, streamLoad } from '../faults/load';
import { StreamedServer } from '../faults/streamed-server';

const SITES = 8;
const PER_S_OF_SITE = 1_250;
const DURATION_MS = 20_000;
/** A trigger of each site every 10 ms of its own clock, 1.25 ms from the next site's: coincidences are few, as in a network at rest. */
const APART_NS = 1e7;

let server: StreamedServer | undefined;
afterEach(() => server?.close());

it(`${SITES} sites of ${PER_S_OF_SITE} records a second for ${DURATION_MS / 1_000} s lose nothing`, async () => {
  server = await StreamedServer.start({ siteCount: SITES, preload: ['measured.mjs'] });
  const history = new History();
  const load = { server, history, first: 0, perS: PER_S_OF_SITE, durationMs: DURATION_MS, apartNs: APART_NS };
  const loaded = await Promise.all(server.sites.map((_, at) => streamLoad({ ...load, at })));
  const { lateP99Ms, mostRssBytes } = server.measured();
  const answeredMs = loaded.flatMap((one) => one.answeredMs);
  const sent = loaded.reduce((sum, one) => sum + one.sent, 0);
  console.log(
    `${sent} records: acknowledged within ${percentile(answeredMs, 50).toFixed(0)} ms (median) and ${percentile(answeredMs, 99).toFixed(0)} ms (99 of 100); event loop ${lateP99Ms.toFixed(1)} ms late (99 of 100); RSS ${(mostRssBytes / 1e6).toFixed(0)} MB at most`,
  );
  const { lost, duplicated, unexpected, misjudged, acknowledged, attempted } = server.read((db) => judge(history, keptIn(db)));
  expect({ lost, duplicated, unexpected, misjudged }).toEqual({ lost: [], duplicated: [], unexpected: [], misjudged: [] });
  expect(acknowledged).toBe(attempted);
  expect(server.read(checkConservation)).toEqual([]);
});
