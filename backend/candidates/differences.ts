import { type CandidateStep } from '#shared/contract/candidate-routes';

/** What is compared: words, numbers, lists of them, and records of such by names that people read. */
export interface Told {
  readonly [name: string]: string | number | boolean | null | readonly string[] | Told;
}

type Difference = CandidateStep['differences'][number];
type Value = Told[string] | undefined;

const isList = (value: Value): value is readonly string[] => Array.isArray(value);
const isRecord = (value: Value): value is Told => typeof value === 'object' && value !== null && !isList(value);

function textOf(value: Value): string | null {
  if (value === undefined || value === null || isRecord(value)) return null;
  return isList(value) ? value.join(', ') : String(value);
}

/**
 * What differs between two states of the same thing.
 *
 * @param before the former state
 * @param after the latter
 * @returns each leaf that is another, by its path, in the order of `after`, then what is gone
 */
export function differencesOf(before: Told, after: Told, path = ''): Difference[] {
  const names = [...new Set([...Object.keys(after), ...Object.keys(before)])];
  return names.flatMap((name): Difference[] => {
    const [was, is] = [before[name], after[name]];
    const where = path === '' ? name : `${path}.${name}`;
    if (isRecord(was) || isRecord(is)) return differencesOf(isRecord(was) ? was : {}, isRecord(is) ? is : {}, where);
    const [wasText, isText] = [textOf(was), textOf(is)];
    return wasText === isText ? [] : [{ where, before: wasText, after: isText }];
  });
}
