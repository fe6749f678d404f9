import * as z from 'zod';

/** A number that is infinite where an error is 0, as it crosses the wire: JSON has no infinity, and null would mean that there is none. */
export type Unbounded = number | 'Infinity' | '-Infinity';

export const unbounded = () => z.union([z.number(), z.literal('Infinity'), z.literal('-Infinity')]);

/** A number made ready for the wire; never NaN. */
export function toUnbounded(value: number): Unbounded {
  if (value === Infinity) return 'Infinity';
  return value === -Infinity ? '-Infinity' : value;
}

/** A number as it came over the wire. */
export const fromUnbounded = (value: Unbounded): number => Number(value);
