import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { HeldNumbers, type HeldRange } from './held-numbers';

const spans = (held: HeldNumbers): string => held.ranges.map(({ first, last }) => `${first}-${last}`).join(' ');

/** What a table of ranges above the lowest would hold after each settling. */
function follow(table: Map<bigint, bigint>, held: HeldNumbers): void {
  const { gone, written } = held.settle();
  for (const first of gone) table.delete(first);
  for (const { first, last } of written) table.set(first, last);
}

describe('held numbers', () => {
  it('join where they touch, and leave gaps where they do not', () => {
    const held = new HeldNumbers();
    for (const number of [5n, 6n, 9n, 8n, 20n, 7n]) held.add(number, 1);
    expect(spans(held)).toBe('5-9 20-20');
    expect(held.has(8n)).toBe(true);
    expect(held.has(10n)).toBe(false);
    expect(held.add(20n, 2)).toBe(false);
  });

  it('begin lower when a lower number comes, with a gap before what was the lowest, noticed then', () => {
    const held = new HeldNumbers();
    held.add(5n, 1);
    held.add(3n, 7);
    expect(held.ranges).toEqual<HeldRange[]>([
      { first: 3n, last: 3n, sinceMs: 7 },
      { first: 5n, last: 5n, sinceMs: 7 },
    ]);
  });

  it('are whole numbers of any size', () => {
    const held = new HeldNumbers();
    const huge = 10n ** 40n;
    held.add(huge, 1);
    held.add(huge + 1n, 1);
    expect(spans(held)).toBe(`${huge}-${huge + 1n}`);
  });

  it('are the same ranges in any order, and what is told to be written makes the same table', () => {
    const numbers = fc.uniqueArray(fc.bigInt({ min: 0n, max: 40n }), { minLength: 1 });
    fc.assert(
      fc.property(
        numbers.chain((list) => fc.tuple(fc.constant(list), fc.shuffledSubarray(list, { minLength: list.length }), fc.nat(5))),
        ([list, shuffled, every]) => {
          const inOrder = new HeldNumbers();
          for (const number of list.toSorted((a, b) => (a < b ? -1 : 1))) inOrder.add(number, 1);
          const held = new HeldNumbers();
          const table = new Map<bigint, bigint>();
          for (const [at, number] of shuffled.entries()) {
            expect(held.add(number, at)).toBe(true);
            if (at % (every + 1) === 0) follow(table, held);
          }
          follow(table, held);
          expect(spans(held)).toBe(spans(inOrder));
          expect([...table].toSorted(([a], [b]) => (a < b ? -1 : 1))).toEqual(held.ranges.slice(1).map(({ first, last }) => [first, last]));
        },
      ),
    );
  });
});
