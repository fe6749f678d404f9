import { type HeldSeries } from '#shared/contract/site-socket';

const DIGITS = /^\d+$/;
const plain = (digits: string): string => digits.replace(/^0+(?=\d)/, '');

/** Whole numbers as digits without leading zeros, of any size: more digits are more. */
const isAtMost = (a: string, b: string): boolean => (a.length === b.length ? a <= b : a.length < b.length);

/**
 * Whether a number of a series is among those that are held.
 *
 * @param held as the server said it
 * @param series the numbering, empty for the usual one
 * @param sequence digits; anything else is not held
 */
export function heldBy(held: readonly HeldSeries[], series: string, sequence: string): boolean {
  const found = held.find((one) => one.series === series);
  if (!found || !DIGITS.test(sequence)) return false;
  const number = plain(sequence);
  const within = (first: string, last: string): boolean => isAtMost(first, number) && isAtMost(number, last);
  if (found.first !== null && found.contiguous !== null && within(found.first, found.contiguous)) return true;
  return found.held.some(({ first, last }) => within(first, last));
}
