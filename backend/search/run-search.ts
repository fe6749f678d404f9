import Database from 'better-sqlite3';
import { type Query } from './query';

/** So few rows are sorted by themselves before a walk is tried. */
const FEW_CANDIDATES = 20_000;

/** So many rows are walked past before what is left by the best narrowing is sorted by itself, however many that are. */
const MOST_WALKED = 50_000;

/** Counted no further: beyond, one narrowing is as bad as another. */
const MOST_COUNTED = 1_000_000;

/** One way to narrow a search: how many rows it leaves, counted to a limit whose value is put behind those of its query, and the search among them. */
export interface Narrowing {
  readonly count: Query;
  readonly rows: Query;
}

/**
 * A search that no index answers by itself. Where a narrowing leaves few rows, these are sorted; else all rows are walked through in the order
 * that is asked for, which ends soon where many pass the filters; and where they do not, the rows of the best narrowing are sorted after all.
 * Each query has `in_time()` among its conditions, which counts the rows that are looked at.
 */
export interface Search {
  readonly narrowings: readonly Narrowing[];
  readonly walk: Query;
}

/** A search took longer than it may. */
export class OutOfTime extends Error {}

/** A connection that only reads and only searches; to be closed by who opened it. */
export interface SearchConnection {
  readonly run: (search: Search, limitMs: number) => unknown[];
  readonly close: () => void;
}

/**
 * Opens a connection for searches.
 *
 * @param file of the database
 * @returns runs one search at a time; throws OutOfTime where one takes longer than its limit, looked at for every row that is examined
 */
export function openForSearch(file: string): SearchConnection {
  const client = new Database(file, { readonly: true, fileMustExist: true });
  client.pragma('trusted_schema = OFF');
  let untilMs = Infinity;
  let rowsLeft = Infinity;
  client.function('in_time', { deterministic: false, directOnly: true }, () => {
    if (performance.now() > untilMs) throw new OutOfTime('the search took longer than it may');
    rowsLeft -= 1;
    if (rowsLeft < 0) throw new FarWalk('so many rows were walked past');
    return 1;
  });
  const all = ({ sql, values }: Query): unknown[] => client.prepare(sql).all(...values);
  const leastOf = (narrowings: readonly Narrowing[], most: number): Narrowing | undefined => {
    let [best, fewest]: [Narrowing | undefined, number] = [undefined, most];
    for (const narrowing of narrowings) {
      const { sql, values } = narrowing.count;
      const count = Number(
        client
          .prepare(sql)
          .pluck()
          .get(...values, most + 1),
      );
      if (count <= fewest) [best, fewest] = [narrowing, count];
    }
    return best;
  };
  const walked = (walk: Query, most: number): unknown[] | undefined => {
    rowsLeft = most;
    try {
      return all(walk);
    } catch (fault) {
      if (fault instanceof FarWalk) return undefined;
      throw fault;
    } finally {
      rowsLeft = Infinity;
    }
  };
  return {
    run: ({ narrowings, walk }, limitMs) => {
      untilMs = performance.now() + limitMs;
      const few = leastOf(narrowings, FEW_CANDIDATES);
      if (few) return all(few.rows);
      if (narrowings.length === 0) return all(walk);
      return walked(walk, MOST_WALKED) ?? all(leastOf(narrowings, MOST_COUNTED)?.rows ?? walk);
    },
    close: () => void client.close(),
  };
}

/** A walk went past more rows than it may. */
class FarWalk extends Error {}
