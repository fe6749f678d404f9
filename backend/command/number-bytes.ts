/**
 * Doubles as decimal digits, written straight into bytes.
 *
 * The shortest digits that read back as the same double (String, JSON.stringify) cost more than all else that is done to an event. Digits that
 * are one longer now and then, and read back just as well, cost a sixth.
 */

const ZERO = 0x30;
const POINT = 0x2e;
const MINUS = 0x2d;

/** Below 2^3 fifteen decimals are too few, from 2^43 on whole numbers are; those go the way of JSON. */
const LEAST_EXPONENT = 3;
const MOST_EXPONENT = 42;
/** Numbers of a few decimals, as people and clocks write them, are looked for first. */
const FEW_DECIMALS = 3;

/** No number takes more bytes than this: sign, 13 digits, point, 15 decimals. */
export const MOST_NUMBER_BYTES = 32;

/** A unit in the last place, by exponent less LEAST_EXPONENT. */
const ULPS = Array.from({ length: MOST_EXPONENT - LEAST_EXPONENT + 1 }, (_, k) => 2 ** (k + LEAST_EXPONENT - 52));
/** Decimals whose last one is less than 0.8 of that unit: the decimal that is nearest is then nearest to no other double. */
const DECIMALS = ULPS.map((ulp) => Math.ceil(-Math.log10(0.8 * ulp)));
const POWERS = Array.from({ length: 16 }, (_, k) => 10 ** k);

const double = new Float64Array(1);
const words = new Uint32Array(double.buffer);
/** Which word has the exponent on this machine. */
const HIGH = new Uint32Array(Float64Array.of(1).buffer)[1] === 0 ? 0 : 1;

/**
 * Writes a number so that reading it back gives the same double.
 *
 * @param value any double, not an integer beyond 2^53
 * @param bytes where to write, with room for MOST_NUMBER_BYTES
 * @param at first byte
 * @returns the byte behind the last one; -1 when the number is none of those that can be written so, and nothing was written
 */
export function putNumber(value: number, bytes: Uint8Array, at: number): number {
  double[0] = value;
  const exponent = (((words[HIGH] ?? 0) >>> 20) & 0x7ff) - 1023;
  if (exponent < LEAST_EXPONENT || exponent > MOST_EXPONENT) return -1;
  let end = at;
  if (value < 0) bytes[end++] = MINUS;
  const size = Math.abs(value);
  const whole = Math.floor(size);
  end = putWhole(whole, bytes, end);
  const fraction = size - whole; // exact
  if (fraction === 0) return end;
  // A quotient of whole numbers is the double nearest to it, so a decimal that divides back to the number reads back as it too.
  const few = Math.round(fraction * 1e3);
  const thousandths = whole * 1e3 + few;
  if (thousandths / 1e3 === size && Number.isSafeInteger(thousandths)) return putDecimals(few, FEW_DECIMALS, bytes, end);
  const decimals = DECIMALS[exponent - LEAST_EXPONENT] ?? 0;
  const power = POWERS[decimals] ?? 1;
  const shorter = Math.round((fraction * power) / 10);
  if (10 * shorter < power && isNearest((10 * shorter) / power - fraction, exponent)) return putDecimals(shorter, decimals - 1, bytes, end);
  return putDecimals(Math.round(fraction * power), decimals, bytes, end);
}

/** Whether a decimal so far from the number is surely nearer to it than to any other double; 0.45 leaves room for the rounding of the distance. */
function isNearest(apart: number, exponent: number): boolean {
  return Math.abs(apart) < 0.45 * (ULPS[exponent - LEAST_EXPONENT] ?? 0);
}

/** The digits of a whole number below 2^43, without leading zeros. */
function putWhole(whole: number, bytes: Uint8Array, at: number): number {
  let length = 1;
  while (length < 15 && (POWERS[length] ?? 0) <= whole) length++;
  putDigits(whole, length, bytes, at);
  return at + length;
}

/** Point and decimals, without trailing zeros. */
function putDecimals(digits: number, decimals: number, bytes: Uint8Array, at: number): number {
  bytes[at] = POINT;
  putDigits(digits, decimals, bytes, at + 1);
  let end = at + 1 + decimals;
  while (bytes[end - 1] === ZERO) end--;
  return end;
}

/** A whole number below 10^15 with leading zeros; halves of up to eight digits, since small integers divide fast. */
function putDigits(value: number, length: number, bytes: Uint8Array, at: number): void {
  const high = Math.floor(value / 1e8);
  let low = (value - high * 1e8) | 0;
  let rest = high | 0;
  const split = Math.max(0, length - 8);
  for (let k = length - 1; k >= split; k--) {
    const tenth = (low / 10) | 0;
    bytes[at + k] = ZERO + low - tenth * 10;
    low = tenth;
  }
  for (let k = split - 1; k >= 0; k--) {
    const tenth = (rest / 10) | 0;
    bytes[at + k] = ZERO + rest - tenth * 10;
    rest = tenth;
  }
}
