import { lowest, ones } from './bits';
import { type CliqueGoal } from './clique-search';

/** A neighbourhood of up to so many triggers has one word of nearness for each. */
export const WORD_ROWS = 31;

/** The triggers around an event, the first `laterCount` and `earlierCount` of each list. */
export interface SmallNeighbourhood {
  readonly later: Int32Array;
  readonly laterCount: number;
  readonly earlier: Int32Array;
  readonly earlierCount: number;
  readonly near: (a: number, b: number) => boolean;
}

/** The search of `searchCliques` for small neighbourhoods, which are most: it takes no memory, and its sets of triggers are single words. */
export class WordSearch {
  private readonly nearTo = new Int32Array(WORD_ROWS);
  private readonly rows = new Int32Array(WORD_ROWS);
  private readonly members = new Int32Array(WORD_ROWS);
  private count = 0;

  /**
   * Finds all maximal sets of mutually near triggers whose earliest is the event.
   *
   * @param graph at most WORD_ROWS triggers
   * @returns how many sets were found; above `goal.limit` means that the search ended early
   */
  run(graph: SmallNeighbourhood, goal: CliqueGoal): number {
    const { laterCount: open, earlierCount, near } = graph;
    const size = open + earlierCount;
    for (let k = 0; k < size; k++) {
      this.rows[k] = (k < open ? graph.later[k] : graph.earlier[k - open]) ?? 0;
      this.nearTo[k] = 0;
    }
    for (let a = 0; a < open; a++) {
      for (let b = a + 1; b < size; b++) {
        if (!near(this.rows[a] ?? 0, this.rows[b] ?? 0)) continue;
        this.nearTo[a] = (this.nearTo[a] ?? 0) | (1 << b);
        this.nearTo[b] = (this.nearTo[b] ?? 0) | (1 << a);
      }
    }
    this.count = 0;
    const candidates = lowBits(open);
    this.expand(goal, 0, candidates, lowBits(size) & ~candidates);
    return this.count;
  }

  private expand(goal: CliqueGoal, depth: number, candidates: number, done: number): void {
    if (candidates === 0) {
      if (done !== 0 || depth < goal.leastOthers) return;
      this.count++;
      if (this.count <= goal.limit) goal.found(this.members, depth);
      return;
    }
    let pivotNear = 0;
    let most = -1;
    for (let bits = done | candidates; bits !== 0; bits &= bits - 1) {
      const k = lowest(bits);
      const near = candidates & (this.nearTo[k] ?? 0);
      // Near all candidates, as only one that is done can be: nothing here is maximal.
      if (near === candidates) return;
      if (ones(near) <= most) continue;
      most = ones(near);
      pivotNear = near;
    }
    let open = candidates;
    let blockers = done;
    for (let branch = candidates & ~pivotNear; branch !== 0; branch &= branch - 1) {
      const k = lowest(branch);
      const near = this.nearTo[k] ?? 0;
      this.members[depth] = this.rows[k] ?? 0;
      this.expand(goal, depth + 1, open & near, blockers & near);
      if (this.count > goal.limit) return;
      open &= ~(1 << k);
      blockers |= 1 << k;
    }
  }
}

/** The lowest `count` bits, up to 31 of them. */
const lowBits = (count: number): number => (count === 31 ? 0x7fffffff : (1 << count) - 1);
