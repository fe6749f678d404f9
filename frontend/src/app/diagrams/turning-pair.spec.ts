import { describe, expect, it } from 'vitest';
import { fourVelocity, speedC } from '#shared/relativity/velocity';
import { placesInAllFrames, seenFrom, turningFrame } from './turning-pair';

const ROUNDING_MS = 1e-12; // a few units in the last place of numbers near 40
const pair = { xMs: 36, tMs: 13.2 };
const PROPER_MS = Math.sqrt(36 * 36 - 13.2 * 13.2);

describe('the picture of one pair', () => {
  it('has the moving frame at 0.6 c place it by the numbers of the 3-4-5 triangle', () => {
    // gamma = 1.25, gamma beta = 0.75, exact by hand: x' = 1.25 (36 - 0.6 x 13.2), t' = 1.25 (13.2 - 0.6 x 36)
    const seen = seenFrom(pair, fourVelocity([0.75, 0, 0]));
    expect(Math.abs(seen.xMs - 35.1)).toBeLessThan(ROUNDING_MS);
    expect(Math.abs(seen.tMs + 10.5)).toBeLessThan(ROUNDING_MS);
  });

  it('turns at 13.2 / 36 of c, where the pair is simultaneous at its proper distance', () => {
    const turning = turningFrame(pair);
    expect(turning && speedC(turning)).toBeCloseTo(13.2 / 36, 12);
    const seen = turning && seenFrom(pair, turning);
    expect(Math.abs(seen?.tMs ?? Number.NaN)).toBeLessThan(ROUNDING_MS);
    expect(Math.abs((seen?.xMs ?? Number.NaN) - PROPER_MS)).toBeLessThan(ROUNDING_MS);
  });

  it.each([13.2, -13.2, 0])('draws the curve from early to late, evenly about the turn and through the pair, %s ms after A', (tMs) => {
    const reach = Math.atanh(Math.abs(tMs) / 36); // rapidity from the turn to rest
    const [early, turn, late] = placesInAllFrames({ xMs: 36, tMs }, reach, 2);
    expect(turn?.tMs).toBeCloseTo(0, 12);
    expect(turn?.xMs).toBeCloseTo(Math.sqrt(36 * 36 - tMs * tMs), 12);
    expect(late?.xMs).toBeCloseTo(36, 12);
    expect(late?.tMs).toBeCloseTo(Math.abs(tMs), 12);
    expect(early?.tMs).toBeCloseTo(-Math.abs(tMs), 12);
  });

  it('draws no curve and names no turning frame for a pair that light joins', () => {
    expect(placesInAllFrames({ xMs: 36, tMs: 36 }, 1, 2)).toEqual([]);
    expect(turningFrame({ xMs: 36, tMs: 36 })).toBeUndefined();
  });
});
