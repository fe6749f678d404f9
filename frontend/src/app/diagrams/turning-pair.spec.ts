import { describe, expect, it } from 'vitest';
import { placesInAllFrames, seenFrom, turningSpeedC } from './turning-pair';

const ROUNDING_MS = 1e-12; // a few units in the last place of numbers near 40
const pair = { xMs: 36, tMs: 13.2 };

describe('the picture of one pair', () => {
  it('keeps the interval in every frame', () => {
    for (const velocityC of [-0.9, -0.3, 0, 0.5, 0.8]) {
      const { xMs, tMs } = seenFrom(pair, velocityC);
      expect(xMs * xMs - tMs * tMs).toBeCloseTo(36 * 36 - 13.2 * 13.2, 9);
    }
  });

  it('has the moving frame at 0.6 c place it by the numbers of the 3-4-5 triangle', () => {
    // gamma = 1.25, exact by hand: x' = 1.25 (36 - 0.6 x 13.2), t' = 1.25 (13.2 - 0.6 x 36)
    const seen = seenFrom(pair, 0.6);
    expect(Math.abs(seen.xMs - 35.1)).toBeLessThan(ROUNDING_MS);
    expect(Math.abs(seen.tMs + 10.5)).toBeLessThan(ROUNDING_MS);
  });

  it('turns the order at the turning speed and not before', () => {
    const speedC = turningSpeedC(pair);
    expect(Math.abs(seenFrom(pair, speedC).tMs)).toBeLessThan(ROUNDING_MS);
    expect(seenFrom(pair, speedC - 1e-6).tMs).toBeGreaterThan(0);
    expect(seenFrom(pair, speedC + 1e-6).tMs).toBeLessThan(0);
  });

  it('draws the curve through the pair as it is at rest', () => {
    const curve = placesInAllFrames(pair, 13.2, 2);
    expect(curve).toHaveLength(3);
    expect(curve[2]?.xMs).toBeCloseTo(36, 12);
    expect(curve[1]?.tMs).toBe(0);
  });
});
