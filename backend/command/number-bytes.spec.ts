import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { MOST_NUMBER_BYTES, putNumber } from './number-bytes';

const bytes = new Uint8Array(MOST_NUMBER_BYTES + 8);

/** The text of a number, or undefined where it is not written. */
function textOf(value: number): string | undefined {
  const end = putNumber(value, bytes, 4);
  return end < 0 ? undefined : Buffer.from(bytes.subarray(4, end)).toString('latin1');
}

/** What reads back, or the number itself where it is left to JSON. */
const readBack = (value: number): number => {
  const text = textOf(value);
  return text === undefined ? value : Number(text);
};

describe('putNumber', () => {
  it('writes what people write as they write it', () => {
    expect([36.9, -12.5, 1830.2, 20.125, 8.001, -4096, 6374000000.003].map(textOf)).toEqual([
      '36.9',
      '-12.5',
      '1830.2',
      '20.125',
      '8.001',
      '-4096',
      '6374000000.003',
    ]);
  });

  it('writes whole picoseconds as nanoseconds with three decimals at most', () => {
    fc.assert(
      fc.property(fc.integer({ min: 8_000, max: 9_000_000_000_000_000 }), (ps) => {
        expect(textOf(ps / 1e3) ?? String(ps / 1e3)).toBe(String(ps / 1e3));
      }),
      { numRuns: 20_000 },
    );
  });

  it('leaves to others what is small, huge or no number', () => {
    for (const value of [0, -0, 1.5, -7.999, 2 ** 43, 1e300, Infinity, -Infinity, NaN, 5e-324]) expect(textOf(value)).toBeUndefined();
  });

  it('reads back as the same double next to every power of two, whole number and half', () => {
    for (let exponent = 3; exponent <= 42; exponent++) {
      for (const base of [
        2 ** exponent,
        1.5 * 2 ** exponent,
        2 ** exponent + 0.5,
        2 ** (exponent + 1) - 1,
        Math.PI * 2 ** (exponent - 1),
      ]) {
        const ulp = 2 ** (exponent - 52);
        for (let steps = -20; steps <= 20; steps++) expect(readBack(base + steps * ulp)).toBe(base + steps * ulp);
      }
    }
  });

  it('reads back as the same double anywhere', () => {
    const significand = fc.double({ min: 1, max: 2, maxExcluded: true, noNaN: true });
    const value = fc.tuple(significand, fc.integer({ min: 3, max: 42 }), fc.boolean());
    fc.assert(
      fc.property(value, ([digits, exponent, isNegative]) => {
        const number = (isNegative ? -1 : 1) * digits * 2 ** exponent;
        const text = textOf(number);
        expect(text).toBeDefined();
        expect(Number(text)).toBe(number);
      }),
      { numRuns: 20_000 },
    );
  });

  it('reads back as the same double for decimals of any length', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 8, max: 9_000_000 }),
        fc.integer({ min: 0, max: 999_999_999 }),
        fc.integer({ min: 0, max: 9 }),
        (whole, part, places) => {
          const number = Number(`${whole}.${String(part).slice(0, places)}`);
          expect(readBack(number)).toBe(number);
        },
      ),
      { numRuns: 20_000 },
    );
  });

  it('takes no more bytes than it says, and no shorter text than reads back is missed by more than two digits', () => {
    fc.assert(
      fc.property(fc.double({ min: 8, max: 2 ** 43, maxExcluded: true, noNaN: true }), (number) => {
        const text = textOf(-number) ?? '';
        expect(text.length).toBeLessThanOrEqual(MOST_NUMBER_BYTES);
        expect(text.length).toBeLessThanOrEqual(String(-number).length + 2);
      }),
    );
  });
});
