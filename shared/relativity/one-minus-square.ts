import { type Vec3 } from './vector';

/** Splits a double into two halves of 26 bits (Veltkamp): 2^27 + 1. */
const SPLITTER = 134_217_729;

/** The rounding error of a * a, exact for |a| below 2^500. Source: Dekker 1971, Numer. Math. 18, 224, sect. 5. */
function squareError(a: number, square: number): number {
  const c = SPLITTER * a;
  const high = c - (c - a);
  const low = a - high;
  return low * low - (square - high * high - 2 * high * low);
}

/** The rounding error of a + b = sum, exact. Source: Knuth, The Art of Computer Programming, vol. 2, sect. 4.2.2, theorem B. */
function sumError(a: number, b: number, sum: number): number {
  const part = sum - a;
  return a - (sum - part) + (b - part);
}

/**
 * 1 - |a|^2 of the very doubles given, which plain arithmetic loses where |a| is near 1.
 *
 * @param a three components, each of size at most 1
 * @returns 1 - |a|^2, relative error below 1e-15 even where it is as small as 1e-16; its sign is that of the exact value
 */
export function oneMinusSquare(a: Vec3): number {
  let sum = 1;
  let error = 0;
  for (const component of a) {
    const square = component * component;
    const next = sum - square;
    error += sumError(sum, -square, next) - squareError(component, square);
    sum = next;
  }
  return sum + error;
}
