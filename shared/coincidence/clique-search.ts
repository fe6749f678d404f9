import { lowest, ones, wordsFor } from './bits';

/** A graph of triggers around one event, all of them near that event. */
export interface Neighbourhood {
  /** Rows that may follow the event in a set, ascending. */
  readonly later: Int32Array;
  /** Rows before the event: a set that one of them could join is not maximal, or not the event's. */
  readonly earlier: Int32Array;
  readonly near: (a: number, b: number) => boolean;
  readonly siteOf: (row: number) => number;
}

/** What a search looks for. */
export interface CliqueGoal {
  /** Least number of members besides the event. */
  readonly leastOthers: number;
  /** The search ends as soon as it has found more than this. */
  readonly limit: number;
  /** Told of each set: the members besides the event are the first `length` of `others`, in no order. */
  readonly found: (others: Int32Array, length: number) => void;
}

/** Up to this many triggers a neighbourhood is kept as a matrix of bits; larger ones are halved by lists first. */
const MATRIX_ROWS = 512;

/** How many triggers are tried as pivots: any pivot is right, a good one prunes more. */
const PIVOTS_TRIED = 12;

/**
 * Finds all maximal sets of mutually near triggers whose earliest is one event (Bron and Kerbosch 1973 with a pivot, and with the
 * earlier triggers as those already dealt with).
 *
 * @returns how many sets were found; above `goal.limit` means that the search ended early
 */
export function searchCliques(graph: Neighbourhood, goal: CliqueGoal): number {
  const others = new Int32Array(graph.later.length === 0 ? 1 : mostSites(graph));
  return byLists({ graph, goal, others, count: 0 }, 0, graph.later, graph.earlier);
}

interface Search {
  readonly graph: Neighbourhood;
  readonly goal: CliqueGoal;
  readonly others: Int32Array;
  count: number;
}

/** A set has at most one trigger a site. */
function mostSites(graph: Neighbourhood): number {
  const sites = new Set<number>();
  for (const row of graph.later) sites.add(graph.siteOf(row));
  return sites.size;
}

function report(search: Search, length: number): void {
  if (length < search.goal.leastOthers) return;
  search.count++;
  if (search.count <= search.goal.limit) search.goal.found(search.others, length);
}

const ended = (search: Search): boolean => search.count > search.goal.limit;

/** The upper levels of a large neighbourhood: rows in lists, nearness asked for when it is needed. */
function byLists(search: Search, depth: number, candidates: Int32Array, allDone: Int32Array): number {
  const { near, siteOf } = search.graph;
  const [pivot] = candidates;
  if (pivot === undefined) {
    if (allDone.length === 0) report(search, depth);
    return search.count;
  }
  const isLarge = candidates.length + allDone.length > MATRIX_ROWS;
  const done = isLarge && candidates.length <= MATRIX_ROWS ? distinctBlockers(search.graph, candidates, allDone) : allDone;
  if (candidates.length + done.length <= MATRIX_ROWS) {
    byMatrix(search, depth, candidates, done);
    return search.count;
  }
  // Triggers of one site are never near each other: when all candidates are of one site, those of it that are done cannot block any.
  const site = siteOf(pivot);
  const others = done.filter((row) => siteOf(row) !== site);
  if (candidates.every((row) => siteOf(row) === site)) {
    for (const row of candidates) {
      search.others[depth] = row;
      if (!others.some((blocker) => near(blocker, row))) report(search, depth + 1);
      if (ended(search)) break;
    }
    return search.count;
  }
  if (done.some((blocker) => candidates.every((row) => near(blocker, row)))) return search.count;
  let left = candidates;
  let blockers = done;
  for (const row of candidates) {
    if (row !== pivot && near(pivot, row)) continue;
    search.others[depth] = row;
    byLists(
      search,
      depth + 1,
      left.filter((other) => near(row, other)),
      blockers.filter((other) => near(row, other)),
    );
    if (ended(search)) break;
    left = left.filter((other) => other !== row);
    blockers = withRow(blockers, row);
  }
  return search.count;
}

/**
 * Of the rows that are done, one for each choice of candidates that it is near: the others block nothing more. In a storm thousands are
 * done and a few candidates are left.
 */
function distinctBlockers({ near }: Neighbourhood, candidates: Int32Array, done: Int32Array): Int32Array {
  const bits = new Int32Array(wordsFor(candidates.length));
  const seen = new Set<string>();
  return done.filter((row) => {
    bits.fill(0);
    candidates.forEach((candidate, k) => {
      if (near(candidate, row)) bits[k >> 5] = (bits[k >> 5] ?? 0) | (1 << (k & 31));
    });
    if (bits.every((word) => word === 0)) return false;
    const before = seen.size;
    return seen.add(bits.join()).size > before;
  });
}

function withRow(rows: Int32Array, row: number): Int32Array {
  const more = new Int32Array(rows.length + 1);
  more.set(rows);
  more[rows.length] = row;
  return more;
}

/** The rest: a matrix of bits, candidates first, then the rows that are done. */
function byMatrix(search: Search, depth: number, candidates: Int32Array, done: Int32Array): void {
  const { near } = search.graph;
  const open = candidates.length;
  const size = open + done.length;
  const words = wordsFor(size);
  const rowAt = (k: number): number => (k < open ? candidates[k] : done[k - open]) ?? 0;
  const matrix = new Int32Array(size * words);
  for (let a = 0; a < open; a++) {
    for (let b = a + 1; b < size; b++) {
      if (!near(rowAt(a), rowAt(b))) continue;
      matrix[a * words + (b >> 5)] = (matrix[a * words + (b >> 5)] ?? 0) | (1 << (b & 31));
      matrix[b * words + (a >> 5)] = (matrix[b * words + (a >> 5)] ?? 0) | (1 << (a & 31));
    }
  }
  // Per level: the candidates' and the done rows' words side by side.
  const levels = new Int32Array((search.others.length - depth + 2) * 2 * words);
  for (let k = 0; k < size; k++) {
    const at = (k < open ? 0 : words) + (k >> 5);
    levels[at] = (levels[at] ?? 0) | (1 << (k & 31));
  }
  expand(search, { matrix, levels, words, rowAt, base: depth }, depth);
}

interface Matrix {
  readonly matrix: Int32Array;
  readonly levels: Int32Array;
  readonly words: number;
  readonly rowAt: (k: number) => number;
  /** Depth at which the matrix was made. */
  readonly base: number;
}

function expand(search: Search, m: Matrix, depth: number): void {
  const { matrix, levels, words } = m;
  const open = (depth - m.base) * 2 * words;
  const done = open + words;
  let left = 0;
  let blocking = 0;
  for (let w = 0; w < words; w++) {
    left += ones(levels[open + w] ?? 0);
    blocking |= levels[done + w] ?? 0;
  }
  if (left === 0) {
    if (blocking === 0) report(search, depth);
    return;
  }
  if (depth + left < search.goal.leastOthers) return;
  const pivot = choosePivot(m, open, done, left);
  if (pivot < 0) return;
  for (let w = 0; w < words; w++) {
    // What the pivot is near to is found through the pivot or through one that it is not near to.
    let branch = (levels[open + w] ?? 0) & ~(matrix[pivot * words + w] ?? 0);
    while (branch !== 0) {
      const bit = lowest(branch);
      branch &= branch - 1;
      const k = w * 32 + bit;
      search.others[depth] = m.rowAt(k);
      for (let v = 0; v < words; v++) {
        const near = matrix[k * words + v] ?? 0;
        levels[open + 2 * words + v] = (levels[open + v] ?? 0) & near;
        levels[done + 2 * words + v] = (levels[done + v] ?? 0) & near;
      }
      expand(search, m, depth + 1);
      if (ended(search)) return;
      levels[open + w] = (levels[open + w] ?? 0) & ~(1 << bit);
      levels[done + w] = (levels[done + w] ?? 0) | (1 << bit);
    }
  }
}

/** A trigger that is near many candidates; -1 when one that is done is near all of them, so that nothing here is maximal. */
function choosePivot(m: Matrix, open: number, done: number, left: number): number {
  const { levels, words } = m;
  let best = -1;
  let bestNear = -1;
  let tried = 0;
  for (let w = 0; w < words; w++) {
    for (let blockers = levels[done + w] ?? 0; blockers !== 0; blockers &= blockers - 1) {
      const k = w * 32 + lowest(blockers);
      if (isNearAll(m, open, k)) return -1;
      if (tried++ < PIVOTS_TRIED) {
        const near = nearCandidates(m, open, k);
        if (near > bestNear) [best, bestNear] = [k, near];
      }
    }
  }
  tried = 0;
  for (let w = 0; w < words && tried < PIVOTS_TRIED && bestNear < left - 1; w++) {
    for (let candidates = levels[open + w] ?? 0; candidates !== 0 && tried < PIVOTS_TRIED; candidates &= candidates - 1) {
      const k = w * 32 + lowest(candidates);
      tried++;
      const near = nearCandidates(m, open, k);
      if (near > bestNear) [best, bestNear] = [k, near];
    }
  }
  return best;
}

function isNearAll(m: Matrix, open: number, k: number): boolean {
  for (let w = 0; w < m.words; w++) {
    if (((m.levels[open + w] ?? 0) & ~(m.matrix[k * m.words + w] ?? 0)) !== 0) return false;
  }
  return true;
}

function nearCandidates(m: Matrix, open: number, k: number): number {
  let near = 0;
  for (let w = 0; w < m.words; w++) near += ones((m.levels[open + w] ?? 0) & (m.matrix[k * m.words + w] ?? 0));
  return near;
}
