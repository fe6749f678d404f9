import { networks, people, roles, sites } from '#schema/schema';
import { type Role } from '#shared/contract/roles';
import { ACCESS_COOKIE, REFRESH_COOKIE } from '../../backend/accounts/cookies';
import { writeAccess } from '../../backend/accounts/access-token';
import { beginSession } from '../../backend/accounts/sessions';
import { utcText } from '../../backend/ground';
import { type RunningApp } from './app';
import { Client } from './client';

/** Everyone's password. */
export const PASSWORD = 'lantern gravel 47 omelette';

/** Who is in the world: each role in the first network, an operator of its other site, the second network's coordinator, and no role. */
export const PERSONAS = {
  chief: { role: 'coordinator', network: null, site: null },
  coordinator: { role: 'coordinator', network: 'first', site: null },
  analyst: { role: 'analyst', network: 'first', site: null },
  reviewer: { role: 'reviewer', network: 'first', site: null },
  operator: { role: 'operator', network: 'first', site: 'alpha' },
  otherOperator: { role: 'operator', network: 'first', site: 'beta' },
  otherCoordinator: { role: 'coordinator', network: 'second', site: null },
  nobodySpecial: undefined,
} as const satisfies Record<string, { role: Role; network: 'first' | 'second' | null; site: 'alpha' | 'beta' | null } | undefined>;

export type Persona = keyof typeof PERSONAS;

/** Two networks, two sites in the first and one in the second, and a person for each persona. */
export interface World {
  readonly networks: { readonly first: number; readonly second: number };
  readonly sites: { readonly alpha: number; readonly beta: number; readonly gamma: number };
  readonly people: Readonly<Record<Persona, number>>;
  readonly emailOf: (persona: Persona) => string;
  /** A client whose session was begun without a password. */
  readonly as: (persona: Persona) => Client;
}

export async function makeWorld({ ground, url }: RunningApp): Promise<World> {
  const { db, nowMs } = ground;
  const createdAt = utcText(nowMs());
  const network = (code: string): number =>
    db.insert(networks).values({ code, name: code, originTaiS: 0, originPs: 0, createdAt }).returning({ id: networks.id }).get().id;
  const site = (code: string, networkId: number): number =>
    db.insert(sites).values({ code, name: code, networkId, createdAt }).returning({ id: sites.id }).get().id;
  const first = network('FIRST');
  const second = network('SECOND');
  const placed = { first, second, alpha: site('ALPHA', first), beta: site('BETA', first), gamma: site('GAMMA', second) };
  const passwordHash = await ground.passwords.hash(PASSWORD);
  const emailOf = (persona: Persona): string => `${persona.toLowerCase()}@example.org`;
  const add = (persona: Persona): number => {
    const { id: personId } = db
      .insert(people)
      .values({ email: emailOf(persona), name: `Vera ${persona}`, passwordHash, passwordSetAt: createdAt, createdAt })
      .returning({ id: people.id })
      .get();
    const held = PERSONAS[persona];
    if (held)
      db.insert(roles)
        .values({
          personId,
          role: held.role,
          networkId: held.network && placed[held.network],
          siteId: held.site && placed[held.site],
          givenAt: createdAt,
        })
        .run();
    return personId;
  };
  const ids = Object.fromEntries(Object.keys(PERSONAS).map((persona) => [persona, add(persona as Persona)])) as Record<Persona, number>;
  return {
    networks: { first, second },
    sites: { alpha: placed.alpha, beta: placed.beta, gamma: placed.gamma },
    people: ids,
    emailOf,
    as: (persona) => {
      const personId = ids[persona];
      const { sessionId, refresh } = db.transaction((tx) => beginSession(tx, personId, 'test', nowMs()));
      const client = new Client(url);
      client.cookies.set(ACCESS_COOKIE, writeAccess({ personId, sessionId }, ground));
      client.cookies.set(REFRESH_COOKIE, refresh);
      return client;
    },
  };
}
