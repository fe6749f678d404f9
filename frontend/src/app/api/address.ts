/** A value of a path or query as it is given: nothing is left out of the address. */
export type Given = Readonly<Record<string, unknown>>;

/**
 * The address of a route with its parameters put in.
 *
 * @param path of the route, with `:name` for each parameter
 * @param params by name; text that needs it is encoded
 */
export const addressOf = (path: string, params: Given): string =>
  `/api${path.replace(/:(\w+)/g, (_, name: string) => encodeURIComponent(textOf(params[name])))}`;

/** The fields of a query that are given, as text. */
export const queryOf = (query: Given): Record<string, string> =>
  Object.fromEntries(Object.entries(query).flatMap(([name, value]) => (value === undefined ? [] : [[name, textOf(value)]])));

function textOf(value: unknown): string {
  if (typeof value === 'string') return value;
  if (typeof value === 'number' || typeof value === 'boolean') return String(value);
  if (Array.isArray(value)) return value.map(textOf).join(',');
  throw new Error(`${JSON.stringify(value)} cannot stand in an address`);
}
