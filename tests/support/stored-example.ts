import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { type Ingest, openIngest } from '../../backend/ingest/ingest';
import { root } from '../../scripts/lib.mjs';
import { type RunningApp } from './app';
import { recordsOfLog } from './ingest';
import { insertNetwork, type NetworkRows } from './network-rows';

/** The folder of the example that is stored. */
export const CAIRNWAY = join(root, 'examples', 'cairnway');

/** Its logs but the live one, with the site of the one that does not name it. */
export const CAIRNWAY_LOGS: readonly (readonly [site: string | undefined, path: string])[] = [
  ...['KNF', 'CND', 'FRZ', 'BRW', 'TDW'].map((code) => [undefined, join(CAIRNWAY, 'logs', `${code}.csv`)] as const),
  ['OXB', join(CAIRNWAY, 'shaft.csv')],
];

/** The example's network, and what took its records. */
export interface StoredExample extends NetworkRows {
  readonly ingest: Ingest;
}

/** Puts the example's network and, through the ingest, its records into the database of a running server. */
export async function storeCairnway({ ground: { db, nowMs, log } }: Pick<RunningApp, 'ground'>): Promise<StoredExample> {
  const network = insertNetwork(db, JSON.parse(readFileSync(join(CAIRNWAY, 'network.json'), 'utf8')));
  const listener = { onStored: () => undefined, onInForce: () => undefined };
  const ingest = openIngest({ db, log, nowMs, listener, fatal: () => undefined });
  for (const [ofSite, path] of CAIRNWAY_LOGS)
    for (const [site, record] of recordsOfLog(path, ofSite)) {
      const siteId = network.siteIds.get(site);
      if (siteId !== undefined) void ingest.batch(siteId, [record]);
    }
  await ingest.whenIdle();
  return { ...network, ingest };
}

/** Ids of the events that stand, by their names. */
export function eventIdsOf({ ground: { db } }: RunningApp): ReadonlyMap<string, number> {
  const names = db.$client.prepare<[], { id: number; name: string }>(
    `SELECT t.id, s.code || ':' || iif(t.series = '', '', t.series || ':') || t.sequence AS name FROM events e JOIN triggers t ON t.id = e.trigger_id
     JOIN sites s ON s.id = t.site_id`,
  );
  return new Map(names.all().map(({ id, name }) => [name, id]));
}
