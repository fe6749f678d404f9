import { spawnSync } from 'node:child_process';
import { readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { root } from './lib.mjs';

// Writes the migration from the last schema to schema/schema.ts, and mends what drizzle-kit cannot write: STRICT behind each table, WITHOUT
// ROWID where the primary key is of several columns (such a table is read by that key, and would otherwise be kept twice), and expressions
// in an index, which it takes apart at their commas.

const folder = join(root, 'schema', 'migrations');
const migrations = () => readdirSync(folder).filter((name) => name.endsWith('.sql'));

const before = new Set(migrations());
const kit = join(root, 'node_modules', 'drizzle-kit', 'bin.cjs');
const { status, stdout, stderr } = spawnSync(
  process.execPath,
  [kit, 'generate', '--config', 'schema/drizzle.config.ts', ...process.argv.slice(2)],
  {
    cwd: root,
    encoding: 'utf8',
  },
);
if (status !== 0) {
  process.stderr.write(stdout + stderr);
  process.exit(status ?? 1);
}

for (const name of migrations().filter((file) => !before.has(file))) {
  const path = join(folder, name);
  const sql = readFileSync(path, 'utf8')
    .replace(/^(CREATE TABLE [\s\S]*?\n\));/gm, (_all, table) =>
      /^\s*PRIMARY KEY\(/m.test(table) ? `${table} STRICT, WITHOUT ROWID;` : `${table} STRICT;`,
    )
    .replace(
      /^(CREATE (?:UNIQUE )?INDEX `\w+` ON `\w+` \()(.*?)(\)(?: WHERE .*)?;)/gm,
      (_all, begin, columns, end) => begin + whole(columns) + end,
    );
  writeFileSync(path, sql);
  console.log(`Read ${path}: write the triggers of what is only added to, and fill what becomes NOT NULL.`);
}

/** The columns of an index, its expressions in one piece again and without the quotes of a name. */
function whole(columns) {
  const parts = [];
  for (const part of columns.split('`,`').map((text) => text.replace(/^`|`$/g, ''))) {
    const open = parts.at(-1);
    if (open !== undefined && depth(open) > 0) parts[parts.length - 1] = `${open},${part}`;
    else parts.push(part);
  }
  return parts.map((part) => (/^\w+$/.test(part) ? `\`${part}\`` : part)).join(',');
}

/** How many parentheses are open at the end of a text. */
function depth(text) {
  return text.split('(').length - text.split(')').length;
}
