import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDb, openDb, type Db } from '../../backend/db';
import { fillCoincidences, fillEvents, fillGround, fillTheRest } from './filled';
import { HOT_QUERIES, type HotQuery } from './hot-queries';

/**
 * Without ANALYZE, which the product never runs, SQLite plans by the schema alone, so the plans of the usual run are those of the long one.
 */
const ROWS = process.env['LONG'] ? 1_000_000 : 20_000;
const MOST_FILL_MS = 600_000;

let folder: string;
let db: Db;
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'skewline-plans-'));
  db = openDb(folder);
  const client = db.$client;
  client.transaction(() => {
    fillGround(client);
    fillEvents(client, ROWS);
    fillCoincidences(client, ROWS);
    fillTheRest(client, ROWS);
  })();
}, MOST_FILL_MS);
afterAll(() => {
  closeDb(db);
  rmSync(folder, { recursive: true });
});

/** The lines of a plan. */
const planOf = ({ sql, values }: Pick<HotQuery, 'sql' | 'values'>): string[] =>
  db.$client
    .prepare<unknown[], { detail: string }>(`EXPLAIN QUERY PLAN ${sql}`)
    .all(...values)
    .map(({ detail }) => detail);

/** What each table is searched by, or the plan's line where it is not searched by an index. */
const indexesOf = (plan: readonly string[]): string[] =>
  plan.map(
    (line) =>
      /^SEARCH \w+ (?:EXISTS )?USING (?:COVERING )?(?:INDEX (\w+)|(?:INTEGER )?(PRIMARY KEY)) /.exec(line)?.slice(1).find(Boolean) ?? line,
  );

describe(`over ${ROWS} rows of each`, () => {
  it.each(HOT_QUERIES.map((hot) => [hot.serves, hot] as const))('%s', (_serves, hot) => {
    expect(indexesOf(planOf(hot))).toEqual(hot.indexes);
    expect(() => db.$client.prepare(hot.sql).all(...hot.values)).not.toThrow();
  });

  it.each([
    ['reads a whole table', 'SELECT trigger_id FROM events WHERE sigma_ns > 1', 'SCAN events'],
    ['sorts by itself', 'SELECT trigger_id FROM events WHERE network_id = 1 ORDER BY sigma_ns', 'USE TEMP B-TREE FOR ORDER BY'],
  ])('a query that %s is told from these', (_what, sql, line) => {
    expect(indexesOf(planOf({ sql, values: [] }))).toContain(line);
  });
});

/** Indexes that are no UNIQUE and serve no hot query would cost at each insert for nothing; these serve what runs seldom or is small. */
const SERVES_WHAT_IS_SMALL = [
  'access_tokens_of_person',
  'attachments_of_candidate',
  'attachments_of_file',
  'audit_action',
  'audit_actor',
  'chance_estimates_of_rule',
  'claims_of_candidate',
  'clock_fits_of_clock',
  'coincidence_alerts_of_network',
  'coincidence_alerts_of_person',
  'coincidences_by_chance', // until chance is estimated, nothing is sorted by it
  'ephemerides_of_site',
  'failed_attempts_last_at',
  'intakes_of_file',
  'intakes_of_network',
  'intakes_of_site',
  'live_spans_of_intake',
  'mailed_tokens_person',
  'out_of_dates_of_snapshot',
  'recovery_codes_of_person',
  'refresh_tokens_session',
  'roles_network',
  'roles_person',
  'roles_site',
  'rule_exclusions_of_rule',
  'second_factors_of_person',
  'sessions_expiry',
  'sessions_person',
  'signatures_of_candidate',
  'signatures_of_person',
  'site_connections_of_site',
  'site_keys_site',
  'webhook_deliveries_of_webhook',
  'webhooks_of_network',
];

describe('every index', () => {
  it('is unique, serves a hot query, or is on the list of those that serve what is small', () => {
    const made = db.$client
      .prepare<[], { name: string }>(
        `SELECT i.name FROM sqlite_schema t JOIN pragma_index_list(t.name) i WHERE t.type = 'table' AND i."unique" = 0 ORDER BY i.name`,
      )
      .all()
      .map(({ name }) => name);
    const served = new Set(HOT_QUERIES.flatMap(({ indexes }) => indexes.map((line) => line.replace(/^.* /, ''))));
    expect(
      made.filter((name) => !served.has(name)),
      'add the query of an index to hot-queries.ts, or its name to SERVES_WHAT_IS_SMALL above, in the order of the alphabet',
    ).toEqual(SERVES_WHAT_IS_SMALL);
  });
});
