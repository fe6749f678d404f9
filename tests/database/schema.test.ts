import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { is } from 'drizzle-orm';
import { getTableConfig, SQLiteTable } from 'drizzle-orm/sqlite-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import * as schema from '#schema/schema';
import { closeDb, openDb, type Db } from '../../backend/db';
import { root } from '../../backend/paths';

let folder: string;
let db: Db;
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'skewline-schema-'));
  db = openDb(folder);
});
afterAll(() => {
  closeDb(db);
  rmSync(folder, { recursive: true });
});

const namesOf = (sql: string, ...values: string[]): string[] =>
  db.$client
    .prepare<string[], string>(sql)
    .pluck()
    .all(...values);
const tablesMade = (): string[] =>
  namesOf("SELECT name FROM sqlite_schema WHERE type = 'table' AND name NOT GLOB 'sqlite_*' AND name NOT GLOB '__drizzle*' ORDER BY name");
const tables = Object.values(schema).flatMap((exported: unknown) => (is(exported, SQLiteTable) ? [getTableConfig(exported)] : []));

it('the migrations make every table of the schema, and no other', () => {
  expect(tables.map(({ name }) => name).sort()).toEqual(tablesMade());
});

it.each(tables.map((table) => [table.name, table] as const))('the migrations make %s as the schema has it', (name, table) => {
  const columns = db.$client
    .prepare<[string], { name: string; type: string; notnull: number }>('SELECT name, type, "notnull" FROM pragma_table_info(?)')
    .all(name);
  expect(columns.map((column) => [column.name, column.type.toLowerCase(), column.notnull === 1])).toEqual(
    table.columns.map((column) => [column.name, column.getSQLType(), column.notNull]),
  );
  const [sql = ''] = namesOf("SELECT sql FROM sqlite_schema WHERE type = 'table' AND name = ?", name);
  const checks = [...sql.matchAll(/CONSTRAINT "(\w+)" CHECK/g)].map(([, check]) => check);
  expect(checks).toEqual(table.checks.map((check) => check.name));
  const indexes = namesOf("SELECT name FROM sqlite_schema WHERE type = 'index' AND tbl_name = ? AND sql IS NOT NULL ORDER BY name", name);
  expect(indexes).toEqual(table.indexes.map(({ config }) => config.name).sort());
  const inlineKeys = table.foreignKeys.map((key) => {
    const { foreignTable, columns: from } = key.reference();
    return `${from.map((column) => column.name).join()} ${getTableConfig(foreignTable).name} ${(key.onDelete ?? 'no action').toUpperCase()}`;
  });
  const keys = namesOf(
    `SELECT group_concat("from") || ' ' || "table" || ' ' || on_delete
     FROM (SELECT * FROM pragma_foreign_key_list(?) ORDER BY id, seq) GROUP BY id`,
    name,
  );
  expect(keys.sort()).toEqual(inlineKeys.sort());
});

it('every table has its line in schema/README.md, and the picture shows no other', () => {
  const readme = readFileSync(join(root, 'schema', 'README.md'), 'utf8');
  const lines = [...readme.matchAll(/^\|[^|]*\| `(\w+)`/gm)].map(([, name]) => name).sort();
  expect(lines).toEqual(tablesMade());
  const drawn = [...readme.matchAll(/^ {2}(\w+) [|}][^ ]* (\w+) :/gm)].flatMap(([, from = '', to = '']) => [from, to]);
  expect(drawn.length).toBeGreaterThan(0);
  expect(drawn.filter((name) => !tablesMade().includes(name))).toEqual([]);
});
