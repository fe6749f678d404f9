import { fork } from 'node:child_process';
import { mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { median, percentile, ratioText } from './medians';
import { RATE_HZ, startMeasuredServer } from './measured-server';
import { databaseFile } from '../../backend/db';
import { plainInserts } from './plain-inserts';
import { startSitesProcess } from './sites-process';

const BURST_RECORDS = Number(process.env['RECORDS'] ?? 48_000);
const BURSTS = 6; // the first one warms up
const PACES = 6;
const PACE_S = 4;
const BARE_PER_S = 200;

/** To better-sqlite3 alone, which neither parses, hashes, counts nor searches. */
const LEAST_TO_INSERTS = 0.5;
/** To a bare round trip with a commit. */
const MOST_TO_BARE = 3;

const folder = mkdtempSync(join(tmpdir(), 'skewline-stream-'));
const sites = startSitesProcess();
const bareAsker = startSitesProcess();
const bareServer = fork(join(import.meta.dirname, 'bare-server.bench.js'), [join(folder, 'bare.sqlite')]);
try {
  const bareUrl = await new Promise<string>((resolve) => bareServer.once('message', (url) => resolve(url as string)));
  const server = await startMeasuredServer(folder, (db) => {
    mkdirSync(join(folder, 'plain'));
    db.$client.exec(`VACUUM INTO '${databaseFile(join(folder, 'plain'))}'`);
  });
  const cookie = [...server.client.cookies].map(([name, value]) => `${name}=${value}`).join('; ');
  const begin = { is: 'begin', url: server.url, keys: server.keys, cookie, networkId: 0, bareUrl } as const;
  await sites.tell(begin);
  await bareAsker.tell(begin);

  const plain = plainInserts(server.dataDir, join(folder, 'plain'));
  const [ours, theirs, acknowledged, lates]: [number[], number[], number[], number[]] = [[], [], [], []];
  let perGroup = NaN;
  for (let burst = 0; burst < BURSTS; burst++) {
    const readLoop = await server.watchLoop();
    const { records, seconds, acknowledgedMs } = await sites.tell({ is: 'burst', records: BURST_RECORDS, rateHz: RATE_HZ });
    const { p99Ms } = readLoop();
    const inserted = plain.insertNew();
    if (inserted.records !== records) throw new Error(`${inserted.records} of ${records} records were stored`);
    if (burst === 0) continue;
    perGroup = inserted.perGroup;
    ours.push(records / seconds);
    theirs.push(inserted.records / inserted.seconds);
    acknowledged.push(...acknowledgedMs);
    lates.push(p99Ms);
  }
  plain.close();
  console.log(`stream: ${BURST_RECORDS} records at a time of 8 sites, ${RATE_HZ} triggers a second by their own time, a window of 100 us`);
  console.log(`  records/s / better-sqlite3 inserts of the same rows (FULL)   ${ratioText(ours, theirs)}   at least ${LEAST_TO_INSERTS}`);
  console.log(
    `  (${median(ours).toFixed(0)} and ${median(theirs).toFixed(0)} records/s, in groups of ${perGroup}; acknowledged after ${median(acknowledged).toFixed(0)} ms, p99 ${percentile(acknowledged, 99).toFixed(0)} ms;`,
  );
  console.log(
    `   event loop of the HTTP thread late by ${median(lates).toFixed(1)} ms at p99, ${Math.max(...lates).toFixed(1)} ms in the worst burst)`,
  );

  await sites.tell({ is: 'begin', url: server.url, keys: server.keys, cookie, networkId: server.networkId, bareUrl: '' });
  const [medians, p99s, bareMedians, bareP99s]: [number[], number[], number[], number[]] = [[], [], [], []];
  const [besideMedians, besideP99s]: [number[], number[]] = [[], []];
  const [paceLates, paceAcknowledged, perS]: [number[], number[], number[]] = [[], [], []];
  let cut = 0;
  for (let pace = 0; pace < PACES; pace++) {
    const readLoop = await server.watchLoop();
    // The bare server is asked meanwhile, from a process of its own, and once more when all is quiet.
    const besideBare = bareAsker.tell({ is: 'bare', seconds: PACE_S, perS: BARE_PER_S });
    const { seenMs, acknowledgedMs, records, cuts } = await sites.tell({ is: 'pace', seconds: PACE_S, rateHz: RATE_HZ });
    const { p99Ms } = readLoop();
    const beside = await besideBare;
    const bare = await sites.tell({ is: 'bare', seconds: PACE_S, perS: BARE_PER_S });
    if (pace === 0) continue;
    cut += cuts;
    medians.push(median(seenMs));
    p99s.push(percentile(seenMs, 99));
    besideMedians.push(median(beside.seenMs));
    besideP99s.push(percentile(beside.seenMs, 99));
    bareMedians.push(median(bare.seenMs));
    bareP99s.push(percentile(bare.seenMs, 99));
    paceLates.push(p99Ms);
    paceAcknowledged.push(median(acknowledgedMs));
    perS.push(records / PACE_S, seenMs.length / PACE_S);
  }
  console.log(`live: from a trigger's sending to its coincidence at a browser, ${RATE_HZ} triggers/s`);
  const bareWords = 'of a bare round trip with a commit';
  console.log(`  median / median ${bareWords} meanwhile   ${ratioText(medians, besideMedians)}   at most ${MOST_TO_BARE}`);
  console.log(`  p99 / p99 ${bareWords} meanwhile         ${ratioText(p99s, besideP99s)}   at most ${MOST_TO_BARE}`);
  console.log(`  median / median ${bareWords} alone       ${ratioText(medians, bareMedians)}`);
  console.log(`  p99 / p99 ${bareWords} alone             ${ratioText(p99s, bareP99s)}`);
  console.log(
    `  (${median(medians).toFixed(1)}, ${median(besideMedians).toFixed(1)} and ${median(bareMedians).toFixed(1)} ms, p99 ${median(p99s).toFixed(1)}, ${median(besideP99s).toFixed(1)} and ${median(bareP99s).toFixed(1)} ms; acknowledged after ${median(paceAcknowledged).toFixed(1)} ms;`,
  );
  console.log(
    `   event loop late by ${median(paceLates).toFixed(1)} ms at p99; ${perS.slice(-2).map(Math.round).join(' triggers and ')} coincidences/s; ${cut} messages too late to tell them)`,
  );
  await server.stop();
} finally {
  sites.end();
  bareAsker.end();
  bareServer.kill();
  rmSync(folder, { recursive: true, force: true });
}
