import Database from 'better-sqlite3';
import { type Query } from './query';

/** So many rows are sorted by themselves rather than found by walking through all in the order that is asked for. */
export const MOST_CANDIDATES = 20_000;

/** One way to narrow a search: how many rows it leaves (counted to one more than `MOST_CANDIDATES` at most), and the search among them. */
export interface Narrowing {
  readonly count: Query;
  readonly rows: Query;
}

/**
 * A search that no index answers by itself: by the narrowing that leaves the fewest rows, where these are few, and else by a walk in the
 * order that is asked for. Both have `in_time()` among their conditions.
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
  client.function('in_time', { deterministic: false, directOnly: true }, () => {
    if (performance.now() > untilMs) throw new OutOfTime('the search took longer than it may');
    return 1;
  });
  const all = ({ sql, values }: Query): unknown[] => client.prepare(sql).all(...values);
  const least = (narrowings: readonly Narrowing[]): Narrowing | undefined => {
    let [best, fewest]: [Narrowing | undefined, number] = [undefined, MOST_CANDIDATES];
    for (const narrowing of narrowings) {
      const count = client
        .prepare(narrowing.count.sql)
        .pluck()
        .get(...narrowing.count.values);
      if (typeof count === 'number' && count <= fewest) [best, fewest] = [narrowing, count];
    }
    return best;
  };
  return {
    run: ({ narrowings, walk }, limitMs) => {
      untilMs = performance.now() + limitMs;
      return all(least(narrowings)?.rows ?? walk);
    },
    close: () => void client.close(),
  };
}
