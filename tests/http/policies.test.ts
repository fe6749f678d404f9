import { Router } from 'express';
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import * as z from 'zod';
import { problem } from '#shared/contract/problem';
import { judge, POLICIES, policyOf, type PolicyName } from '#shared/contract/policies';
import { DEPLOYMENT } from '#shared/contract/roles';
import { route, type Route } from '#shared/contract/routes';
import { LIVE_REQUESTS } from '#shared/contract/live-socket';
import { SITE_REQUESTS } from '#shared/contract/site-socket';
import { allRoutes } from '../../backend/app';
import { registerRoutes } from '../../backend/api/register';
import { serve } from '../../backend/api/serve';
import { newSiteKey } from '../../backend/accounts/site-key-use';
import { siteKeys } from '#schema/schema';
import { DECLARED, nameOf } from '../support/declared';
import { startApp, type RunningApp } from '../support/app';
import { storeOneOfEach, type OneOfEach } from '../support/one-of-each';
import { Client, type Answer, type Sending } from '../support/client';
import { makeSetup, type Setup } from '../support/setup';
import { makeWorld, PASSWORD, PERSONAS, type Persona, type World } from '../support/world';
import { allRows } from '../support/rows';
import { storeCandidate, type StoredCandidate } from '../support/stored-candidate';
import { candidateWalk } from './candidate-walk';
import { oddBodies } from './odd-bodies';
import { setupWalk } from './setup-walk';

let app: RunningApp;
let world: World;
let siteKey: string;
let stored: OneOfEach;
let setup: Setup;
let candidate: StoredCandidate;
beforeAll(async () => {
  app = await startApp();
  world = await makeWorld(app);
  stored = storeOneOfEach(app.ground.db, world.networks.first, [world.sites.alpha, world.sites.beta]);
  setup = makeSetup(app, world);
  candidate = storeCandidate(app, world, [stored.event, stored.otherEvent]);
  const { key, prefix, hash } = newSiteKey();
  siteKey = key;
  app.ground.db
    .insert(siteKeys)
    .values({ siteId: world.sites.alpha, label: 'walk', prefix, hash, createdAt: '2026-01-01T00:00:00.000Z' })
    .run();
});
afterAll(async () => {
  await app.close();
});

const handOver = () => Promise.reject(new Error('nothing is asked here'));

describe('22 deny by default', () => {
  it('serves every route that the contract declares, and no other', () => {
    const served = allRoutes(app.ground).map(({ route: { method, path } }) => `${method} ${path}`);
    expect(
      served.sort(),
      'a route is declared in shared/contract, listed in DECLARED of tests/support/declared.ts and in allRoutes of backend/app.ts',
    ).toEqual(DECLARED.map(nameOf).sort());
  });

  it('a route whose policy has no line in the table stops the start', () => {
    for (const policy of ['nothing:read', 'toString', '__proto__', '']) {
      const planted = serve(route('GET', '/planted', { policy: policy as PolicyName }), { handle: () => undefined });
      expect(() => registerRoutes([planted], app.ground, handOver)).toThrow('GET /api/planted has no policy');
    }
  });

  it('a route of a place that does not say where stops the start, and so does one that says where for nothing', () => {
    const placeless = serve(route('GET', '/planted', { policy: 'site-key:list' }), { handle: () => undefined });
    expect(() => registerRoutes([placeless], app.ground, handOver)).toThrow('does not say where');
    const placed = serve(route('GET', '/planted', { policy: 'me:read' }), { handle: () => undefined, placeOf: () => DEPLOYMENT });
    expect(() => registerRoutes([placed], app.ground, handOver)).toThrow('says where');
  });

  it('a route that is served twice stops the start', () => {
    const twice = [1, 2].map(() => serve(route('GET', '/planted', { policy: 'me:read' }), { handle: () => undefined }));
    expect(() => registerRoutes(twice, app.ground, handOver)).toThrow('served twice');
    expect(registerRoutes(twice.slice(1), app.ground, handOver)).toBeInstanceOf(Router);
  });

  it('each line of the table is the policy of something', () => {
    const used = new Set<string>([...DECLARED.map(({ policy }) => policy), ...Object.keys(SITE_REQUESTS), ...Object.keys(LIVE_REQUESTS)]);
    expect(Object.keys(POLICIES).filter((name) => !used.has(name))).toEqual([]);
  });
});

/** Everyone who may ask: the personas, nobody, and a site by its key. */
type Asker = Persona | 'nobody' | 'siteKey';
const ASKERS: readonly Asker[] = ['nobody', 'siteKey', ...(Object.keys(PERSONAS) as Persona[])];

const clientOf = (asker: Asker): Client => (asker === 'nobody' || asker === 'siteKey' ? new Client(app.url) : world.as(asker));
const sendingOf = (asker: Asker): Sending => (asker === 'siteKey' ? { headers: { authorization: `Bearer ${siteKey}` } } : {});

/**
 * What each asker may get from each route, written down by hand and apart from the table that is tested: things of the first network's site
 * alpha, or of the deployment, are asked for, with bodies that go no further than their fields ('versions' that nobody saw), so that the walk
 * changes nothing. 'in' is anything but 401, 403 and 404.
 */
const ALL_PEOPLE: readonly Asker[] = Object.keys(PERSONAS) as Persona[];
const COORDINATORS: readonly Asker[] = ['chief', 'coordinator', 'otherCoordinator'];
/** Who sees all of the first network, its site alpha, or has any role in it; and who has none there. */
const SEE_ALL: readonly Asker[] = ['chief', 'coordinator', 'analyst', 'reviewer'];
const SEE_ALPHA: readonly Asker[] = [...SEE_ALL, 'operator'];
const ROLES_OF_FIRST: readonly Asker[] = [...SEE_ALPHA, 'otherOperator'];
const OUTSIDE: readonly Asker[] = ['otherCoordinator', 'nobodySpecial'];
const NOT_ALPHAS: readonly Asker[] = ['otherOperator', ...OUTSIDE];
const ofNetwork = (path: string) => ({ hidden: OUTSIDE, path: () => `/networks/${world.networks.first}${path}` });
/** Of a version that nobody saw. */
const decision = (what: string) => ({
  in: ['chief', 'coordinator', 'operator'] as const,
  hidden: NOT_ALPHAS,
  path: () => `/set-asides/${stored.setAside}/${what}`,
  body: () => ({ version: 999, why: 'walk' }),
});
const ofAlpha = (path: string) => ({ hidden: NOT_ALPHAS, path: () => `/sites/${world.sites.alpha}${path}` });
const EXPECTED: Readonly<Record<string, { in: readonly Asker[]; hidden?: readonly Asker[]; path?: () => string; body?: () => unknown }>> = {
  'GET /health': { in: ASKERS },
  'POST /sign-in': { in: [], body: () => ({ email: 'stranger@example.org', password: 'whatever it is' }) },
  'POST /refresh': { in: ALL_PEOPLE },
  'POST /sign-out': { in: ASKERS },
  'POST /invitations/accept': { in: ASKERS, body: () => ({ token: 'x'.repeat(22), password: PASSWORD }) },
  'POST /resets': { in: ASKERS, body: () => ({ email: `walk${String(Math.floor(performance.now() * 1000))}@example.org` }) },
  'POST /resets/use': { in: ASKERS, body: () => ({ token: 'x'.repeat(22), password: PASSWORD }) },
  'GET /me': { in: ALL_PEOPLE },
  'PATCH /me': { in: ALL_PEOPLE, body: () => ({ name: 'x', version: 999 }) },
  'POST /me/password': { in: ALL_PEOPLE, body: () => ({ current: PASSWORD, password: 'password1234' }) },
  'GET /me/sessions': { in: ALL_PEOPLE },
  'POST /me/sessions/:sessionId/end': { in: [], hidden: ALL_PEOPLE, path: () => '/me/sessions/99999/end' },
  'GET /me/preferences': { in: ALL_PEOPLE },
  'PATCH /me/preferences': { in: ALL_PEOPLE, body: () => ({ theme: 'dark', mails: { role: 'on' } }) },
  'POST /sign-out-everywhere': { in: ALL_PEOPLE },
  'GET /people': { in: COORDINATORS },
  'GET /people/:personId': { in: COORDINATORS, path: () => `/people/${world.people.analyst}` },
  'POST /people': {
    in: ['chief', 'coordinator'],
    hidden: ['otherCoordinator'],
    body: () => ({
      email: world.emailOf('analyst'),
      name: 'x',
      role: { role: 'analyst', networkId: world.networks.first, siteId: null, expiresAt: null },
    }),
  },
  'POST /people/:personId/invite-again': { in: COORDINATORS, path: () => `/people/${world.people.analyst}/invite-again` },
  'POST /people/:personId/disable': {
    in: ['chief'],
    path: () => `/people/${world.people.analyst}/disable`,
    body: () => ({ version: 999 }),
  },
  'POST /people/:personId/enable': { in: ['chief'], path: () => `/people/${world.people.analyst}/enable`, body: () => ({ version: 999 }) },
  'POST /people/:personId/roles': {
    in: ['chief', 'coordinator'],
    hidden: ['otherCoordinator'],
    path: () => `/people/${world.people.analyst}/roles`,
    body: () => ({ role: 'analyst', networkId: world.networks.first, siteId: null, expiresAt: null }),
  },
  'PATCH /roles/:roleId': {
    in: ['chief', 'coordinator'],
    hidden: ['otherCoordinator', 'nobodySpecial'],
    path: () => `/roles/${world.people.analyst}`,
    body: () => ({ expiresAt: null, version: 999 }),
  },
  'POST /roles/:roleId/take': {
    in: ['chief', 'coordinator'],
    hidden: ['otherCoordinator', 'nobodySpecial'],
    path: () => `/roles/${world.people.analyst}/take`,
    body: () => ({ version: 999 }),
  },
  'GET /sites/:siteId/keys': {
    in: ['chief', 'coordinator', 'operator'],
    hidden: ['otherOperator', 'otherCoordinator', 'nobodySpecial'],
    path: () => `/sites/${world.sites.alpha}/keys`,
  },
  'POST /sites/:siteId/keys': {
    in: ['chief', 'coordinator', 'operator'],
    hidden: ['otherOperator', 'otherCoordinator', 'nobodySpecial'],
    path: () => `/sites/${world.sites.alpha}/keys`,
    body: () => ({ label: 'walk' }),
  },
  'POST /sites/:siteId/keys/:keyId/revoke': {
    in: ['chief', 'coordinator', 'operator'],
    hidden: ['otherOperator', 'otherCoordinator', 'nobodySpecial'],
    path: () => {
      const { prefix, hash } = newSiteKey();
      const row = { siteId: world.sites.alpha, label: 'walk', prefix, hash, createdAt: '2026-01-01T00:00:00.000Z' };
      const { id } = app.ground.db.insert(siteKeys).values(row).returning({ id: siteKeys.id }).get();
      return `/sites/${world.sites.alpha}/keys/${id}/revoke`;
    },
  },
  'GET /site-key': { in: ['siteKey'] },
  ...setupWalk(
    () => world,
    () => setup,
  ),
  'GET /networks/:networkId/events': { ...ofNetwork('/events'), in: ROLES_OF_FIRST },
  'GET /events/:eventId': { in: SEE_ALPHA, hidden: NOT_ALPHAS, path: () => `/events/${stored.event}` },
  'GET /events/:eventId/coincidences': {
    in: SEE_ALL,
    hidden: NOT_ALPHAS,
    path: () => `/events/${stored.event}/coincidences`,
  },
  'GET /networks/:networkId/coincidences': { ...ofNetwork('/coincidences'), in: SEE_ALL },
  'GET /coincidences/:coincidenceId': { in: SEE_ALL, hidden: OUTSIDE, path: () => `/coincidences/${stored.coincidence}` },
  'GET /networks/:networkId/pairs': {
    in: SEE_ALPHA,
    hidden: NOT_ALPHAS,
    path: () => `/networks/${world.networks.first}/pairs?events=${stored.event}`,
  },
  'GET /networks/:networkId/set-asides': { ...ofNetwork('/set-asides'), in: ROLES_OF_FIRST },
  'GET /set-asides/:setAsideId': { in: SEE_ALPHA, hidden: NOT_ALPHAS, path: () => `/set-asides/${stored.setAside}` },
  'POST /set-asides/:setAsideId/accept': decision('accept'),
  'POST /set-asides/:setAsideId/dismiss': decision('dismiss'),
  'POST /set-asides/:setAsideId/dismiss-conflict': decision('dismiss-conflict'),
  ...candidateWalk(
    () => world,
    () => candidate,
  ),
  'GET /sites/:siteId/series': { ...ofAlpha('/series'), in: SEE_ALPHA },
  'GET /sites/:siteId/gaps': { ...ofAlpha('/gaps'), in: SEE_ALPHA },
  'GET /sites/:siteId/live-spans': { ...ofAlpha('/live-spans'), in: SEE_ALPHA },
  'GET /networks/:networkId/site-states': { ...ofNetwork('/site-states'), in: ROLES_OF_FIRST },
  'GET /networks/:networkId/completeness': { ...ofNetwork('/completeness'), in: ROLES_OF_FIRST },
  'GET /networks/:networkId/changes': { ...ofNetwork('/changes?after=0'), in: SEE_ALL },
  'GET /audit': { in: ['chief'] },
  'GET /audit/verify': { in: ['chief'] },
  'GET /kept-mails': { in: ['chief'] },
};

async function ask(asker: Asker, declared: Route): Promise<Answer> {
  const { path = () => declared.path, body = () => ({}) } = EXPECTED[nameOf(declared)]!;
  return clientOf(asker).send(declared.method, path(), declared.method === 'GET' ? undefined : body(), sendingOf(asker));
}

describe('every declared route', () => {
  it('has its line in the walk', () => {
    expect(Object.keys(EXPECTED).sort(), 'say in EXPECTED who gets in, and to whom it must look absent').toEqual(
      DECLARED.map(nameOf).sort(),
    );
  });

  it.each(DECLARED.map((declared) => [nameOf(declared), declared] as const))(
    '24 lets in whom it should, and hides from others what they must not see: %s',
    async (name, declared) => {
      const { in: allowed, hidden = [] } = EXPECTED[name]!;
      const open = policyOf(declared.policy)?.who === 'anyone';
      for (const asker of ASKERS) {
        const { status, text } = await ask(asker, declared);
        const isPerson = asker !== 'nobody' && asker !== 'siteKey';
        const who = `${asker} at ${name} got ${status} ${text}`;
        if (allowed.includes(asker)) expect([401, 403, 404].includes(status), who).toBe(false);
        else if (hidden.includes(asker)) expect(status, who).toBe(404);
        else expect(status, who).toBe(open || !isPerson || declared.policy === 'site-key:read-own' ? 401 : 403);
        expect(status, who).toBeLessThan(500);
        app.forwardMs(3600_000); // attempts are forgiven between askers; each has a session of their own
      }
    },
  );
});

/** Who may do it, or does where nobody gets in for what the walk asks. */
function doersOf(declared: Route): readonly Asker[] {
  const { in: allowed } = EXPECTED[nameOf(declared)]!;
  if (allowed.length > 0) return allowed;
  return policyOf(declared.policy)?.who === 'anyone' ? ['nobody'] : ALL_PEOPLE;
}

describe('every route that changes something', () => {
  it.each(DECLARED.filter(({ method }) => method !== 'GET').map((declared) => [nameOf(declared), declared] as const))(
    '25, 31 and 37 refuses a body that only looks like data, from whoever may, and nothing changes: %s',
    async (name, declared) => {
      const { path = () => declared.path, body = () => ({}) } = EXPECTED[name]!;
      const at = path();
      const usable = body() as object;
      expect(declared.body.safeParse(usable).error, 'the body in EXPECTED is one that the route takes').toBeUndefined();
      const askers = doersOf(declared).map((asker) => [asker, clientOf(asker)] as const);
      const before = allRows(app.ground.db);
      for (const [asker, client] of askers)
        for (const { what, raw, status, detail = '', where } of oddBodies(usable, declared.body, declared.mostBodyBytes)) {
          const answer = await client.send(declared.method, at, undefined, { ...sendingOf(asker), raw });
          const who = `${asker} at ${name} with ${what} got ${answer.status} ${answer.text}`;
          expect(answer.status, who).toBe(status);
          expect(problem.parse(answer.body).detail, who).toContain(detail);
          if (where) expect(where, who).toContain(problem.parse(answer.body).where ?? '');
        }
      expect(allRows(app.ground.db)).toEqual(before);
    },
  );
});

describe('the table alone', () => {
  it('24 judges an operator by their own sites, and a coordinator by their networks', () => {
    const held = [{ role: 'operator', networkId: 1, siteId: 10 }] as const;
    const judged = (siteId: number, networkId = 1) =>
      judge(POLICIES['site-key:list'], { kind: 'person', held }, { kind: 'site', networkId, siteId });
    expect([judged(10), judged(11), judged(10, 2)]).toEqual(['allowed', 'hidden', 'hidden']);
    const chief = { kind: 'person', held: [{ role: 'coordinator', networkId: null, siteId: null }] } as const;
    expect(judge(POLICIES['audit:read'], chief, { kind: 'network', networkId: 7 })).toBe('allowed');
    expect(judge(POLICIES['audit:read'], { kind: 'person', held }, { kind: 'network', networkId: 1 })).toBe('forbidden');
    expect(() => judge(POLICIES['audit:read'], chief)).toThrow('without one');
  });
});

/** Bad requests of every kind, at every route, by everyone. */
const BODIES: readonly (string | Buffer<ArrayBuffer>)[] = [
  '', '{', 'null', '[]', '"text"', '1e999', '{}', '{"__proto__":{}}', '{"x":1}', '['.repeat(5000), `{"email":"${'x'.repeat(9000)}"}`,
  '{"email":1,"password":2,"token":3,"name":4,"role":5,"version":6,"label":7,"current":8,"expiresAt":9}',
  '{"email":null,"password":null,"token":null,"name":null,"role":null,"version":null,"label":null,"current":null,"expiresAt":null}',
  '{"email":[],"password":[],"token":[],"name":[],"role":[],"version":[],"label":[],"current":[],"expiresAt":[]}',
  '{"email":{},"password":{},"token":{},"name":{},"role":{},"version":-1,"label":{},"current":{},"expiresAt":{}}',
  '{"name":"\\u0000\\u202e","version":1.5}', '{"role":"coordinator","networkId":-1,"siteId":1e308,"expiresAt":"9999-99-99"}',
  Buffer.from([0xff, 0xfe, 0x00]),
]; // prettier-ignore
const IDS = ['0', '-1', '1e3', '999999999999999', '99999999999999999999', 'x', '%00', '%2e%2e', "1'--", '__proto__', '%F0%9F%8C%8B'];
const QUERIES = [
  '',
  '?cursor=-1',
  '?limit=1e9',
  '?x=1',
  '?__proto__[x]=1',
  '?limit=1&limit=2',
  '?action=%00',
  `?cursor=${'9z'.repeat(250)}`,
  '?%E0%A4%A',
];
const { LONG } = process.env;
/** With LONG, 40,000 requests: everyone instead of a few, and many more bodies that nobody thought of. */
const FEW: readonly Asker[] = ['nobody', 'chief', 'operator', 'nobodySpecial'];
const RANDOM_BODIES = LONG ? 240 : 5;
const LEAST_REQUESTS = LONG ? 40_000 : 2_000;
const METHODS = ['PUT', 'DELETE', 'OPTIONS', 'HEAD'];
const LEAKS =
  /sqlite|drizzle|node_modules|\$argon2|SELECT |INSERT |\.ts:|\/backend|\/tmp\/|\bat \w+ \(|swk_[\w-]{20,}|127\.0\.0\.1|[0-9a-f]{64}/i;

/** The hash of an uploaded table is there to be quoted: it opens nothing. */
const CONTENT_HASHES = /"sha256":"[0-9a-f]{64}"/g;

describe('30 and 38 no answer', () => {
  it('to any bad request is a fault of ours, or tells a hash, token, address or path', { timeout: 600_000 }, async () => {
    const clients = (LONG ? ASKERS : FEW).map((asker) => [clientOf(asker), sendingOf(asker)] as const);
    const randomBodies = fc.sample(fc.json(), {
      numRuns: RANDOM_BODIES,
      ...(process.env['SEED'] && { seed: Number(process.env['SEED']) }),
    });
    const untouchable = ['/sign-out', '/sign-out-everywhere', '/refresh'];
    let count = 0;
    for (const declared of DECLARED.filter(({ path }) => !untouchable.includes(path))) {
      const paths = declared.path.includes(':')
        ? IDS.map((id) => declared.path.replaceAll(/:\w+/g, id))
        : QUERIES.map((query) => declared.path + query);
      const requests = [
        ...paths.map((path) => [declared.method, path, BODIES[6]] as const),
        ...METHODS.map((method) => [method, declared.path, undefined] as const),
        ...(declared.method === 'GET'
          ? []
          : [...BODIES, ...randomBodies].map((body) => [declared.method, declared.path.replaceAll(/:\w+/g, '1'), body] as const)),
      ];
      for (const [client, sending] of clients)
        await Promise.all(
          requests.map(async ([method, path, raw]) => {
            const sent = method === 'GET' || raw === undefined ? sending : { ...sending, raw };
            const { status, text, headers } = await client.send(method, path, undefined, sent);
            count += 1;
            const what = `${method} ${path} ${String(raw).slice(0, 80)} got ${status} ${text.slice(0, 200)}`;
            if (status >= 500) expect([status, problem.parse(JSON.parse(text)).title], what).toEqual([503, 'Busy']);
            if (status >= 400 && method !== 'HEAD')
              expect(headers.get('content-type'), what).toBe('application/problem+json; charset=utf-8');
            expect(LEAKS.exec(text.replace(CONTENT_HASHES, ''))?.[0], what).toBeUndefined();
          }),
        );
    }
    expect(count).toBeGreaterThan(LEAST_REQUESTS);
    expect(app.log.filter(({ level }) => Number(level) >= 50)).toEqual([]);
  });

  it('may hold more than its route declares: what a handler adds by mistake does not get out', async () => {
    const leaky = serve(route('GET', '/planted', { policy: 'health:read', answer: z.strictObject({ id: z.int() }) }), {
      handle: () => ({ id: 1, passwordHash: '$argon2id$' }),
    });
    await expect(leaky.answer({ params: {}, query: {} } as never, app.ground)).rejects.toThrow('passwordHash');
  });
});
