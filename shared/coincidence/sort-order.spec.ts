import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { sortOrder } from './sort-order';

const orderOf = (keys: readonly number[]): number[] => Array.from(sortOrder(keys.length, (a, b) => keys[a]! - keys[b]!));

describe('sortOrder', () => {
  it('orders nothing and one row', () => {
    expect(orderOf([])).toEqual([]);
    expect(orderOf([5])).toEqual([0]);
  });

  it('leaves sorted rows and rows that are all equal as they are', () => {
    expect(orderOf([1, 2, 3, 4])).toEqual([0, 1, 2, 3]);
    expect(orderOf([7, 7, 7])).toEqual([0, 1, 2]);
  });

  it('swaps two rows and reverses a descending log', () => {
    expect(orderOf([2, 1])).toEqual([1, 0]);
    expect(orderOf([5, 4, 3, 2, 1])).toEqual([4, 3, 2, 1, 0]);
  });

  it('asks once a row when the log is sorted by itself', () => {
    let asked = 0;
    sortOrder(1_000, (a, b) => {
      asked++;
      return a - b;
    });
    expect(asked).toBe(999);
  });

  it('is the stable order of any rows', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 0, max: 20 }), { maxLength: 200, size: 'max' }), (keys) => {
        expect(orderOf(keys)).toEqual(keys.map((_, row) => row).sort((a, b) => keys[a]! - keys[b]! || a - b));
      }),
    );
  });
});
