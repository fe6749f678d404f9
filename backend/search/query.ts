import { type Statement } from 'better-sqlite3';
import { type Db } from '../db';

/** A reading query and what is put into it. */
export interface Query {
  readonly sql: string;
  readonly values: readonly (string | number)[];
}

/** A part of a query: SQL with its values. */
export const part = (sql: string, ...values: readonly (string | number)[]): Query => ({ sql, values });

/** Parts one behind the other, with a text between them. */
export const joined = (parts: readonly Query[], between: string): Query => ({
  sql: parts.map(({ sql }) => sql).join(between),
  values: parts.flatMap(({ values }) => values),
});

/** Queries are few but for what people put together from filters; more of them than this are not kept. */
const MOST_KEPT = 200;
const keptOf = new WeakMap<Db['$client'], Map<string, Statement<(string | number)[]>>>();

/** The statement of a query, kept from the last time where it was asked not long ago: to prepare one costs more than a short answer. */
function statementOf(client: Db['$client'], sql: string): Statement<(string | number)[]> {
  const kept = keptOf.get(client) ?? new Map<string, Statement<(string | number)[]>>();
  keptOf.set(client, kept);
  const statement = kept.get(sql) ?? client.prepare<(string | number)[]>(sql);
  kept.delete(sql); // the last in the map is the last that was asked
  kept.set(sql, statement);
  for (const oldest of kept.keys()) {
    if (kept.size <= MOST_KEPT) break;
    kept.delete(oldest);
  }
  return statement;
}

/** The rows of a query, which the caller knows the form of since it wrote the columns. */
export const rowsOf = <Row>({ $client }: Pick<Db, '$client'>, { sql, values }: Query): Row[] =>
  statementOf($client, sql).all(...values) as Row[];
