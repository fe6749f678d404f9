import type * as z from 'zod';
import { firstProblem, pathText } from '#shared/contract/first-problem';
import { judge, policyOf, type Policy } from '#shared/contract/policies';
import { type Place } from '#shared/contract/roles';
import { type Route } from '#shared/contract/routes';
import { type Ground } from '../ground';
import { callerOf, NOBODY, type Caller, type PersonCalling } from './caller';
import { type Exchange } from './exchange';
import { readBody } from './read-body';
import { absent, forbidden, signInFirst, unusable } from './refusal';
import { refuseForeign } from './same-origin';

/** What a request asks, checked against its route. */
export interface Asked<Params, Query, Body> {
  readonly params: Params;
  readonly query: Query;
  readonly body: Body;
  readonly caller: Caller;
  readonly exchange: Exchange;
}

/** What answers a route. */
interface Service<Params, Query, Body, Answer> {
  /** Where what is asked for lies; absent when there is no such thing. Wanted by policies of a place, and by no other. */
  readonly placeOf?: (asked: Asked<Params, Query, Body>, ground: Ground) => Place | undefined;
  readonly handle: (asked: Asked<Params, Query, Body>, ground: Ground) => Answer | Promise<Answer>;
}

/** A route with what answers it. */
export interface Served {
  readonly route: Route;
  readonly hasPlace: boolean;
  /** The first steps, which need no body: who it is, whether they could do this at all, and whether it comes from a page of ours. */
  readonly admit: (exchange: Exchange, ground: Ground) => Caller;
  /** The whole of them. */
  readonly answer: (exchange: Exchange, ground: Ground) => Promise<unknown>;
}

/**
 * Joins a route and what answers it. The order of a request: who it is (401), whether they could do this at all (403), whether it comes from
 * a page of ours and is JSON (403, 415), its size and form (413, 400), its fields (400), whether they may do it there (404, 403), and only
 * then the handler, whose answer must be what the route declares.
 *
 * @param route as the contract declares it
 * @param service its handler, and where its things lie
 */
export function serve<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType, A extends z.ZodType>(
  route: Route<P, Q, B, A>,
  { placeOf, handle }: Service<z.output<P>, z.output<Q>, z.output<B>, z.input<A>>,
): Served {
  const admit = (exchange: Exchange, ground: Ground): Caller => {
    const policy = policyFor(route);
    const caller = policy.who === 'anyone' ? NOBODY : callerOf(exchange, ground); // health must answer while the database does not
    refuseStrangers(policy, caller);
    if (route.method !== 'GET') refuseForeign(exchange, ground.origin, ground.production);
    return caller;
  };
  const answer = async (exchange: Exchange, ground: Ground): Promise<unknown> => {
    const policy = policyFor(route);
    const caller = admit(exchange, ground);
    const given = route.method === 'GET' ? {} : await readBody(exchange, route.mostBodyBytes);
    const params = route.params.safeParse(exchange.params);
    if (!params.success) throw absent();
    const asked = { params: params.data, query: checked(route.query, exchange.query), body: checked(route.body, given), caller, exchange };
    if (policy.who === 'roles' && policy.in === 'place') {
      const place = placeOf?.(asked, ground);
      if (!place) throw absent();
      refuseBy(judge(policy, caller, place));
    }
    return route.answer.parse(await handle(asked, ground));
  };
  return { route, hasPlace: placeOf !== undefined, admit, answer };
}

function policyFor({ policy: name }: Route): Policy {
  const policy = policyOf(name);
  if (!policy) throw new Error(`${name} has no policy`);
  return policy;
}

/** The person who asks, on a route that only they reach. */
export function personOf({ caller }: { readonly caller: Caller }): PersonCalling {
  if (caller.kind !== 'person') throw new Error('a route for people was reached by another');
  return caller;
}

/** Whom a policy of a place lets in somewhere is known before the place is. */
function refuseStrangers(policy: Policy, caller: Caller): void {
  refuseBy(judge(policy.who === 'roles' && policy.in === 'place' ? { who: 'signed-in' } : policy, caller));
}

function refuseBy(verdict: ReturnType<typeof judge>): void {
  if (verdict === 'sign-in') throw signInFirst();
  if (verdict === 'forbidden') throw forbidden();
  if (verdict === 'hidden') throw absent();
}

const SECRETS = ['password', 'current', 'token'];

/** The parsed input; a secret that cannot be used is not repeated in the answer. */
function checked<S extends z.ZodType>(schema: S, input: unknown): z.output<S> {
  const { success, data, error } = schema.safeParse(input);
  if (success) return data;
  const first = error.issues[0];
  if (first && first.code !== 'unrecognized_keys' && SECRETS.includes(String(first.path.at(-1))))
    throw unusable({ where: pathText(first.path), text: `cannot be used; it must be ${first.message}` });
  throw unusable(firstProblem(error, input, 'request').problem);
}
