import { existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { setTimeout as sleep } from 'node:timers/promises';
import { pino } from 'pino';
import { siteKeys } from '#schema/schema';
import { root } from '../../scripts/lib.mjs';
import { newSiteKey } from '../../backend/accounts/site-key-use';
import { readConfig } from '../../backend/config';
import { closeDb, openDb, type Db } from '../../backend/db';
import { makeGround } from '../../backend/make-ground';
import { Client } from '../support/client';
import { insertNetwork, insertRow } from '../support/network-rows';
import { startServer } from '../support/server';
import { signIn } from '../support/sign-in';

const AT = '2026-01-01T00:00:00.000Z';
const LOOK_MS = 250;
const START_MS = 180_000; // a million events are looked through for damage
/** All sites together, 1/s: how dense triggers lie in time. */
export const RATE_HZ = 2_000;
export const SITES = 8;
/** The light-time rule would be crowded at such a rate. */
const WINDOW_NS = 100_000;

/** Eight sites some tens of kilometres apart, each in UTC by a clock of its own. */
const networkFile = {
  network: 'Measured',
  run: { name: 'first', from: '2026-01-01T00:00:00 TAI' },
  references: [{ code: 'steady', sigma_ns: 4 }],
  clocks: Array.from({ length: SITES }, (_, at) => ({
    code: `c${at + 1}`,
    segments: [
      {
        from: '2026-01-01T00:00:00 TAI',
        offset_ns: 40 * at,
        offset_sigma_ns: 5,
        rate_ns_per_day: 1,
        rate_sigma_ns_per_day: 0.1,
        reference: 'steady',
      },
    ],
  })),
  sites: Array.from({ length: SITES }, (_, at) => ({
    code: `S${at + 1}`,
    scale: 'UTC',
    clock: `c${at + 1}`,
    reading_sigma_ns: 20,
    delay_ns: 100,
    delay_sigma_ns: 1,
    position_sigma_m: 0.1,
    position: { geodetic: { latitude_deg: 46 + 0.3 * (at % 3), longitude_deg: 7 + 0.4 * Math.floor(at / 3), height_m: 500 } },
  })),
  rule: { code: 'fixed2', minimum_fold: 2, sigmas: 3, window: { kind: 'fixed', width_ns: WINDOW_NS, frame: 'geocentric' } },
};

/** A rule of at least two sites within a window. */
function insertRule(db: Db, networkId: number): number {
  const ruleId = insertRow(db, 'rules', { network_id: networkId, code: networkFile.rule.code, name: '', is_active: 1, created_at: AT });
  return insertRow(db, 'rule_versions', {
    rule_id: ruleId,
    number: 1,
    minimum_fold: networkFile.rule.minimum_fold,
    sigmas: networkFile.rule.sigmas,
    window_kind: 'fixed',
    width_ns: WINDOW_NS,
    created_at: AT,
  });
}

/** How late the event loop of the HTTP thread was, and how much memory the process has. */
export interface LoopDelay {
  readonly p99Ms: number;
  readonly mostMs: number;
  readonly rssMB: number;
}

/** A network in the database of a measured server. */
export interface Measured {
  readonly networkId: number;
  readonly versionId: number;
  readonly siteIds: readonly number[];
}

/** The built server as a process of its own, with a network of eight sites, their keys, and an analyst who is signed in. */
export interface MeasuredServer extends Measured {
  readonly dataDir: string;
  readonly url: string;
  readonly keys: readonly string[];
  readonly client: Client;
  /** Begins to look at the event loop; what comes back reads it. */
  readonly watchLoop: () => Promise<() => LoopDelay>;
  readonly stop: () => Promise<void>;
}

/**
 * Makes the database and starts the server.
 *
 * @param folder an empty one
 * @param prepare what else is to be in the database, and whatever wants it as it is before the server begins
 */
export async function startMeasuredServer(
  folder: string,
  prepare: (db: Db, measured: Measured) => void = () => undefined,
): Promise<MeasuredServer> {
  const dataDir = join(folder, 'data');
  mkdirSync(dataDir, { recursive: true });
  const config = readConfig({ DATA_DIR: dataDir, NODE_ENV: 'test' });
  if (!config.ok) throw new Error(config.problem.text);
  const db = openDb(dataDir);
  const { networkId, siteIds: byCode } = insertNetwork(db, networkFile);
  const measured = { networkId, versionId: insertRule(db, networkId), siteIds: [...byCode.values()] };
  const keys = measured.siteIds.map((siteId) => {
    const { key, prefix, hash } = newSiteKey();
    db.insert(siteKeys).values({ siteId, label: 'bench', prefix, hash, createdAt: AT }).run();
    return key;
  });
  prepare(db, measured);
  const made = await makeGround({ config: config.value, db, log: pino({ level: 'silent' }), version: '0', port: 0, nowMs: Date.now });
  if (!made.ok) throw new Error(made.problem.text);
  const { cookies } = signIn({ ground: made.value.ground, url: '' }, [{ role: 'analyst', networkId, siteId: null }]);
  await made.value.leave();
  closeDb(db);
  const delayFile = join(folder, 'loop-delay.json');
  const loader = pathToFileURL(join(root, 'tests/bench/loop-delay.mjs')).href;
  const server = await startServer(
    {
      DATA_DIR: dataDir,
      LOG_LEVEL: 'error',
      LOOP_DELAY: delayFile,
      NODE_OPTIONS: `--import ${loader} ${process.env['SERVER_OPTIONS'] ?? ''}`,
    },
    START_MS,
  );
  const url = server.url.replace(/\/$/, '');
  const client = new Client(url);
  for (const [name, value] of cookies) client.cookies.set(name, value);
  return {
    ...measured,
    dataDir,
    url,
    keys,
    client,
    watchLoop: async () => {
      rmSync(delayFile, { force: true });
      while (!existsSync(delayFile)) await sleep(LOOK_MS);
      return () => JSON.parse(readFileSync(delayFile, 'utf8')) as LoopDelay;
    },
    stop: async () => {
      const { code, stderr } = await server.stop();
      if (code !== 0 || stderr !== '') throw new Error(`the server ended with ${code ?? 'a signal'}: ${stderr}`);
    },
  };
}
