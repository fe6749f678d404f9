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

/** The rows of a query, which the caller knows the form of since it wrote the columns. */
export const rowsOf = <Row>({ $client }: Pick<Db, '$client'>, { sql, values }: Query): Row[] =>
  $client.prepare<(string | number)[], Row>(sql).all(...values);
