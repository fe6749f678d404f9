import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { LIVE_CROWD_LIMIT } from '../../backend/coincidences/active-rule';
import { skewline } from '../support/command';
import { type Finding, findingsIn, findingsOf } from '../support/findings';
import { newFolder } from '../support/folder';
import { count } from '../support/ingest';
import { type History } from './history';
import { networkFile, type StreamedServer } from './streamed-server';

const LOOK_MS = 50;

/** The coincidences that a running server has found, once its searches of the stored log are done. */
export async function storedFindings(server: StreamedServer): Promise<Finding[]> {
  while (server.read((db) => count(db, "SELECT count(*) FROM jobs WHERE state = 'running'")) > 0) await sleep(LOOK_MS);
  return server.read(findingsIn);
}

/** What the batch command finds in logs of all that was tried, in the order in which it was. */
export async function batchFindings(server: StreamedServer, { attempts }: History): Promise<Finding[]> {
  const folder = newFolder('batch');
  const network = join(folder, 'network.json');
  writeFileSync(network, JSON.stringify(networkFile(server.sites.length)));
  const lines = new Map(server.sites.map(({ code }) => [code, ['sequence,reading,sigma_ns']]));
  for (const { name } of attempts) {
    const [site = '', , sequence = '', , reading = '', sigmaNs = ''] = JSON.parse(name) as string[];
    lines.get(site)?.push([sequence, reading, sigmaNs].join(','));
  }
  const logs = [...lines].map(([code, list]) => {
    const log = join(folder, `${code}.csv`);
    writeFileSync(log, `${list.join('\n')}\n`);
    return `${code}=${log}`;
  });
  const out = join(folder, 'out');
  const { code, stderr } = await skewline(['reconcile', '--network', network, '--out', out, '--limit', String(LIVE_CROWD_LIMIT), ...logs]);
  if (code !== 0) throw new Error(stderr);
  return findingsOf(out);
}
