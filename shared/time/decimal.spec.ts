import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { addDecimals, decimalOf, digitsAt, floorDivide, nearestDivide, shiftDecimal, splitDecimal } from './decimal';

describe('a decimal', () => {
  it.each([
    [0, 0n, 0],
    [-0, 0n, 0],
    [412.5, 4125n, 1],
    [-0.1, -1n, 1],
    [1e21, 10n ** 21n, 0],
    [1.5e-7, 15n, 8],
    [-2.5e22, -25n * 10n ** 21n, 0],
  ])('of %d is what was written', (value, digits, places) => {
    expect(decimalOf(value)).toEqual({ digits, places });
  });

  it.each([NaN, Infinity, -Infinity])('of %d does not exist', (value) => {
    expect(() => decimalOf(value)).toThrow(RangeError);
  });

  it('reads back as the same double', () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (value) => {
        const { digits, places } = decimalOf(value);
        expect(Number(`${digits}e${-places}`)).toBe(value + 0);
      }),
    );
  });

  it('adds and shifts without the errors of doubles', () => {
    expect(addDecimals(decimalOf(0.1), decimalOf(0.2))).toEqual(decimalOf(0.3));
    expect(shiftDecimal(decimalOf(0.0005), 3)).toEqual({ digits: 5n, places: 1 });
    expect(shiftDecimal(decimalOf(1.5), 3)).toEqual({ digits: 1500n, places: 0 });
    expect(digitsAt(decimalOf(1.5), 3)).toBe(1500n);
  });

  it.each([
    [2.25, 2n, 0.25],
    [-2.25, -3n, 0.75],
    [-3, -3n, 0],
    [0.1, 0n, 0.1],
    [1e-300, 0n, 1e-300],
  ])('%d is split into the whole below and the rest', (value, whole, rest) => {
    expect(splitDecimal(decimalOf(value))).toEqual({ whole, rest });
  });
});

describe('division of whole numbers', () => {
  it.each([
    [7n, 2n, 3n, 4n],
    [5n, 2n, 2n, 2n],
    [-5n, 2n, -3n, -2n],
    [-7n, 2n, -4n, -4n],
    [6n, 2n, 3n, 3n],
    [-6n, 2n, -3n, -3n],
    [-1n, 3n, -1n, 0n],
    [-2n, 3n, -1n, -1n],
    [0n, 3n, 0n, 0n],
  ])('%d by %d', (dividend, divisor, floor, nearest) => {
    expect(floorDivide(dividend, divisor)).toBe(floor);
    expect(nearestDivide(dividend, divisor)).toBe(nearest);
  });
});
