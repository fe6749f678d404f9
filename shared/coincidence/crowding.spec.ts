import { describe, expect, it } from 'vitest';
import { isSurelyCrowded, mostSets } from './crowding';

/** Rows of sites in turn: row r is of site r mod the number of sites. */
function laterOf(perSite: readonly number[]): Parameters<typeof isSurelyCrowded>[0] {
  const sites = perSite.flatMap((count, site) => Array.from({ length: count }, () => site));
  return { rows: Int32Array.from(sites.keys()), siteOf: (row) => sites[row]!, perSite: Int32Array.from(perSite) };
}
const always = (): boolean => true;

describe('mostSets', () => {
  it('lets each site give one of its triggers or none', () => {
    expect(mostSets(Int32Array.of())).toBe(1);
    expect(mostSets(Int32Array.of(0, 0))).toBe(1);
    expect(mostSets(Int32Array.of(2, 0, 4))).toBe(15);
  });
});

describe('isSurelyCrowded', () => {
  it('is not sure when the limit is just reached, and sure one past it', () => {
    expect(isSurelyCrowded(laterOf([3, 4, 5]), always, 60)).toBe(false);
    expect(isSurelyCrowded(laterOf([3, 4, 5]), always, 59)).toBe(true);
    expect(isSurelyCrowded(laterOf([0, 7]), always, 7)).toBe(false);
    expect(isSurelyCrowded(laterOf([0, 7]), always, 6)).toBe(true);
  });

  it('counts across the words of its bits', () => {
    for (const [first, second] of [
      [31, 33],
      [32, 40],
      [64, 32],
    ] as const) {
      expect(isSurelyCrowded(laterOf([first, second]), always, first * second - 1)).toBe(true);
      expect(isSurelyCrowded(laterOf([first, second]), always, first * second)).toBe(false);
    }
    expect(isSurelyCrowded(laterOf([33, 33]), always, 33 * 33 - 1)).toBe(true);
    expect(isSurelyCrowded(laterOf([33, 33]), always, 33 * 33)).toBe(false);
  });

  it('counts only sets whose triggers are all near each other', () => {
    const later = laterOf([5, 5]);
    const notSameRank = (a: number, b: number): boolean => a % 5 !== b % 5;
    expect(isSurelyCrowded(later, notSameRank, 19)).toBe(true);
    expect(isSurelyCrowded(later, notSameRank, 20)).toBe(false);
    expect(isSurelyCrowded(later, () => false, 1)).toBe(false);
  });

  it('looks at a few triggers of each site, however many there are', () => {
    let asked = 0;
    const counted = (): boolean => {
      asked++;
      return true;
    };
    expect(isSurelyCrowded(laterOf([4_000, 4_000, 4_000, 4_000, 4_000]), counted, 10_000)).toBe(true);
    expect(asked).toBeLessThanOrEqual((80 * 80) / 2);
  });
});
