import * as z from 'zod';
import { type PolicyName } from './policies';

/** GET reads and changes nothing; POST makes or does something, PATCH edits what is there. */
export type Method = 'GET' | 'POST' | 'PATCH';

/** An object without fields, and what an answer without content is declared as. */
export const NOTHING = z.strictObject({}, { error: 'an object without fields: {}' });
export const NO_CONTENT = z.undefined();

type Fields = z.ZodObject<z.ZodRawShape>;

/**
 * One HTTP route, declared once for the server and the browser.
 *
 * `path` is under /api, with `:name` for each of `params`; the schemas refuse fields they do not know; `mostBodyBytes` bounds what is read
 * of the body; `status` is that of success.
 */
export interface Route<
  Params extends z.ZodType = z.ZodType,
  Query extends z.ZodType = z.ZodType,
  Body extends z.ZodType = z.ZodType,
  Answer extends z.ZodType = z.ZodType,
> {
  readonly method: Method;
  readonly path: string;
  readonly policy: PolicyName;
  readonly params: Params;
  readonly query: Query;
  readonly body: Body;
  readonly answer: Answer;
  readonly status: number;
  readonly mostBodyBytes: number;
}

const MOST_BODY_BYTES = 64 * 1024;
const CREATED = 201;

/** What a declaration may leave out: no parameters, no query, an empty body, no content, and the status that follows from these. */
interface Declaration<Params extends Fields, Query extends Fields, Body extends Fields, Answer extends z.ZodType> {
  readonly policy: PolicyName;
  readonly params?: Params;
  readonly query?: Query;
  readonly body?: Body;
  readonly answer?: Answer;
  /** Whether success made something new. */
  readonly makes?: true;
  readonly mostBodyBytes?: number;
}

/**
 * Declares a route.
 *
 * @param method what kind of thing it does
 * @param path under /api, beginning with a slash
 * @param declaration its policy and schemas
 */
export function route<
  Params extends Fields = typeof NOTHING,
  Query extends Fields = typeof NOTHING,
  Body extends Fields = typeof NOTHING,
  Answer extends z.ZodType = typeof NO_CONTENT,
>(method: Method, path: string, declaration: Declaration<Params, Query, Body, Answer>): Route<Params, Query, Body, Answer> {
  const { policy, params, query, body, answer, makes, mostBodyBytes = MOST_BODY_BYTES } = declaration;
  // What is absent left its type at the default, which the compiler does not conclude by itself.
  return {
    method,
    path,
    policy,
    params: (params ?? NOTHING) as Params,
    query: (query ?? NOTHING) as Query,
    body: (body ?? NOTHING) as Body,
    answer: (answer ?? NO_CONTENT) as Answer,
    status: makes ? CREATED : answer ? 200 : 204,
    mostBodyBytes,
  };
}
