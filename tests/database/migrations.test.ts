import { copyFileSync, existsSync, mkdirSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import Database from 'better-sqlite3';
import { drizzle } from 'drizzle-orm/better-sqlite3';
import { migrate } from 'drizzle-orm/better-sqlite3/migrator';
import { readMigrationFiles } from 'drizzle-orm/migrator';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { appliedMigrations, closeDb, databaseFile, openDb } from '../../backend/db';
import { migrationsFolder } from '../../backend/paths';

const FIRST = readFileSync(join(import.meta.dirname, 'frozen', 'first.sql'), 'utf8');
const ROW = { row: 1, id: '0b6f3c0e-5a44-4c39-9d53-2f3f7a1d9c11', created_at: '2026-11-02T08:00:00.000Z', created_with: '0.1.0' };
/** Restarts are tried from every so many crashes; from each one in the long run. */
const RESTART_EVERY = process.env['LONG'] ? 1 : 40;
/** So few that a migration's pages do not stay in memory: a crash finds them in the log. */
const FEW_PAGES = 10;
const LONG_MS = 600_000;

let folder: string;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'skewline-migrations-'));
});
afterEach(() => {
  rmSync(folder, { recursive: true });
});

/** A data folder with a database of the first schema. */
function firstDatabase(name: string): string {
  const dataDir = join(folder, name);
  mkdirSync(dataDir);
  const client = new Database(databaseFile(dataDir));
  client.pragma('journal_mode = WAL');
  client.exec(FIRST);
  client.close();
  return dataDir;
}

/** Everything that a schema is, and how far it has been migrated. */
function stateOf(dataDir: string): string {
  const client = new Database(databaseFile(dataDir));
  const made = client.prepare('SELECT type, name, sql FROM sqlite_schema ORDER BY type, name').all();
  const state = JSON.stringify({ made, applied: appliedMigrations(client), rows: client.prepare('SELECT * FROM deployment').all() });
  client.close();
  return state;
}

/** The files of a database as a killed process leaves them. */
function crashed(dataDir: string, name: string): string {
  const image = join(folder, name);
  mkdirSync(image);
  const file = databaseFile(dataDir);
  for (const end of ['', '-wal']) if (existsSync(file + end)) copyFileSync(file + end, databaseFile(image) + end);
  return image;
}

/** Whether a crash left the schema as it was before the migrations, as it is after them, or neither. */
type Left = 'before' | 'after' | 'between';

describe('a database of the first schema', () => {
  it('is what the first migration still makes', () => {
    const dataDir = firstDatabase('frozen');
    const frozen = new Database(databaseFile(dataDir));
    const [first] = readMigrationFiles({ migrationsFolder });
    const now = new Database(':memory:');
    for (const statement of first!.sql) now.exec(statement);
    const table = "SELECT sql FROM sqlite_schema WHERE name = 'deployment'";
    expect(now.prepare(table).get()).toEqual(frozen.prepare(table).get());
    expect(appliedMigrations(frozen)).toEqual([first!.folderMillis]);
    frozen.close();
  });

  it('keeps its rows through every migration, and no foreign key points nowhere', () => {
    const db = openDb(firstDatabase('data'));
    expect(db.$client.prepare('SELECT * FROM deployment').all()).toEqual([ROW]);
    expect(db.$client.prepare('PRAGMA foreign_key_check').all()).toEqual([]);
    expect(appliedMigrations(db.$client)).toHaveLength(readMigrationFiles({ migrationsFolder }).length);
    closeDb(db);
  });

  it('becomes what a new database is', () => {
    const old = firstDatabase('old');
    closeDb(openDb(old));
    const fresh = join(folder, 'fresh');
    closeDb(openDb(fresh));
    const madeIn = (dataDir: string): unknown[] => {
      const client = new Database(databaseFile(dataDir), { readonly: true });
      const made = client
        .prepare("SELECT type, name, tbl_name, sql FROM sqlite_schema WHERE name <> '__drizzle_migrations' ORDER BY type, name")
        .all();
      client.close();
      return made;
    };
    expect(madeIn(old)).toEqual(madeIn(fresh));
  });
});

describe('migrations that are killed at any statement', () => {
  /** Migrates by a way, takes a crash at each statement, and says what each one left. */
  function crashes(way: (client: Database.Database) => void, restart: (image: string, at: number) => void): Left[] {
    const dataDir = firstDatabase('live');
    const before = stateOf(dataDir);
    const images: string[] = [];
    const client = new Database(databaseFile(dataDir), { verbose: () => images.push(crashed(dataDir, `crash-${images.length}`)) });
    client.pragma('journal_mode = WAL');
    client.pragma(`cache_size = ${FEW_PAGES}`);
    way(client);
    images.push(crashed(dataDir, `crash-${images.length}`));
    client.close();
    const after = stateOf(dataDir);
    return images.map((image, at) => {
      const state = stateOf(image);
      if (at % RESTART_EVERY === 0) restart(image, at);
      rmSync(image, { recursive: true });
      return state === before ? 'before' : state === after ? 'after' : 'between';
    });
  }

  const asTheServer = (client: Database.Database): void => {
    client.pragma('foreign_keys = OFF');
    migrate(drizzle(client), { migrationsFolder });
  };
  const withoutTransaction = (client: Database.Database): void => {
    for (const { sql } of readMigrationFiles({ migrationsFolder }).slice(1)) for (const statement of sql) client.exec(statement);
  };

  it(
    'leave the schema as it was or as it will be, and the next start ends them',
    () => {
      const left = crashes(asTheServer, (image) => {
        const db = openDb(image);
        expect(db.$client.prepare('SELECT * FROM deployment').all()).toEqual([ROW]);
        expect(db.$client.pragma('integrity_check', { simple: true })).toBe('ok');
        expect(appliedMigrations(db.$client)).toHaveLength(readMigrationFiles({ migrationsFolder }).length);
        closeDb(db);
      });
      expect(left.filter((state) => state === 'between')).toEqual([]);
      expect(left.lastIndexOf('before')).toBeLessThan(left.indexOf('after'));
      expect(left.length).toBeGreaterThan(readMigrationFiles({ migrationsFolder }).flatMap(({ sql }) => sql).length);
    },
    LONG_MS,
  );

  it(
    'would be seen to leave something between if they ran without a transaction',
    () => {
      expect(crashes(withoutTransaction, () => undefined)).toContain('between');
    },
    LONG_MS,
  );
});
