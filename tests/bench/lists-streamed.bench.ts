import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type MeasuredServer, RATE_HZ, startMeasuredServer } from './measured-server';
import { median, percentile, ratioText } from './medians';
import { startSitesProcess } from './sites-process';
import { fillStored } from './stored-coincidences';

const ROWS = Number(process.env['ROWS'] ?? 1_000_000);
const ROUNDS = 6; // the first one warms up
const ROUND_S = 4;
const PAGE = 100;
/** Asked so often, as by a few people, so that the asking is no load of its own. */
const PAUSE_MS = 20;
const MOST_TO_IDLE = 3;

/** The lists that are asked for, in turn. */
const LISTS: readonly (readonly [name: string, query: string])[] = [
  ['by time, first page', ''],
  ['by time, last page', '&order=down'],
  ['by margin, first page', '&sort=margin'],
  ['by fold, first page', '&sort=fold'],
];

/** The times of each list, asked in turn while something goes on. */
async function askDuring({ client, networkId }: MeasuredServer, what: Promise<unknown>): Promise<readonly (readonly number[])[]> {
  const times = LISTS.map((): number[] => []);
  const going = { on: true };
  const ended = what.finally(() => (going.on = false));
  while (going.on)
    for (const [at, [, query]] of LISTS.entries()) {
      const startedMs = performance.now();
      const { status, text } = await client.get(`/networks/${networkId}/coincidences?limit=${PAGE}${query}`);
      if (status !== 200) throw new Error(`${query}: ${status} ${text}`);
      times[at]?.push(performance.now() - startedMs);
      await pause(PAUSE_MS);
    }
  await ended;
  return times;
}

const pause = (ms: number): Promise<void> => new Promise((resolve) => setTimeout(resolve, ms));

const folder = mkdtempSync(join(tmpdir(), 'skewline-lists-streamed-'));
const sites = startSitesProcess();
try {
  const server = await startMeasuredServer(folder, (db, measured) => db.$client.transaction(() => fillStored(db, measured, ROWS))());
  await sites.tell({ is: 'begin', url: server.url, keys: server.keys, cookie: '', networkId: 0, bareUrl: '' });
  const idle = LISTS.map((): number[] => []);
  const busy = LISTS.map((): number[] => []);
  const [lates, waits]: [number[], number[]] = [[], []];
  let perS = NaN;
  for (let round = 0; round < ROUNDS; round++) {
    const whileIdle = await askDuring(server, pause(ROUND_S * 1e3));
    const readLoop = await server.watchLoop();
    const pacing = sites.tell({ is: 'pace', seconds: ROUND_S, rateHz: RATE_HZ });
    const whileBusy = await askDuring(server, pacing);
    if (round === 0) continue;
    perS = (await pacing).records / ROUND_S;
    lates.push(readLoop().p99Ms);
    waits.push(...whileBusy.flat());
    LISTS.forEach((_, at) => {
      idle[at]?.push(median(whileIdle[at] ?? []));
      busy[at]?.push(median(whileBusy[at] ?? []));
    });
  }
  console.log(`lists while ${perS.toFixed(0)} triggers/s stream in: ${ROWS} events and as many coincidences, ${PAGE} a page, over HTTP`);
  LISTS.forEach(([name], at) => {
    const [ours = [], theirs = []] = [busy[at], idle[at]];
    console.log(
      `  coincidences ${name.padEnd(24)} / the same idle   ${ratioText(ours, theirs)}   at most ${MOST_TO_IDLE}   (${median(ours).toFixed(1)} and ${median(theirs).toFixed(1)} ms)`,
    );
  });
  console.log(
    `  (p99 of all while streaming ${percentile(waits, 99).toFixed(0)} ms; event loop late by ${median(lates).toFixed(1)} ms at p99)`,
  );
  await server.stop();
} finally {
  sites.end();
  rmSync(folder, { recursive: true, force: true });
}
