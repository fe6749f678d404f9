import { createHash } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';

/** The result files, in the order of their names. */
export const RESULT_FILES = [
  'coincidences.csv',
  'crowded.csv',
  'events.csv',
  'neighbours.csv',
  'orders.csv',
  'pairs.csv',
  'set-aside.csv',
  'summary.json',
] as const;

export type ResultFileName = (typeof RESULT_FILES)[number];

/** One row of a table by its columns' names. */
export type Row = Readonly<Record<string, string>>;

/** The files of a folder, as they stand. */
export const filesOf = (folder: string): Readonly<Record<string, string>> =>
  Object.fromEntries(readdirSync(folder).map((name) => [name, readFileSync(join(folder, name), 'utf8')]));

/** The rows of a table. */
export function rowsOf(text: string): readonly Row[] {
  const [header = [], ...rows] = Papa.parse<string[]>(text, { newline: '\n', skipEmptyLines: true }).data;
  return rows.map((row) => Object.fromEntries(header.map((name, at) => [name, row[at] ?? ''])));
}

export const sha256 = (text: string): string => createHash('sha256').update(text).digest('hex');
