import { lowest, ones, wordsFor } from './bits';

/** Most later triggers a site that the quick proof looks at. */
const MOST_A_SITE = 256;

/** How many sets the proof aims at, in limits: not all combinations are near each other. */
const AIM = 4;

/** Least triggers a site that the proof looks at. */
const LEAST_A_SITE = 16;

/** The triggers after an event that are near it, by site. */
export interface LaterTriggers {
  readonly rows: Int32Array;
  readonly siteOf: (row: number) => number;
  /** How many of `rows` are of each site. */
  readonly perSite: Int32Array;
}

/** How many sites have a trigger. */
export function sitesAmong(perSite: Int32Array): number {
  return perSite.reduce((sites, triggers) => sites + Math.sign(triggers), 0);
}

/** An upper bound of the number of sets around an event: each site gives one of its triggers or none. */
export function mostSets(perSite: Int32Array): number {
  return perSite.reduce((most, triggers) => most * (triggers + 1), 1);
}

/**
 * Tries to prove, without listing them, that an event is the earliest of more than `limit` sets.
 *
 * A set that has a trigger of every site that is near the event at all is maximal by itself, since no site can give it a second one. Such
 * sets are counted among the nearest later triggers, the last site's in one stroke. The proof is one-sided: true is certain, false means
 * that only the full search can tell.
 *
 * @param later the triggers after the event; the sites before it must be among theirs
 * @param near are two rows near?
 * @param limit the number to exceed
 */
export function isSurelyCrowded(later: LaterTriggers, near: (a: number, b: number) => boolean, limit: number): boolean {
  const siteCount = sitesAmong(later.perSite);
  const enough = Math.min(MOST_A_SITE, Math.max(LEAST_A_SITE, Math.ceil(Math.pow(AIM * limit, 1 / siteCount))));
  const bySite = Array.from(later.perSite, (triggers): { readonly wanted: number; readonly rows: number[] } => ({
    wanted: Math.min(enough, triggers),
    rows: [],
  }));
  let missing = bySite.reduce((sum, { wanted }) => sum + wanted, 0);
  for (let k = 0; missing > 0 && k < later.rows.length; k++) {
    const row = later.rows[k] ?? 0;
    const list = bySite[later.siteOf(row)];
    if (!list || list.rows.length >= list.wanted) continue;
    list.rows.push(row);
    missing--;
  }
  const lists = bySite.flatMap(({ rows }) => (rows.length > 0 ? [rows] : []));
  // Sites with few triggers first: what they leave is small.
  return countFull(
    lists.sort((a, b) => a.length - b.length),
    near,
    limit,
  );
}

/** Are there more than `limit` sets with one trigger of each list, all near each other? */
function countFull(lists: readonly (readonly number[])[], near: (a: number, b: number) => boolean, limit: number): boolean {
  const rows = lists.flat();
  const words = wordsFor(rows.length);
  const ends = lists.map((_, level) => lists.slice(0, level + 1).reduce((sum, list) => sum + list.length, 0));
  /** Bits of the rows of later lists that are near a row, found when they are first asked for. */
  const matrix = new Int32Array(rows.length * words);
  const isKnown = new Uint8Array(rows.length);
  const findNear = (k: number, from: number): void => {
    isKnown[k] = 1;
    const row = rows[k] ?? 0;
    for (let other = from; other < rows.length; other++) {
      if (near(row, rows[other] ?? 0)) matrix[k * words + (other >> 5)] = (matrix[k * words + (other >> 5)] ?? 0) | (1 << (other & 31));
    }
  };
  /** Side by side, for each list the rows that are near all that were chosen before. */
  const levels = new Int32Array(lists.length * words).fill(-1, 0, words);
  let count = 0;

  const descend = (level: number): void => {
    const open = level * words;
    const next = open + words;
    const begin = ends[level - 1] ?? 0;
    const end = ends[level] ?? 0;
    const isLast = level === lists.length - 1;
    for (let w = begin >> 5; w << 5 < end; w++) {
      let bits = (levels[open + w] ?? 0) & between(begin, end, w);
      if (isLast) {
        count += ones(bits);
        continue;
      }
      for (; bits !== 0; bits &= bits - 1) {
        const k = w * 32 + lowest(bits);
        if (isKnown[k] === 0) findNear(k, end);
        for (let v = end >> 5; v < words; v++) levels[next + v] = (levels[open + v] ?? 0) & (matrix[k * words + v] ?? 0);
        descend(level + 1);
        if (count > limit) return;
      }
    }
  };
  descend(0);
  return count > limit;
}

/** The bits of word `w` that stand for numbers in [begin, end). */
function between(begin: number, end: number, w: number): number {
  const from = begin - w * 32;
  const to = end - w * 32;
  const above = from <= 0 ? -1 : from >= 32 ? 0 : -1 << from;
  const below = to >= 32 ? -1 : to <= 0 ? 0 : (1 << to) - 1;
  return above & below;
}
