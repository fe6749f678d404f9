import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { type Db } from '../../backend/db';
import { rowsOf, type Row } from './results';

type Cell = string | number | null;

/** A coincidence with its pairs, as far as the database and the batch command's tables both say it. */
export interface Finding {
  /** The first digits of the hash of its set. */
  readonly set: string;
  readonly fold: number;
  readonly spanNs: number;
  /** In the order of their members. */
  readonly pairs: readonly (readonly Cell[])[];
}

const NUMBERS = ['dt_ns', 'distance_m', 'sigma_dt_ns', 'sigma_gap_ns', 'margin_sigma', 'reverse_margin_sigma', 'interval_m2'] as const;
const MORE_NUMBERS = ['turning_speed', 'turning_sigma', 'toward_x', 'toward_y', 'toward_z'] as const;

const SETS = `SELECT id, substr(set_hash, 1, 12) AS "set", fold, span_ns AS spanNs FROM coincidences WHERE is_current = 1 ORDER BY "set"`;
const PAIRS = 'SELECT * FROM pairs WHERE coincidence_id = ? ORDER BY a, b';

/** The coincidences in force of a database, by the names of their sets. */
export function findingsIn(db: Db): Finding[] {
  const pairsOf = db.$client.prepare<[number], Record<string, Cell>>(PAIRS);
  return db.$client
    .prepare<[], { id: number; set: string; fold: number; spanNs: number }>(SETS)
    .all()
    .map(({ id, ...numbers }) => ({
      ...numbers,
      pairs: pairsOf
        .all(id)
        .map((pair) => [
          ...NUMBERS.map((name) => pair[name]!),
          ...[pair['class']!, pair['proper_time_s'] ?? pair['proper_distance_m']!, pair['turning_speed_c']!, pair['turning_sigma_c']!],
          ...[pair['toward_x']!, pair['toward_y']!, pair['toward_z']!],
        ]),
    }));
}

/** The coincidences in a folder of the batch command's results. */
export function findingsOf(folder: string): Finding[] {
  const table = (name: string): readonly Row[] => rowsOf(readFileSync(join(folder, name), 'utf8'));
  const number = (text: string | undefined): number | null => (text === undefined || text === '' ? null : Number(text));
  const pairs = new Map<string, Cell[][]>();
  for (const row of table('pairs.csv')) {
    const cells = [...NUMBERS.map((name) => number(row[name])), row['class']!, number(row['proper'])];
    const list = pairs.get(row['set']!) ?? [];
    pairs.set(row['set']!, list);
    list.push([...cells, ...MORE_NUMBERS.map((name) => number(row[name]))]);
  }
  return table('coincidences.csv')
    .map((row) => ({
      set: row['set']!,
      fold: Number(row['fold']),
      spanNs: Number(row['span_ns']),
      pairs: pairs.get(row['set']!) ?? [],
    }))
    .toSorted((a, b) => (a.set < b.set ? -1 : 1));
}
