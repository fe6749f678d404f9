import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import Database from 'better-sqlite3';
import { drizzle } from 'drizzle-orm/better-sqlite3';
import { beforeAll, describe, expect, it } from 'vitest';
import * as schema from '#schema/schema';
import { checkRowHashes } from '../../backend/checks/row-hashes';
import { databaseFile, type Db } from '../../backend/db';
import { newFolder } from '../support/folder';
import { Disk } from './power-cut-disk';
import { recordWriter } from './power-cut-recorded';
import { dice } from './records';

const LONG = process.env['LONG'] !== undefined;
const FLIPS = LONG ? 200 : 20;
/** Bits that are tried for each that alters something: much of a page is room to spare. */
const MOST_TRIES = 20;
const BATCHES = LONG ? 40 : 15;
const SEED = Number(process.env['SEED'] ?? 20260303);
const TEST_MS = LONG ? 1_800_000 : 300_000;

/** The tables of records and results, and those columns of theirs that no hash is over. */
const TABLES: Readonly<Record<string, readonly string[]>> = {
  triggers: ['received_at_ms', 'variant', 'mended_from_id', 'intake_id'],
  events: [],
  event_versions: ['ended_change'],
  coincidences: ['network_id', 'state', 'expected_by_chance', 'touches_gap', 'since_change', 'ended_change', 'job_id'],
  members: [],
  pairs: [],
};

/** What is read of the tables, so far as a hash is over it. */
function contentOf(client: Database.Database): string {
  return Object.entries(TABLES)
    .map(([table, unhashed]) => {
      const columns = client.prepare<[string], string>('SELECT name FROM pragma_table_info(?)').pluck().all(table);
      const hashed = columns.filter((name) => !unhashed.includes(name)).map((name) => `"${name}"`);
      return JSON.stringify(
        client
          .prepare(`SELECT ${hashed.join(', ')} FROM "${table}" NOT INDEXED`)
          .raw()
          .all(),
      );
    })
    .join('\n');
}

/** Who finds what is wrong with a file: its own check, the hashes, or nobody; undefined where nothing that a hash is over is altered. */
function finderOf(file: string, content: string): 'integrity_check' | 'hashes' | 'nobody' | undefined {
  const client = new Database(file, { readonly: true });
  try {
    if (client.pragma('integrity_check', { simple: true }) !== 'ok') return 'integrity_check';
    const db: Db = drizzle(client, { schema });
    for (const { faults } of checkRowHashes(db)) if (faults.length > 0) return 'hashes';
    return contentOf(client) === content ? undefined : 'nobody';
  } catch (fault) {
    if (fault instanceof Database.SqliteError && /^SQLITE_(?:CORRUPT|NOTADB|IOERR)/.test(fault.code)) return 'integrity_check';
    throw fault;
  } finally {
    client.close();
  }
}

describe('a flipped bit', () => {
  let file: string;
  let content: string;
  let pages: readonly number[];
  let pageBytes: number;
  beforeAll(() => {
    const { calls } = recordWriter({ batches: BATCHES, seed: SEED });
    const disk = new Disk();
    for (const call of calls) disk.take(call);
    const folder = newFolder('disk-bits');
    file = databaseFile(folder);
    writeFileSync(file, disk.after('everything', dice(1)).get('skewline.sqlite') ?? '');
    const client = new Database(file);
    client.pragma('journal_mode = DELETE');
    const names = Object.keys(TABLES);
    pages = client
      .prepare<string[], number>(
        `SELECT pageno FROM dbstat WHERE name IN (SELECT name FROM sqlite_schema WHERE tbl_name IN (${names.map(() => '?').join(', ')})) ORDER BY pageno`,
      )
      .pluck()
      .all(...names);
    pageBytes = client.pragma('page_size', { simple: true }) as number;
    content = contentOf(client);
    client.close();
  }, TEST_MS);

  it('is looked for in a database with rows of every table, in which nothing is wrong', () => {
    const client = new Database(file, { readonly: true });
    const counts = Object.keys(TABLES).map((table) => client.prepare<[], number>(`SELECT count(*) FROM ${table}`).pluck().get() ?? 0);
    expect(Math.min(...counts)).toBeGreaterThan(5);
    const steps = [...checkRowHashes(drizzle(client, { schema }), 7)];
    expect(steps.flatMap(({ faults }) => faults)).toEqual([]);
    expect(Math.max(...steps.map(({ rows }) => rows))).toBe(7);
    const checked = (table: string): number => steps.reduce((sum, step) => sum + (step.table === table ? step.rows : 0), 0);
    expect(['triggers', 'events', 'event_versions', 'coincidences'].map(checked)).toEqual(counts.slice(0, 4));
    client.close();
  });

  it(
    "in what was sent or what came of it is found by the file's own check or named by the hashes, and by the former alone it is not",
    () => {
      const roll = dice(SEED);
      const sound = readFileSync(file);
      const copy = join(newFolder('disk-bit'), 'copy.sqlite');
      const found = { integrity_check: 0, hashes: 0, nobody: 0, nothing: 0 };
      const missed: string[] = [];
      for (let tries = 0; found.integrity_check + found.hashes + found.nobody < FLIPS && tries < MOST_TRIES * FLIPS; tries++) {
        const page = pages[Math.floor(roll() * pages.length)]!;
        const at = (page - 1) * pageBytes + Math.floor(roll() * pageBytes);
        const bit = Math.floor(roll() * 8);
        const flipped = Buffer.from(sound);
        flipped[at] = flipped[at]! ^ (1 << bit);
        writeFileSync(copy, flipped);
        const finder = finderOf(copy, content);
        found[finder ?? 'nothing']++;
        if (finder === 'nobody') missed.push(`SEED=${SEED}: bit ${bit} of byte ${at} (page ${page})`);
      }
      console.info(
        `bits found by integrity_check ${found.integrity_check}, by hashes ${found.hashes}; altered nothing hashed ${found.nothing}`,
      );
      expect(missed).toEqual([]);
      expect(found.integrity_check + found.hashes).toBe(FLIPS);
      expect(found.hashes).toBeGreaterThan(0);
    },
    TEST_MS,
  );
});
