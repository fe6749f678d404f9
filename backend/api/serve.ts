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

/** What is known of a request by its path and who sent it. */
export type Addressed<Params> = Pick<Asked<Params, unknown, unknown>, 'params' | 'caller'>;

/** What answers a route. */
interface Service<Params, Query, Body, Answer> {
  /**
   * Where what is asked for lies, by the path alone; absent when there is no such thing. Policies of a place want this or `placeIn`, and no
   * other has either.
   */
  readonly placeOf?: (asked: Addressed<Params>, ground: Ground) => Place | undefined;
  /** The same where only the query or the body tells: those must then be read, and are, from whoever may do this somewhere. */
  readonly placeIn?: (asked: Asked<Params, Query, Body>, ground: Ground) => Place | undefined;
  readonly handle: (asked: Asked<Params, Query, Body>, ground: Ground) => Answer | Promise<Answer>;
}

/** A route with what answers it. */
export interface Served {
  readonly route: Route;
  readonly hasPlace: boolean;
  /** The first steps, which need no body: who it is, whether it comes from a page of ours, and whether they may do this there. */
  readonly admit: (exchange: Exchange, ground: Ground) => void;
  /** The whole of them. */
  readonly answer: (exchange: Exchange, ground: Ground) => Promise<unknown>;
}

/**
 * Joins a route and what answers it. The order of a request: who it is (401), whether they could do this at all (403), whether it comes from
 * a page of ours and is JSON (403, 415), whether they may do it there (404, 403), its size and form (413, 400), its fields (400), and only
 * then the handler, whose answer must be what the route declares. Where only the fields say which place it is, the place comes after them.
 *
 * @param route as the contract declares it
 * @param service its handler, and where its things lie
 */
export function serve<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType, A extends z.ZodType>(
  route: Route<P, Q, B, A>,
  { placeOf, placeIn, handle }: Service<z.output<P>, z.output<Q>, z.output<B>, z.input<A>>,
): Served {
  const told = ({ requestId }: Exchange, { log }: Ground): Refusing => ({ name: route.policy, policy: policyFor(route), requestId, log });
  const enter = (exchange: Exchange, ground: Ground): Addressed<z.output<P>> => {
    const policy = policyFor(route);
    const caller = policy.who === 'anyone' ? NOBODY : callerOf(exchange, ground); // health must answer while the database does not
    refuseStrangers(caller, placeIn !== undefined, told(exchange, ground));
    if (route.method !== 'GET') refuseForeign(exchange, ground.origin, ground.production);
    const params = route.params.safeParse(exchange.params);
    if (!params.success) throw absent();
    const addressed = { params: params.data, caller };
    if (placeOf) refuseElsewhere(caller, placeOf(addressed, ground), told(exchange, ground));
    return addressed;
  };
  const answer = async (exchange: Exchange, ground: Ground): Promise<unknown> => {
    const addressed = enter(exchange, ground);
    const given = route.method === 'GET' ? {} : await readBody(exchange, route.mostBodyBytes);
    const asked = { ...addressed, query: checked(route.query, exchange.query), body: checked(route.body, given), exchange };
    if (placeIn) refuseElsewhere(asked.caller, placeIn(asked, ground), told(exchange, ground));
    return route.answer.parse(await handle(asked, ground));
  };
  return {
    route,
    hasPlace: placeOf !== undefined || placeIn !== undefined,
    admit: (exchange, ground) => void enter(exchange, ground),
    answer,
  };
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

/**
 * Whoever could do this nowhere is refused before the place is known: where only the fields say it, before anything of them is read; where
 * the path does, the place itself says in the next step whether it is to look absent.
 */
function refuseStrangers(caller: Caller, placeInFields: boolean, by: Refusing): void {
  const { policy } = by;
  if (policy.who !== 'roles' || policy.in !== 'place') refuseBy(judge(policy, caller), caller, by);
  else refuseBy(judge(placeInFields ? { ...policy, in: 'anywhere' } : { who: 'signed-in' }, caller), caller, by);
}

function refuseElsewhere(caller: Caller, place: Place | undefined, by: Refusing): void {
  if (!place) throw absent();
  refuseBy(judge(by.policy, caller, place), caller, by);
}

/** By which policy who asks is refused, and where that is written down. */
interface Refusing {
  readonly name: string;
  readonly policy: Policy;
  readonly requestId: string;
  readonly log: Ground['log'];
}

function refuseBy(verdict: ReturnType<typeof judge>, caller: Caller, { name, requestId, log }: Refusing): void {
  if (verdict === 'allowed') return;
  const who = caller.kind === 'person' ? { personId: caller.personId } : caller.kind === 'site-key' ? { keyId: caller.keyId } : undefined;
  if (who) log.info({ event: 'request:refused', ...who, policy: name, verdict, requestId }, 'someone who is known was refused');
  if (verdict === 'sign-in') throw signInFirst();
  if (verdict === 'forbidden') throw forbidden();
  throw absent();
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
