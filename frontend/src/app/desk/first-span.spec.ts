import { describe, expect, it } from 'vitest';
import { firstSpanMs } from './first-span';

const BELOW = 0.28; // of the picture lies below the event from which the baseline goes

describe('what a picture along a baseline shows at first', () => {
  it.each([
    [0.1, 0.05, 0.5],
    [0.02, -0.1, 0.5],
    [20, 3, 100],
    [42.5, 10, 200],
    [0, 500, 1_000],
    [1e-7, 0, 1e-3],
  ])('of %d ms of light and %d ms is %d ms', (lightMs, apartMs, spanMs) => {
    expect(firstSpanMs(lightMs, apartMs)).toBe(spanMs);
  });
  it('is as usual where the ends are one point', () => {
    expect(firstSpanMs(0, 0)).toBeUndefined();
  });
  it('has room for the other end above and below, and is no more than ten times what it needs', () => {
    for (let larger = 1e-3; larger < 250; larger *= 1.07) {
      const spanMs = firstSpanMs(larger / 2, -larger) ?? 0;
      expect(larger).toBeLessThan(BELOW * spanMs);
      expect(spanMs).toBeLessThan(10 * larger);
    }
  });
});
