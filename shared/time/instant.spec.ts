import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { addPicoseconds, compareInstants, instantOf, nanosecondsOf, picosecondsBetween, PS_PER_S, secondsBetween } from './instant';

describe('an instant', () => {
  it.each([
    [0, 0, 0, 0],
    [5, PS_PER_S - 1, 5, PS_PER_S - 1],
    [5, PS_PER_S, 6, 0],
    [5, -1, 4, PS_PER_S - 1],
    [5, -PS_PER_S, 4, 0],
    [-1, 2.5 * PS_PER_S, 1, 0.5 * PS_PER_S],
    [1.7e9, -8_999 * PS_PER_S - 1, 1.7e9 - 9000, PS_PER_S - 1],
  ])('carries %i s and %i ps', (taiS, ps, carriedS, carriedPs) => {
    expect(instantOf(taiS, ps)).toEqual({ taiS: carriedS, ps: carriedPs });
  });

  it('is ordered by seconds, then picoseconds', () => {
    const a = { taiS: 7, ps: 5 };
    expect(compareInstants(a, { taiS: 7, ps: 5 })).toBe(0);
    expect(compareInstants(a, { taiS: 7, ps: 6 })).toBeLessThan(0);
    expect(compareInstants({ taiS: 8, ps: 0 }, a)).toBeGreaterThan(0);
  });

  it('moves by picoseconds and the difference gives them back, signs swapped when the two are', () => {
    const ps = fc.integer({ min: -1000 * PS_PER_S, max: 1000 * PS_PER_S });
    fc.assert(
      fc.property(fc.integer({ min: -1e10, max: 1e10 }), fc.integer({ min: 0, max: PS_PER_S - 1 }), ps, (taiS, within, moved) => {
        const a = { taiS, ps: within };
        const b = addPicoseconds(a, moved);
        expect(b.ps).toBeGreaterThanOrEqual(0);
        expect(b.ps).toBeLessThan(PS_PER_S);
        expect(picosecondsBetween(a, b)).toBe(moved);
        expect(picosecondsBetween(b, a) + moved).toBe(0);
        // A double of 1,000 s is spaced by 1.1e-13 s (IEEE 754-2019, binary64), well below the picosecond of an instant.
        expect(Math.abs(secondsBetween(a, b) - moved / PS_PER_S)).toBeLessThan(1e-12);
      }),
    );
  });

  it('is so many nanoseconds from another, the same within a second and across its end', () => {
    const ps = fc.integer({ min: 0, max: PS_PER_S - 1 });
    fc.assert(
      fc.property(ps, ps, (within, apart) => {
        const a = { taiS: 5, ps: within };
        const b = addPicoseconds(a, apart);
        // The double nearest to the decimal, as a file with so many nanoseconds is read.
        const text = String(apart).padStart(4, '0');
        expect(nanosecondsOf(b.taiS - a.taiS, b.ps - a.ps)).toBe(Number(`${text.slice(0, -3)}.${text.slice(-3)}`));
      }),
    );
  });
});
