import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { eq } from 'drizzle-orm';
import { readMigrationFiles } from 'drizzle-orm/migrator';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { deployment } from '#schema/schema';
import { appliedMigrations, closeDb, databaseFile, openDb, watchPlace } from './db';
import { ensureDeployment } from './deployment';
import { migrationsFolder } from './paths';

let folder: string;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'skewline-db-'));
});
afterEach(() => {
  rmSync(folder, { recursive: true });
});

/** A migrations folder of the given SQL, one migration each. */
function migrations(name: string, ...sql: string[]): string {
  const path = join(folder, name);
  mkdirSync(join(path, 'meta'), { recursive: true });
  const entries = sql.map((text, idx) => {
    const tag = `000${idx}_step`;
    writeFileSync(join(path, `${tag}.sql`), text);
    return { idx, version: '6', when: 1000 + idx, tag, breakpoints: true };
  });
  writeFileSync(join(path, 'meta', '_journal.json'), JSON.stringify({ version: '7', dialect: 'sqlite', entries }));
  return path;
}

describe('an open database', () => {
  it('commits to disk, holds foreign keys and trusts no schema', () => {
    const db = openDb(folder);
    const now = (name: string): unknown => db.$client.pragma(name, { simple: true });
    expect(now('journal_mode')).toBe('wal');
    expect(now('synchronous')).toBe(2);
    expect(now('foreign_keys')).toBe(1);
    expect(now('recursive_triggers')).toBe(1);
    expect(now('trusted_schema')).toBe(0);
    closeDb(db);
  });

  it('has only strict tables', () => {
    const db = openDb(folder);
    const lax = db.$client
      .prepare("SELECT name FROM pragma_table_list WHERE schema = 'main' AND type = 'table' AND strict = 0 AND name NOT GLOB 'sqlite_*'")
      .pluck()
      .all();
    expect(lax, 'add STRICT to the table in its migration').toEqual(['__drizzle_migrations']);
    closeDb(db);
  });

  it('is migrated once', () => {
    const first = openDb(folder);
    const applied = appliedMigrations(first.$client);
    closeDb(first);
    const db = openDb(folder);
    expect(appliedMigrations(db.$client)).toEqual(applied);
    expect(applied).toHaveLength(readMigrationFiles({ migrationsFolder }).length);
    closeDb(db);
  });

  it('knows when it is no longer the file at its path', () => {
    const db = openDb(folder);
    const inPlace = watchPlace(db.$client);
    expect(inPlace()).toBe(true);
    rmSync(databaseFile(folder));
    expect(inPlace()).toBe(false);
    writeFileSync(databaseFile(folder), '');
    expect(inPlace()).toBe(false);
    closeDb(db);
  });
});

describe('a migration that rebuilds a parent table', () => {
  const first = `CREATE TABLE parent (id integer PRIMARY KEY, name text) STRICT;
--> statement-breakpoint
CREATE TABLE child (id integer PRIMARY KEY, parent integer REFERENCES parent(id) ON DELETE CASCADE) STRICT;
--> statement-breakpoint
INSERT INTO parent VALUES (1, 'a'), (2, 'b');
--> statement-breakpoint
INSERT INTO child VALUES (1, 1), (2, 2);`;
  const rebuild = `PRAGMA foreign_keys=OFF;
--> statement-breakpoint
CREATE TABLE __new_parent (id integer PRIMARY KEY, name text NOT NULL) STRICT;
--> statement-breakpoint
INSERT INTO __new_parent SELECT id, name FROM parent;
--> statement-breakpoint
DROP TABLE parent;
--> statement-breakpoint
ALTER TABLE __new_parent RENAME TO parent;
--> statement-breakpoint
PRAGMA foreign_keys=ON;`;

  it('keeps the children', () => {
    closeDb(openDb(folder, migrations('one', first)));
    const db = openDb(folder, migrations('two', first, rebuild));
    expect(db.$client.prepare('SELECT count(*) FROM child').pluck().get()).toBe(2);
    expect(db.$client.pragma('foreign_keys', { simple: true })).toBe(1);
    closeDb(db);
  });

  it('is refused when it leaves a child without its parent', () => {
    closeDb(openDb(folder, migrations('one', first)));
    const loses = migrations('two', first, rebuild.replace('FROM parent', 'FROM parent WHERE id = 1'));
    expect(() => openDb(folder, loses)).toThrow('1 rows whose foreign key points nowhere');
  });

  it('is undone whole when a statement of it fails', () => {
    closeDb(openDb(folder, migrations('one', first)));
    expect(() => openDb(folder, migrations('two', first, `${rebuild}\n--> statement-breakpoint\nSELECT nothing;`))).toThrow();
    const db = openDb(folder, migrations('one', first));
    expect(db.$client.prepare("SELECT name FROM sqlite_schema WHERE type = 'table' AND name GLOB '__new_*'").all()).toEqual([]);
    expect(appliedMigrations(db.$client)).toHaveLength(1);
    closeDb(db);
  });
});

describe('the deployment', () => {
  it('is made once and stays', () => {
    const db = openDb(folder);
    const made = ensureDeployment(db, '1.2.3');
    expect(ensureDeployment(db, '2.0.0')).toEqual(made);
    expect(made.createdWith).toBe('1.2.3');
    closeDb(db);
  });

  it.each([
    ['a second row', { row: 2 }, 'deployment_one_row'],
    ['an id that is none', { id: 'x' }, 'deployment_id'],
    ['an instant without its scale', { createdAt: '2026-12-01 00:00:00' }, 'deployment_created_at'],
    ['no version', { createdWith: '' }, 'deployment_created_with'],
  ])('is refused with %s', (_what, change, constraint) => {
    const db = openDb(folder);
    ensureDeployment(db, '1.2.3');
    expect(() => db.update(deployment).set(change).where(eq(deployment.row, 1)).run()).toThrow(constraint);
    closeDb(db);
  });
});
