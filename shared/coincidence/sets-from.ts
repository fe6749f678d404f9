import { type EventColumns } from '../relativity/events';
import { searchCliques } from './clique-search';
import { isSurelyCrowded, mostSets, sitesAmong } from './crowding';
import { type CoincidenceKernel, RowList } from './kernel';
import { WORD_ROWS, WordSearch } from './word-search';

/** An event that is the earliest of more sets than are listed. */
export interface Crowd {
  /** Row of the event. */
  readonly event: number;
  /** Sites of the triggers that are near it and not before it, its own included. */
  readonly sites: number;
  /** Those triggers, itself included. */
  readonly events: number;
  /** At least so many sets begin with it. */
  readonly setsAtLeast: number;
}

/** Who hears of what begins with an event. */
export interface SetListener {
  /** A set: the first `fold` of `rows`, ascending. The array is used again for the next set. */
  set(rows: Int32Array, fold: number): void;
  crowd(crowd: Crowd): void;
}

/** What limits the sets. */
export interface SetLimits {
  readonly minimumFold: number;
  /** At least 1; an event that is the earliest of more sets than this is crowded, and none of them is listed. */
  readonly limit: number;
}

/**
 * Makes the function that finds all sets whose earliest trigger is a given one, in the order of their rows.
 *
 * Sets are handed over one event at a time, so memory holds at most `limit` of them, whatever the log. Crowding is judged from the
 * event's own neighbours alone.
 */
export function setsFrom(
  kernel: CoincidenceKernel,
  events: EventColumns,
  limits: SetLimits,
): (event: number, listener: SetListener) => void {
  const later = new RowList();
  const earlier = new RowList();
  const pair = new Int32Array(2);
  const triple = new Int32Array(3);
  const second = new Int32Array(1);
  const words = new WordSearch();
  const leastOthers = limits.minimumFold - 1;
  const siteOf = (row: number): number => events.site[row] ?? 0;
  const near = (a: number, b: number): boolean => kernel.near(a, b);
  const perSite = new Int32Array(kernel.siteCount);

  /** Whether a trigger before the event is near it and all of the first `count` rows of `rows`: a set of these is then not maximal. */
  function isBlocked(earlierCount: number, rows: Int32Array, count: number): boolean {
    for (let k = 0; k < earlierCount; k++) {
      const blocker = earlier.rows[k] ?? 0;
      let joined = 0;
      while (joined < count && kernel.near(blocker, rows[joined] ?? 0)) joined++;
      if (joined === count) return true;
    }
    return false;
  }

  /** Hands over the event and the first `count` rows of `others`, one or two, unless they are too few or an earlier trigger could join them. */
  function handOver(event: number, others: Int32Array, count: 1 | 2, earlierCount: number, listener: SetListener): void {
    if (count < leastOthers || (earlierCount > 0 && isBlocked(earlierCount, others, count))) return;
    const rows = count === 1 ? pair : triple;
    rows[0] = event;
    rows[1] = others[0] ?? 0;
    if (count === 2) rows[2] = others[1] ?? 0;
    listener.set(rows, count + 1);
  }

  /** The common cases of a quiet network, one neighbour or two, need no search. */
  function fromFew(event: number, laterCount: 1 | 2, listener: SetListener): void {
    const earlierCount = kernel.earlierNear(event, earlier);
    const others = later.rows;
    const areOne = laterCount === 2 && kernel.near(others[0] ?? 0, others[1] ?? 0);
    handOver(event, others, areOne ? 2 : 1, earlierCount, listener);
    if (laterCount === 1 || areOne) return;
    second[0] = others[1] ?? 0;
    handOver(event, second, 1, earlierCount, listener);
  }

  function crowdAt(event: number, laterCount: number): Crowd {
    perSite[siteOf(event)] = 1;
    const sites = sitesAmong(perSite);
    return { event, sites, events: laterCount + 1, setsAtLeast: limits.limit + 1 };
  }

  /**
   * The quick proof of a crowd needs a later trigger of every site that is near the event at all; where all sites of the network have one,
   * the earlier triggers need not be looked for.
   */
  function isCrowdedAtOnce(event: number, laterRows: Int32Array): boolean {
    perSite.fill(0);
    for (const row of laterRows) perSite[siteOf(row)] = (perSite[siteOf(row)] ?? 0) + 1;
    const sites = sitesAmong(perSite);
    if (sites < leastOthers || mostSets(perSite) <= limits.limit) return false;
    if (sites < kernel.siteCount - 1) {
      const earlierCount = kernel.earlierNear(event, earlier);
      for (let k = 0; k < earlierCount; k++) if (perSite[siteOf(earlier.rows[k] ?? 0)] === 0) return false;
    }
    return isSurelyCrowded({ rows: laterRows, siteOf, perSite }, near, limits.limit);
  }

  function fromMany(event: number, laterCount: number, listener: SetListener): void {
    const laterRows = later.rows.subarray(0, laterCount);
    if (isCrowdedAtOnce(event, laterRows)) {
      listener.crowd(crowdAt(event, laterCount));
      return;
    }
    const earlierCount = kernel.earlierNear(event, earlier);
    const sets: Int32Array[] = [];
    const found = (others: Int32Array, length: number): void => {
      const rows = new Int32Array(length + 1);
      rows[0] = event;
      rows.set(others.subarray(0, length), 1);
      sets.push(rows.sort());
    };
    const goal = { leastOthers, limit: limits.limit, found };
    const count =
      laterCount + earlierCount <= WORD_ROWS
        ? words.run({ later: later.rows, laterCount, earlier: earlier.rows, earlierCount, near }, goal)
        : searchCliques({ later: laterRows, earlier: earlier.rows.subarray(0, earlierCount), near, siteOf }, goal);
    if (count > limits.limit) listener.crowd(crowdAt(event, laterCount));
    else for (const rows of sets.sort(compareRows)) listener.set(rows, rows.length);
  }

  return (event, listener) => {
    const laterCount = kernel.laterNear(event, later);
    if (laterCount === 0) return;
    // Two sets at most begin with an event that has two neighbours, which only a limit of 1 calls a crowd.
    if (laterCount === 1 || (laterCount === 2 && limits.limit > 1)) fromFew(event, laterCount, listener);
    else fromMany(event, laterCount, listener);
  };
}

/** Sets by their first differing row; a maximal set is never the beginning of another. */
export function compareRows(a: Int32Array, b: Int32Array): number {
  const length = Math.min(a.length, b.length);
  for (let k = 0; k < length; k++) {
    const apart = (a[k] ?? 0) - (b[k] ?? 0);
    if (apart !== 0) return apart;
  }
  return a.length - b.length;
}
