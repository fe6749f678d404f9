import { describe, expect, it } from 'vitest';
import { densityOf, inkOf } from './density';

describe('the density of events', () => {
  it('counts each point in its cell, and none outside the box', () => {
    const points = [[0, 0], [1.9, 1.9], [2, 0], [3.9, 3.9], [4, 0], [-0.1, 0], [0, 99]] as const; // prettier-ignore
    const { columns, rows, counts, most } = densityOf(
      points.length,
      (i) => points[i]?.[0] ?? 0,
      (i) => points[i]?.[1] ?? 0,
      { width: 4, height: 4, cell: 2 },
    );
    expect([columns, rows, [...counts], most]).toEqual([2, 2, [2, 1, 0, 1], 2]);
  });

  it('inks one event so that it is seen, and the most fully', () => {
    expect(inkOf(0, 900)).toBe(0);
    expect(inkOf(1, 900)).toBeGreaterThan(0.15);
    expect(inkOf(900, 900)).toBe(1);
    expect(inkOf(1, 1)).toBe(1);
  });
});
