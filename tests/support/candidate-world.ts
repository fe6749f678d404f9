import { MOST_EVENTS_PAIRED, type PairsOfSet } from '#shared/contract/pair-routes';
import { type CandidateClaim, type CandidateInFull } from '#shared/contract/candidate-routes';
import { type Role } from '#shared/contract/roles';
import { roles } from '#schema/schema';
import { startApp, type RunningApp } from './app';
import { type Answer } from './client';
import { storeCairnway, type StoredExample } from './stored-example';
import { makeWorld, type Persona, type World } from './world';

/** Who is what in the example's network. */
const CAST: readonly (readonly [Persona, Role])[] = [
  ['analyst', 'analyst'],
  ['otherCoordinator', 'analyst'],
  ['otherOperator', 'analyst'],
  ['otherOperator', 'reviewer'],
  ['reviewer', 'reviewer'],
  ['nobodySpecial', 'reviewer'],
  ['coordinator', 'coordinator'],
];

/** Two events, the earlier first. */
export type EventPair = readonly [number, number];

/** A running server with the example's records, and the people who build candidates of them. */
export interface CandidateWorld {
  readonly app: RunningApp;
  readonly world: World;
  readonly network: StoredExample;
  readonly networkId: number;
  readonly frameId: number;
  /** As many events as a candidate may count. */
  readonly events: readonly number[];
  readonly timelike: EventPair;
  readonly spacelike: EventPair;
}

export async function makeCandidateWorld(): Promise<CandidateWorld> {
  const app = await startApp();
  const world = await makeWorld(app);
  const network = await storeCairnway(app);
  const { networkId } = network;
  const givenAt = '2026-01-01T00:00:00.000Z';
  for (const [persona, role] of CAST)
    app.ground.db.insert(roles).values({ personId: world.people[persona], role, networkId, givenAt }).run();
  const inOrder = app.ground.db.$client
    .prepare<[number], number>('SELECT trigger_id FROM events WHERE network_id = ? ORDER BY tai_s, ps')
    .pluck()
    .all(networkId);
  for (let from = 0; from < inOrder.length; from += MOST_EVENTS_PAIRED / 2) {
    const events = inOrder.slice(from, from + MOST_EVENTS_PAIRED);
    const { body } = await world.as('analyst').get(`/networks/${networkId}/pairs?events=${events.join(',')}`);
    const { events: ofSet, pairs } = body as PairsOfSet;
    const pairOfClass = (said: string): EventPair | undefined => {
      const pair = pairs.find((one) => one.class === said);
      return pair && [ofSet[pair.a - 1]!.id, ofSet[pair.b - 1]!.id];
    };
    const [timelike, spacelike] = [pairOfClass('timelike'), pairOfClass('spacelike')];
    const frameId = [...network.frameIds.values()][0]!;
    if (timelike && spacelike && events.length === MOST_EVENTS_PAIRED)
      return { app, world, network, networkId, frameId, events, timelike, spacelike };
  }
  throw new Error('the example has no stretch with a timelike and a spacelike pair');
}

/** What a good answer holds. */
export function good<T>({ status, body, text }: Answer, expected = 200): Readonly<T> {
  if (status !== expected) throw new Error(`${status} in place of ${expected}: ${text.slice(0, 500)}`);
  return body as Readonly<T>;
}

/** Makes a candidate of both pairs. */
export const makeIn = async (
  { networkId, timelike, spacelike, world }: CandidateWorld,
  given: object = {},
  by: Persona = 'analyst',
): Promise<CandidateInFull> => {
  const body = { title: 'A flash and its echo', eventIds: [...new Set([...timelike, ...spacelike])], ...given };
  return good(await world.as(by).post(`/networks/${networkId}/candidates`, body), 201);
};

/** A candidate's claim of a pair. */
export const claimOf = ({ claims }: CandidateInFull, [a, b]: EventPair, kind?: string): CandidateClaim =>
  claims.find((claim) => claim.a === a && claim.b === b && (kind === undefined || claim.kind === kind))!;
