/** Whole numbers from the first to the last, both held. */
export interface HeldRange {
  first: bigint;
  last: bigint;
  /** When the gap before it was noticed, ms since 1970. */
  sinceMs: number;
}

/**
 * The numbers of one series that are held, as ranges that do not touch, in order. The lowest one is the series' contiguous run; before each
 * other one there is a gap. Which ranges there are depends on the numbers alone, not on their order.
 */
export class HeldNumbers {
  /** First numbers of ranges that are no more, since the last `settle`. */
  private readonly gone = new Set<bigint>();
  /** Ranges that are new or longer since the last `settle`. */
  private readonly touched = new Set<HeldRange>();

  constructor(private readonly held: HeldRange[] = []) {}

  /** The ranges, lowest first. */
  get ranges(): readonly Readonly<HeldRange>[] {
    return this.held;
  }

  has(number: bigint): boolean {
    const range = this.held[this.indexFrom(number)];
    return range !== undefined && range.first <= number;
  }

  /** Holds a number; false where it was held. */
  add(number: bigint, nowMs: number): boolean {
    const at = this.indexFrom(number);
    const above = this.held[at];
    if (above && above.first <= number) return false;
    const below = this.held[at - 1];
    const joinsBelow = below !== undefined && below.last + 1n === number;
    const joinsAbove = above !== undefined && above.first - 1n === number;
    if (joinsBelow) {
      below.last = joinsAbove ? above.last : number;
      this.touched.add(below);
      if (joinsAbove) this.remove(at, above);
    } else if (joinsAbove) {
      this.gone.add(above.first);
      above.first = number;
      this.touched.add(above);
    } else {
      const range = { first: number, last: number, sinceMs: nowMs };
      this.held.splice(at, 0, range);
      this.touched.add(range);
      // What was the lowest has a gap before it now.
      if (at === 0 && above) {
        above.sinceMs = nowMs;
        this.touched.add(above);
      }
    }
    return true;
  }

  /** What became of the ranges above the lowest since the last time: those to delete by their first number, those to write. */
  settle(): { readonly gone: readonly bigint[]; readonly written: readonly Readonly<HeldRange>[] } {
    const written = [...this.touched].filter((range) => range !== this.held[0]);
    const firsts = new Set(written.map(({ first }) => first));
    const gone = [...this.gone].filter((first) => !firsts.has(first));
    this.touched.clear();
    this.gone.clear();
    return { gone, written };
  }

  private remove(at: number, range: HeldRange): void {
    this.held.splice(at, 1);
    this.touched.delete(range);
    this.gone.add(range.first);
  }

  /** Index of the first range whose last number is not below. */
  private indexFrom(number: bigint): number {
    const highest = this.held.at(-1);
    if (highest === undefined || highest.last < number) return this.held.length;
    let low = 0;
    let high = this.held.length;
    while (low < high) {
      const middle = (low + high) >>> 1;
      const range = this.held[middle];
      if (range !== undefined && range.last < number) low = middle + 1;
      else high = middle;
    }
    return low;
  }
}
