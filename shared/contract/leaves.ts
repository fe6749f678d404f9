import * as z from 'zod';
import { CODE_RIGHT, isCode } from '../reconcile/code';

/**
 * Leaves of schemas whose message is not what was wrong but what would be right; the path and the value are put before it by
 * `firstProblem`. What they say of themselves with `meta` stands in the JSON Schema of what is made of them.
 */

/** A finite number that passes a check, with its unit and limits in words. */
export const numberThat = (right: string, check: (value: number) => boolean = () => true) =>
  z
    .custom<number>((value) => typeof value === 'number' && Number.isFinite(value) && check(value), { error: right })
    .meta({ type: 'number' });

export const notNegative = (unit: string) => numberThat(`a number of ${unit}, 0 or more`, (value) => value >= 0);

export const text = (right: string) => z.custom<string>((value) => typeof value === 'string', { error: right }).meta({ type: 'string' });

export const oneOf = <const T extends string>(...allowed: readonly T[]) =>
  z
    .custom<T>((value) => allowed.some((word) => word === value), { error: `one of ${allowed.map((word) => `"${word}"`).join(', ')}` })
    .meta({ enum: [...allowed] });

export const code = () =>
  z.custom<string>((value) => typeof value === 'string' && isCode(value), { error: `a code of ${CODE_RIGHT}` }).meta({ type: 'string' });

export const listOf = <T extends z.ZodType>(item: T, what: string) => z.array(item, { error: `a list of ${what}` });

/** Three finite numbers; `right` says what the list holds, each part what it is. */
export const triple = (right: string, part: string) => z.tuple([numberThat(part), numberThat(part), numberThat(part)], { error: right });

const INSTANT_RIGHT =
  'an instant of TAI: { "taiS": whole seconds since 1970-01-01T00:00:00 TAI, "ps": whole picoseconds, 0 to 999999999999 }';

/** An instant as it crosses the wire: two whole numbers, since no double holds both an era and a picosecond. */
export const instant = () =>
  z.strictObject(
    {
      taiS: numberThat('whole seconds of TAI', Number.isSafeInteger),
      ps: numberThat('whole picoseconds, 0 to 999999999999', (value) => Number.isInteger(value) && value >= 0 && value < 1e12),
    },
    { error: INSTANT_RIGHT },
  );

/** An object that refuses fields it does not know. */
export const record = <T extends z.ZodRawShape>(shape: T) => z.strictObject(shape, { error: (issue) => recordError(issue, shape) });

function recordError(issue: { readonly code?: string; readonly keys?: readonly string[] }, shape: z.ZodRawShape): string {
  return issue.code === 'unrecognized_keys' ? `known here: ${Object.keys(shape).join(', ')}` : 'an object { }';
}
