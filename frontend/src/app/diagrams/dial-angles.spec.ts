import { describe, expect, it } from 'vitest';
import { dialAngles } from './dial-angles';

describe('the dial of a pair', () => {
  it('has light at 45 degrees, one place upright, one instant flat', () => {
    expect(dialAngles(7, 7, 0).deg).toBeCloseTo(45, 12);
    expect(dialAngles(7, 0, 0).deg).toBe(90);
    expect(dialAngles(0, 7, 0).deg).toBe(0);
  });
  it('has its error as a wedge on both sides, cut at the edge of the dial', () => {
    const { fromDeg, deg, toDeg } = dialAngles(2, 10, 1);
    expect(fromDeg).toBeCloseTo(5.710593, 5); // atan 0.1
    expect(deg).toBeCloseTo(11.309932, 5); // atan 0.2
    expect(toDeg).toBeCloseTo(16.699244, 5); // atan 0.3
    expect(dialAngles(2, 10, 5).fromDeg).toBe(0);
  });
});
