import { describe, expect, it } from 'vitest';
import { oneScale, type Sight, sightAfter, sightZoomed } from './one-scale';

const BOX = { left: 50, top: 30, width: 400, height: 600 };
const SIGHT: Sight = { leftMs: -3, topMs: 30, pxPerMs: 10 };
const LIMITS = { leastPxPerMs: 0.1, mostPxPerMs: 1000 };

describe('the scale of both axes', () => {
  it('has light at 45 degrees, time up, and is the same across and up', () => {
    const { x, y } = oneScale(SIGHT, BOX);
    expect([x(-3), y(30)]).toEqual([50, 30]);
    expect(x(4) - x(0)).toBeCloseTo(40, 9);
    expect(y(0) - y(4)).toBeCloseTo(40, 9);
  });

  it('keeps what is under the pointer there, at one factor for both axes', () => {
    const [u, v, k] = [150, 330, 2.5];
    const before = oneScale(SIGHT, BOX);
    const after = oneScale(sightAfter(SIGHT, BOX, { k: 1, x: 0, y: 0 }, { k, x: u * (1 - k), y: v * (1 - k) }, LIMITS), BOX);
    expect(after.x.invert(u)).toBeCloseTo(before.x.invert(u), 9);
    expect(after.y.invert(v)).toBeCloseTo(before.y.invert(v), 9);
    expect(after.x(1) - after.x(0)).toBeCloseTo(25, 9);
    expect(after.y(0) - after.y(1)).toBeCloseTo(25, 9);
  });

  it('moves with a drag, whatever zoom went before', () => {
    const after = oneScale(sightAfter(SIGHT, BOX, { k: 3, x: 7, y: 9 }, { k: 3, x: 27, y: -31 }, LIMITS), BOX);
    const before = oneScale(SIGHT, BOX);
    expect(after.x(0) - before.x(0)).toBeCloseTo(20, 9);
    expect(after.y(0) - before.y(0)).toBeCloseTo(-40, 9);
  });

  it('stops at its limits without a jump', () => {
    const limits = { leastPxPerMs: 9, mostPxPerMs: 12 };
    const after = sightZoomed(SIGHT, BOX, 100, limits);
    expect(after.pxPerMs).toBe(12);
    const middle = (sight: Sight) => oneScale(sight, BOX).x.invert(250);
    expect(middle(after)).toBeCloseTo(middle(SIGHT), 9);
    expect(sightZoomed(after, BOX, 100, limits)).toEqual(after);
  });
});
