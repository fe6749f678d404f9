import type * as z from 'zod';

/** A body that must be refused: with which status, and by which words or at which field. */
export interface OddBody {
  readonly what: string;
  readonly raw: string;
  readonly status: 400 | 413;
  readonly detail?: string;
  /** The field itself; or what holds it, where that can be written in more than one way. */
  readonly where?: readonly string[];
}

const SURPLUS = 'surplus';
const PLANTED = '\u0001';
const INFINITE = '1e999';
const MOST_DEPTH = 32;
const MOST_ITEMS = 10_000;

type Path = readonly (string | number)[];

const isObject = (value: unknown): value is Readonly<Record<string, unknown>> =>
  typeof value === 'object' && value !== null && !Array.isArray(value);

function pathsOf(value: unknown, is: (value: unknown) => boolean, path: Path = []): Path[] {
  const inner = isObject(value)
    ? Object.entries(value).flatMap(([key, part]) => pathsOf(part, is, [...path, key]))
    : Array.isArray(value)
      ? value.flatMap((part, at) => pathsOf(part, is, [...path, at]))
      : [];
  return is(value) ? [path, ...inner] : inner;
}

/** The value with another at a path, which may end in a new field. */
function withAt(value: unknown, [first, ...rest]: Path, put: unknown): unknown {
  if (first === undefined) return put;
  if (Array.isArray(value)) return value.map((part: unknown, at) => (at === first ? withAt(part, rest, put) : part));
  return { ...(isObject(value) ? value : {}), [first]: withAt(isObject(value) ? value[first] : undefined, rest, put) };
}

const textOf = (path: Path): string =>
  path.map((part, at) => (typeof part === 'number' ? `[${part}]` : `${at ? '.' : ''}${part}`)).join('');

/**
 * What statements 25, 31 and 37 refuse, made of a body that its route takes.
 *
 * @param body usable but for what the handler finds
 * @param schema of the route's body, for fields that the body leaves out
 * @param mostBytes the route's bound
 */
export function oddBodies(body: object, schema: z.ZodType, mostBytes: number): OddBody[] {
  const planted = (path: Path, text: string): string => JSON.stringify(withAt(body, path, PLANTED)).replace(JSON.stringify(PLANTED), text);
  const besides = (text: string): string => planted([SURPLUS], text);
  const bounded = (odd: OddBody): OddBody => (odd.raw.length > mostBytes ? { what: odd.what, raw: odd.raw, status: 413 } : odd);
  const fields = 'shape' in schema && isObject(schema.shape) ? Object.keys(schema.shape) : [];
  const numbers = [
    ...fields.map((field) => [field]),
    ...pathsOf(body, (value) => typeof value === 'number').filter(({ length }) => length > 1),
  ];
  return [
    ...pathsOf(body, isObject).map((path): OddBody => {
      const surplus = [...path, SURPLUS];
      return {
        what: `25 a field ${textOf(surplus)}`,
        raw: planted(surplus, '1'),
        status: 400,
        where: path.length > 0 ? [textOf(surplus), textOf(path)] : [SURPLUS],
      };
    }),
    { what: '25 a list of it', raw: JSON.stringify([body]), status: 400, where: [''] },
    { what: '31 a byte too many', raw: JSON.stringify(body).padEnd(mostBytes + 1), status: 413, detail: `at most ${mostBytes} bytes` },
    bounded({
      what: '31 a level too many',
      raw: besides('['.repeat(MOST_DEPTH) + ']'.repeat(MOST_DEPTH)),
      status: 400,
      detail: `${MOST_DEPTH} levels`,
    }),
    bounded({
      what: '31 an item too many',
      raw: besides(`[${Array.from({ length: MOST_ITEMS }, () => 0).join()}]`),
      status: 400,
      detail: `${MOST_ITEMS} items`,
    }),
    ...pathsOf(body, isObject).map((path): OddBody => ({
      what: `31 __proto__ in ${textOf(path) || 'it'}`,
      raw: planted([...path, SURPLUS], '1').replace(JSON.stringify(SURPLUS), '"__proto__"'),
      status: 400,
      detail: 'no field __proto__',
    })),
    ...[...numbers, [SURPLUS]].map((path): OddBody => ({
      what: `37 ${INFINITE} as ${textOf(path)}`,
      raw: planted(path, INFINITE),
      status: 400,
      detail: 'too large to be kept',
    })),
  ];
}
