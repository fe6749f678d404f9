import type * as z from 'zod';
import { problemOf } from '../outcome';

const LONGEST_VALUE = 80;

/** A field's path as a person writes it: `sites[0].position.itrs_m`. */
export function pathText(path: readonly PropertyKey[]): string {
  return path.map((part, at) => (typeof part === 'number' ? `[${part}]` : `${at === 0 ? '' : '.'}${String(part)}`)).join('');
}

function valueAt(input: unknown, path: readonly PropertyKey[]): unknown {
  return path.reduce<unknown>((value, part) => (typeof value === 'object' && value !== null ? Reflect.get(value, part) : undefined), input);
}

/** A value as it would stand in the file, cut when it is long; a number too large for a double as the infinity that was read. */
export function valueText(value: unknown): string {
  const json = typeof value === 'number' ? String(value) : JSON.stringify(value);
  return json.length > LONGEST_VALUE ? `${json.slice(0, LONGEST_VALUE)}...` : json;
}

/**
 * The first fault of a checked input as a problem: the field's path, its value, and what would be right.
 *
 * @param error what the schema found; its leaves' messages say what would be right
 * @param input what was checked
 * @param code code of the problem
 */
export function firstProblem(error: z.core.$ZodError, input: unknown, code: string): ReturnType<typeof problemOf> {
  const [issue] = error.issues;
  if (!issue) return problemOf(code, '', 'is not usable');
  if (issue.code === 'unrecognized_keys') {
    const path = [...issue.path, issue.keys[0] ?? ''];
    return problemOf(code, pathText(path), `${valueText(valueAt(input, path))}: no such field; ${issue.message}`);
  }
  const value = valueAt(input, issue.path);
  const found = value === undefined ? 'is missing' : `is ${valueText(value)}`;
  return problemOf(code, pathText(issue.path), `${found}; it must be ${issue.message}`);
}
