/**
 * The one text of a value, of which hashes are taken: JSON without white space, keys in the order of their code units, numbers as
 * `JSON.stringify` prints them (the shortest digits that give the double back; -0 is 0).
 *
 * @param value null, booleans, finite numbers, texts, and lists and objects of such
 * @returns the text: equal for equal values, whatever the order in which their keys were put in
 * @throws TypeError that names the place of what JSON cannot hold: NaN, an infinity, undefined, a function, a bigint, a symbol
 *
 * Source: after RFC 8785 (JSON Canonicalization Scheme), sections 3.2.2 and 3.2.3.
 */
export const canonicalJson = (value: unknown): string => written(value, '');

function written(value: unknown, path: string): string {
  if (value === null || typeof value === 'boolean' || typeof value === 'string') return JSON.stringify(value);
  if (typeof value === 'number' && Number.isFinite(value)) return JSON.stringify(value);
  if (Array.isArray(value)) return `[${Array.from(value, (part: unknown, at) => written(part, `${path}[${at}]`)).join(',')}]`;
  if (typeof value === 'object') {
    const parts = Object.entries(value)
      .sort(([a], [b]) => (a < b ? -1 : 1))
      .map(([key, part]) => `${JSON.stringify(key)}:${written(part, path === '' ? key : `${path}.${key}`)}`);
    return `{${parts.join(',')}}`;
  }
  const found = typeof value === 'number' ? String(value) : typeof value;
  throw new TypeError(
    `${path === '' ? 'the value' : path} is ${found}; JSON holds null, true, false, finite numbers, texts, lists and objects`,
  );
}

/** White space between the parts of a JSON text, and the strings in which it belongs to the value. Source: RFC 8259, sections 2 and 7. */
const STRING_OR_BLANKS = /("[^"\\]*(?:\\.[^"\\]*)*")|[ \t\n\r]+/gs;

/**
 * Where a JSON text is not the one text of its value, white space left aside: a key out of its order or given twice, a digit that the number
 * does not need, an escape that the character does not need.
 *
 * @param text any JSON
 * @param value what `JSON.parse` made of it, finite numbers alone
 * @returns what stands there and what would, some characters of each; undefined where they agree
 */
export function firstOddity(text: string, value: unknown): { readonly found: string; readonly right: string } | undefined {
  const given = text.replace(STRING_OR_BLANKS, (_, string: string | undefined) => string ?? '');
  const right = canonicalJson(value);
  if (given === right) return undefined;
  let at = 0;
  while (given[at] === right[at]) at++;
  const from = Math.max(0, at - EXCERPT);
  return { found: given.slice(from, at + EXCERPT), right: right.slice(from, at + EXCERPT) };
}

const EXCERPT = 30;
