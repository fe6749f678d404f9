/** A number exactly as it is written in decimals: digits x 10^-places. */
export interface Decimal {
  readonly digits: bigint;
  /** Decimal places, 0 or more. */
  readonly places: number;
}

/**
 * The decimal that a finite number stands for: the shortest one that reads back as the same double, which is what a file said.
 *
 * A number that is not finite is our own mistake and throws.
 */
export function decimalOf(value: number): Decimal {
  if (!Number.isFinite(value)) throw new RangeError(`${value} has no decimals`);
  const [mantissa = '', exponentText = '0'] = String(value).split('e');
  const [whole = '', fraction = ''] = mantissa.split('.');
  return withPlaces(BigInt(whole + fraction), fraction.length - Number(exponentText));
}

/** Times 10^power, exactly. */
export function shiftDecimal(decimal: Decimal, power: number): Decimal {
  return withPlaces(decimal.digits, decimal.places - power);
}

/** The sum of two decimals, exactly. */
export function addDecimals(a: Decimal, b: Decimal): Decimal {
  const places = Math.max(a.places, b.places);
  return { digits: digitsAt(a, places) + digitsAt(b, places), places };
}

/** The digits of a decimal when written with so many places (at least its own). */
export function digitsAt(decimal: Decimal, places: number): bigint {
  return decimal.digits * 10n ** BigInt(places - decimal.places);
}

/** A decimal as the whole number below it, exactly, and the rest in [0, 1) as the nearest double. */
export function splitDecimal(decimal: Decimal): { readonly whole: bigint; readonly rest: number } {
  const one = 10n ** BigInt(decimal.places);
  const whole = floorDivide(decimal.digits, one);
  const rest = decimal.digits - whole * one;
  return { whole, rest: Number(`0.${String(rest).padStart(decimal.places, '0')}`) };
}

/** The quotient of whole numbers, rounded down; the divisor is positive. */
export function floorDivide(dividend: bigint, divisor: bigint): bigint {
  const quotient = dividend / divisor;
  return dividend < 0n && quotient * divisor !== dividend ? quotient - 1n : quotient;
}

/** The quotient of whole numbers, rounded to the nearest, halves to the even neighbour; the divisor is positive. */
export function nearestDivide(dividend: bigint, divisor: bigint): bigint {
  const below = floorDivide(dividend, divisor);
  const twiceRest = (dividend - below * divisor) * 2n;
  return twiceRest > divisor || (twiceRest === divisor && below % 2n !== 0n) ? below + 1n : below;
}

function withPlaces(digits: bigint, places: number): Decimal {
  return places < 0 ? { digits: digits * 10n ** BigInt(-places), places: 0 } : { digits, places };
}
