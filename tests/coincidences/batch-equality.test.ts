import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { type SiteRecord } from '#shared/contract/site-record';
import { activeRules, LIVE_CROWD_LIMIT } from '../../backend/coincidences/active-rule';
import { CoincidenceSearch } from '../../backend/coincidences/coincidence-search';
import { LogSearches } from '../../backend/coincidences/log-search';
import { reconcileFiles } from '../../backend/command/reconcile-command';
import { type Db } from '../../backend/db';
import { root } from '../../scripts/lib.mjs';
import { newFolder } from '../support/folder';
import { type IngestAtWork, newIngest, recordsOfLog } from '../support/ingest';
import { insertRow } from '../support/network-rows';
import { type Row, rowsOf } from '../support/results';

const FOLDER = join(root, 'examples', 'cairnway');
const LOGS = ['KNF', 'CND', 'FRZ', 'BRW', 'TDW'].map((code) => `logs/${code}.csv`);
const AT = '2026-03-01T00:00:00.000Z';

/** Records that wait together, and are stored by one commit. */
const AT_ONCE = 25;

interface RuleFile {
  readonly rule: { code: string; minimum_fold?: number; sigmas?: number; window: { speed_c?: number; margin_ns?: number } };
}

async function batchTables(): Promise<{ coincidences: readonly Row[]; pairs: readonly Row[] }> {
  const out = join(newFolder('batch'), 'out');
  const progress = { begin: () => undefined, at: () => undefined, end: () => undefined };
  const context = { signal: new AbortController().signal, progress, say: () => undefined };
  const logs = [...LOGS.map((log) => join(FOLDER, log)), `OXB=${join(FOLDER, 'shaft.csv')}`];
  await reconcileFiles({ network: join(FOLDER, 'network.json'), out, logs, limit: LIVE_CROWD_LIMIT }, context);
  const table = (name: string): readonly Row[] => rowsOf(readFileSync(join(out, name), 'utf8'));
  return { coincidences: table('coincidences.csv'), pairs: table('pairs.csv') };
}

/** Ingest and search over a database of its own, as the writer thread has them. */
function atWork({ isTold = true } = {}): { at: IngestAtWork; search: CoincidenceSearch } {
  const file = JSON.parse(readFileSync(join(FOLDER, 'network.json'), 'utf8')) as RuleFile;
  const later: { search?: CoincidenceSearch } = {};
  const at = newIngest(file, {
    onStored: (stored) => {
      if (isTold) later.search!.onStored(stored);
    },
    onInForce: (network) => {
      later.search!.onInForce(network);
    },
  });
  const { code, minimum_fold = 2, sigmas = 3, window } = file.rule;
  const ruleId = insertRow(at.db, 'rules', { network_id: at.network.networkId, code, name: '', is_active: 1, created_at: AT });
  insertRow(at.db, 'rule_versions', {
    rule_id: ruleId,
    number: 1,
    minimum_fold,
    sigmas,
    window_kind: 'light-time',
    speed_c: window.speed_c ?? 1,
    margin_ns: window.margin_ns ?? 0,
    created_at: AT,
  });
  const search = new CoincidenceSearch({ db: at.db, nowMs: () => 0, networkOf: (id) => at.ingest.network(id) });
  later.search = search;
  if (isTold) search.start(at.network.networkId);
  return { at, search };
}

const records = (): (readonly [string, SiteRecord])[] =>
  [...LOGS.map((log) => [undefined, log] as const), ['OXB', 'shaft.csv'] as const]
    .flatMap(([site, log]) => recordsOfLog(join(FOLDER, log), site))
    .filter(([site]) => site !== '');

/** The same order each time, unlike any that a site would send in. */
const shuffled = <T>(list: readonly T[]): T[] => {
  let state = 1;
  return list
    .map((item) => ({ item, key: (state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0) }))
    .sort((a, b) => a.key - b.key)
    .map(({ item }) => item);
};

const ORDERS: Readonly<Record<string, (list: (readonly [string, SiteRecord])[]) => (readonly [string, SiteRecord])[]>> = {
  'site by site': (list) => list,
  'the last ones first': (list) => list.toReversed(),
  'in no order': shuffled,
};

const SETS = `SELECT c.id, substr(c.set_hash, 1, 12) AS name, c.fold, c.span_ns AS spanNs, c.state FROM coincidences c WHERE c.is_current = 1 ORDER BY name`;
const PAIRS = `SELECT p.* FROM pairs p WHERE p.coincidence_id = ? ORDER BY p.a, p.b`;

const setsIn = (db: Db) => db.$client.prepare<[], { id: number; name: string; fold: number; spanNs: number; state: string }>(SETS).all();

describe('the coincidences of the records of an example', () => {
  it.each(Object.keys(ORDERS))('are those of the batch command with their pairs, bit for bit, when records come %s', async (order) => {
    const { coincidences, pairs } = await batchTables();
    const { at, search } = atWork();
    const sent = ORDERS[order]!(records()).filter(([site]) => at.network.siteIds.has(site));
    for (let k = 0; k < sent.length; k += AT_ONCE) await Promise.all(sent.slice(k, k + AT_ONCE).map(([site, one]) => at.send(site, one)));
    while (search.step());
    const sets = setsIn(at.db);
    expect(sets.length).toBeGreaterThan(5);
    const byName = coincidences.toSorted((a, b) => (a['set']! < b['set']! ? -1 : 1));
    expect(sets.map(({ name, fold, spanNs }) => [name, fold, spanNs])).toEqual(
      byName.map((row) => [row['set'], Number(row['fold']), Number(row['span_ns'])]),
    );
    const number = (text: string | undefined): number | null => (text === undefined || text === '' ? null : Number(text));
    for (const { id, name } of sets) {
      const ours = at.db.$client.prepare<[number], Record<string, number | string | null>>(PAIRS).all(id);
      const theirs = pairs.filter((row) => row['set'] === name);
      expect(
        ours.map((p) => [
          ...[
            p['dt_ns'],
            p['distance_m'],
            p['sigma_dt_ns'],
            p['sigma_gap_ns'],
            p['margin_sigma'],
            p['reverse_margin_sigma'],
            p['interval_m2'],
          ],
          ...[p['class'], p['proper_time_s'] ?? p['proper_distance_m'], p['turning_speed_c'], p['turning_sigma_c']],
          ...[p['toward_x'], p['toward_y'], p['toward_z']],
        ]),
      ).toEqual(
        theirs.map((row) => [
          ...['dt_ns', 'distance_m', 'sigma_dt_ns', 'sigma_gap_ns', 'margin_sigma', 'reverse_margin_sigma', 'interval_m2'].map((c) =>
            number(row[c]),
          ),
          row['class'],
          ...['proper', 'turning_speed', 'turning_sigma', 'toward_x', 'toward_y', 'toward_z'].map((c) => number(row[c])),
        ]),
      );
    }
    at.close();
  });

  it('are found by steps, and not before a start ends, when the process ended before it had searched any of them', async () => {
    const { at } = atWork({ isTold: false });
    for (const [site, one] of records().filter(([site]) => at.network.siteIds.has(site))) await at.send(site, one);
    // As after a kill between the beginning of the search of the log and the note of what has been searched.
    for (const active of activeRules(at.db, at.network.networkId)) new LogSearches(at.db, () => 0).begin(at.network.networkId, active, 0);
    const search = new CoincidenceSearch({ db: at.db, nowMs: () => 0, networkOf: (id) => at.ingest.network(id) });
    search.start(at.network.networkId);
    expect(setsIn(at.db)).toEqual([]);
    while (search.step());
    const { coincidences } = await batchTables();
    expect(setsIn(at.db).map(({ name }) => name)).toEqual(coincidences.map((row) => row['set']).toSorted());
    at.close();
  });
});
