import { createSecretKey, generateKeyPairSync } from 'node:crypto';
import { eq } from 'drizzle-orm';
import jwt from 'jsonwebtoken';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { audit, people, refreshTokens, roles, sessions } from '#schema/schema';
import { ACCESS_S } from '../../backend/accounts/access-token';
import { ACCESS_COOKIE, REFRESH_COOKIE } from '../../backend/accounts/cookies';
import { startApp, type RunningApp } from '../support/app';
import { Client } from '../support/client';
import { makeWorld, PASSWORD, type Persona, type World } from '../support/world';

let app: RunningApp;
let world: World;
beforeAll(async () => {
  app = await startApp();
  world = await makeWorld(app);
});
afterAll(async () => {
  await app.close();
});

const meStatus = async (client: Client): Promise<number> => (await client.get('/me')).status;
const signedIn = async (persona: Persona): Promise<Client> => {
  const client = new Client(app.url);
  expect((await client.post('/sign-in', { email: world.emailOf(persona), password: PASSWORD })).status).toBe(200);
  return client;
};

describe('7 a new password', () => {
  it('ends all other sessions of the person, and not the one that chose it', async () => {
    const [here, there, other] = [world.as('reviewer'), world.as('reviewer'), world.as('analyst')];
    expect((await here.post('/me/password', { current: PASSWORD, password: 'another gravel omelette' })).status).toBe(204);
    expect([await meStatus(here), await meStatus(there), await meStatus(other)]).toEqual([200, 401, 200]);
    expect((await there.post('/refresh')).status).toBe(401);
    expect((await here.post('/me/password', { current: 'another gravel omelette', password: PASSWORD })).status).toBe(204);
  });

  it('is not chosen by who does not know the old one', async () => {
    const { status, body } = await world
      .as('reviewer')
      .post('/me/password', { current: 'a wrong password', password: 'another gravel omelette' });
    expect(status).toBe(403);
    expect(body).toMatchObject({ where: 'current' });
  });
});

describe('8 an access token', () => {
  const statusOf = async (token: string): Promise<number> => {
    const client = new Client(app.url);
    client.cookies.set(ACCESS_COOKIE, token);
    return meStatus(client);
  };
  const nowS = (): number => Math.floor(app.ground.nowMs() / 1000);
  const good = () => {
    const session = jwt.decode(world.as('chief').cookies.get(ACCESS_COOKIE)!) as jwt.JwtPayload;
    return { ...session, iat: nowS(), exp: nowS() + ACCESS_S };
  };
  const header = { alg: 'HS256', typ: 'at+jwt' } as const;
  const signed = (claims: object, options: jwt.SignOptions = {}, key: jwt.Secret = app.ground.signingKey): string =>
    jwt.sign(claims, key, { header, ...options });
  const without = (name: string): object => Object.fromEntries(Object.entries(good()).filter(([key]) => key !== name));

  it('is taken when everything is right', async () => {
    expect(await statusOf(signed(good()))).toBe(200);
  });

  it.each<[string, () => string]>([
    ['no signature', () => jwt.sign(good(), '', { algorithm: 'none', header: { alg: 'none', typ: 'at+jwt' } })],
    ['another length of the algorithm', () => signed(good(), { algorithm: 'HS512', header: { ...header, alg: 'HS512' } })],
    [
      'another family',
      () =>
        jwt.sign(good(), generateKeyPairSync('rsa', { modulusLength: 2048 }).privateKey, {
          algorithm: 'RS256',
          header: { alg: 'RS256', typ: 'at+jwt' },
        }),
    ],
    ['another key', () => signed(good(), {}, createSecretKey('x'.repeat(48), 'utf8'))],
    ['no end', () => signed(without('exp'))],
    ['an end too far', () => signed({ ...good(), exp: nowS() + ACCESS_S + 60 })],
    ['a past end', () => signed({ ...good(), iat: nowS() - ACCESS_S, exp: nowS() - 1 })],
    ['a beginning ahead', () => signed({ ...good(), iat: nowS() + 60, exp: nowS() + 120 })],
    ['another issuer', () => signed({ ...good(), iss: 'someone' })],
    ['another audience', () => signed({ ...good(), aud: 'something' })],
    ['several audiences', () => signed({ ...good(), aud: ['skewline-api', 'something'] })],
    ['another type', () => signed(good(), { header: { alg: 'HS256', typ: 'JWT' } })],
    ['no type', () => signed(good(), { header: { alg: 'HS256', typ: undefined } })],
    ['no session', () => signed(without('sid'))],
    ["another person's session", () => signed({ ...good(), sub: String(world.people.analyst) })],
    ['a claim of its own', () => signed({ ...good(), role: 'coordinator' })],
    [
      'changed text',
      () =>
        signed(good()).replace(
          /\.[^.]+\./,
          (part) => `.${Buffer.from(JSON.stringify({ ...good(), sub: '2' })).toString('base64url')}${part.slice(-1)}`,
        ),
    ],
    ['no token at all', () => 'x.y.z'],
  ])('is refused: %s', async (_what, make) => {
    expect(await statusOf(make())).toBe(401);
  });
});

describe('10 a refresh token', () => {
  it('is used once, and gives the next', async () => {
    const client = await signedIn('analyst');
    const seen = new Set([client.cookies.get(REFRESH_COOKIE)]);
    for (let at = 0; at < 3; at += 1) {
      expect((await client.post('/refresh')).status).toBe(200);
      seen.add(client.cookies.get(REFRESH_COOKIE));
    }
    expect(seen.size).toBe(4);
    expect(await meStatus(client)).toBe(200);
  });

  it('that is used twice ends its whole family, and is audited', async () => {
    const client = await signedIn('analyst');
    const other = await signedIn('analyst');
    const thief = new Client(app.url);
    thief.cookies.set(REFRESH_COOKIE, client.cookies.get(REFRESH_COOKIE)!);
    expect((await client.post('/refresh')).status).toBe(200);
    const before = app.ground.db.select().from(audit).all().length;
    expect((await thief.post('/refresh')).status).toBe(401);
    expect(thief.cookies.size).toBe(0);
    expect([await meStatus(client), await meStatus(other)]).toEqual([401, 200]);
    expect((await client.post('/refresh')).status).toBe(401);
    const since = app.ground.db.select().from(audit).all().slice(before);
    expect(since).toMatchObject([{ action: 'session:revoked', actorKind: 'server', details: '{"reason":"token-used-twice"}' }]);
  });

  it('used by two at the same moment renews one of them at most', async () => {
    const client = await signedIn('analyst');
    const copy = new Client(app.url);
    copy.cookies.set(REFRESH_COOKIE, client.cookies.get(REFRESH_COOKIE)!);
    const both = await Promise.all([client.post('/refresh'), copy.post('/refresh')]);
    expect(both.map(({ status }) => status).sort()).toEqual([200, 401]);
  });

  it('ends after 7 idle days, and its session after 30 whatever it does', async () => {
    const day = 24 * 3600_000;
    const [idle, busy] = [await signedIn('analyst'), await signedIn('analyst')];
    for (let days = 0; days < 29; days += 1) {
      app.forwardMs(day);
      if (days === 6) expect((await idle.post('/refresh')).status).toBe(401);
      if (days < 28) expect((await busy.post('/refresh')).status).toBe(200);
    }
    app.forwardMs(day + 1);
    expect((await busy.post('/refresh')).status).toBe(401);
  });

  it('stands in the database as a hash alone', async () => {
    const client = await signedIn('analyst');
    const token = client.cookies.get(REFRESH_COOKIE)!;
    for (const { hash } of app.ground.db.select().from(refreshTokens).all()) {
      expect(hash).toHaveLength(32);
      expect(hash.toString('latin1')).not.toContain(token);
    }
  });
});

describe('11 at once', () => {
  it('a role that is taken away no longer holds, and one that has run out neither', async () => {
    const coordinator = world.as('coordinator');
    expect((await coordinator.get('/people')).status).toBe(200);
    const held = app.ground.db.select().from(roles).where(eq(roles.personId, world.people.coordinator)).get()!;
    const chief = world.as('chief');
    const inAnHour = new Date(app.ground.nowMs() + 3600_000).toISOString();
    expect((await chief.patch(`/roles/${held.id}`, { expiresAt: inAnHour, version: 1 })).status).toBe(200);
    expect((await coordinator.get('/people')).status).toBe(200);
    app.forwardMs(3600_001);
    const late = world.as('coordinator');
    expect((await late.get('/people')).status).toBe(403);
    const given = { role: 'coordinator', networkId: world.networks.first, siteId: null, expiresAt: null };
    const { status, body } = await world.as('chief').post(`/people/${world.people.coordinator}/roles`, given);
    expect(status).toBe(201);
    expect((await late.get('/people')).status).toBe(200);
    const { id, version } = body as { id: number; version: number };
    expect((await world.as('chief').post(`/roles/${id}/take`, { version })).status).toBe(204);
    expect((await late.get('/people')).status).toBe(403);
    expect((await world.as('chief').post(`/people/${world.people.coordinator}/roles`, given)).status).toBe(201);
  });

  it('a disabled person is out, cannot come back, and can after being enabled', async () => {
    const [client, chief] = [await signedIn('nobodySpecial'), world.as('chief')];
    const path = `/people/${world.people.nobodySpecial}`;
    expect((await chief.post(`${path}/disable`, { version: 1 })).body).toMatchObject({ state: 'disabled', version: 2 });
    expect(await meStatus(client)).toBe(401);
    expect((await client.post('/refresh')).status).toBe(401);
    expect((await new Client(app.url).post('/sign-in', { email: world.emailOf('nobodySpecial'), password: PASSWORD })).status).toBe(401);
    expect((await chief.post(`${path}/enable`, { version: 2 })).body).toMatchObject({ state: 'active' });
    expect(await meStatus(client)).toBe(401);
    await signedIn('nobodySpecial');
  });

  it('who signs out is out, here, elsewhere or everywhere, and the tokens that were copied with them', async () => {
    const [here, there, third] = [await signedIn('analyst'), await signedIn('analyst'), await signedIn('analyst')];
    const copy = new Client(app.url);
    for (const [name, value] of here.cookies) copy.cookies.set(name, value);
    expect((await here.post('/sign-out')).status).toBe(204);
    expect(here.cookies.size).toBe(0);
    expect([await meStatus(copy), await meStatus(there)]).toEqual([401, 200]);
    const { items } = (await there.get('/me/sessions')).body as { items: { id: number; current: boolean }[] };
    const [elsewhere] = items.filter(({ current }) => !current);
    expect((await there.post(`/me/sessions/${elsewhere!.id}/end`)).status).toBe(204);
    expect(await meStatus(third)).toBe(401);
    const last = await signedIn('analyst');
    expect((await there.post('/sign-out-everywhere')).status).toBe(204);
    expect([await meStatus(there), await meStatus(last)]).toEqual([401, 401]);
  });

  it('who signs out with an access token that has run out is out all the same', async () => {
    const client = await signedIn('analyst');
    app.forwardMs(ACCESS_S * 1000 + 1);
    const refresh = client.cookies.get(REFRESH_COOKIE)!;
    expect((await client.post('/sign-out')).status).toBe(204);
    client.cookies.set(REFRESH_COOKIE, refresh);
    expect((await client.post('/refresh')).status).toBe(401);
  });

  it("nobody ends another's session", async () => {
    const { id } = app.ground.db.select().from(sessions).where(eq(sessions.personId, world.people.chief)).all().at(-1)!;
    const [answer, absent] = [
      await world.as('analyst').post(`/me/sessions/${id}/end`),
      await world.as('analyst').post('/me/sessions/99999/end'),
    ];
    expect([answer.status, absent.status]).toEqual([404, 404]);
    expect({ ...(answer.body as object), id: '' }).toEqual({ ...(absent.body as object), id: '' });
  });
});

describe('12 the cookies', () => {
  it('are __Host-, HttpOnly, Secure, SameSite=Strict, for the whole path and no domain', async () => {
    const { headers } = await new Client(app.url).post('/sign-in', { email: world.emailOf('chief'), password: PASSWORD });
    const set = headers.getSetCookie();
    expect(set).toHaveLength(2);
    for (const line of set) {
      expect(line).toMatch(/^__Host-skewline-(access|refresh)=[A-Za-z0-9_.-]+;/);
      const attributes = line.split('; ').slice(1);
      expect(attributes).toEqual(expect.arrayContaining(['Path=/', 'HttpOnly', 'Secure', 'SameSite=Strict']));
      expect(line).not.toContain('Domain');
    }
  });

  it('are the only place of the tokens: no answer, address or log line has them', async () => {
    const client = await signedIn('chief');
    const texts = [(await client.get('/me')).text, (await client.get('/me/sessions')).text, (await client.post('/refresh')).text];
    for (const token of client.cookies.values()) for (const text of [...texts, app.rawLog()]) expect(text).not.toContain(token);
    const bearer = new Client(app.url);
    const { status } = await bearer.get('/me', { headers: { authorization: `Bearer ${client.cookies.get(ACCESS_COOKIE)!}` } });
    expect(status).toBe(401);
    expect((await bearer.get(`/me?access_token=${client.cookies.get(ACCESS_COOKIE)!}`)).status).toBe(401);
  });
});

describe('a name', () => {
  it('27 is changed from the version that was seen, and refused from an older one', async () => {
    const client = world.as('operator');
    const { version } = app.ground.db.select().from(people).where(eq(people.id, world.people.operator)).get()!;
    expect((await client.patch('/me', { name: 'Ωmega', version })).body).toMatchObject({ name: 'Ωmega', version: version + 1 });
    const { status, body } = await client.patch('/me', { name: 'Late', version });
    expect(status).toBe(409);
    expect(body).toMatchObject({ title: 'Changed meanwhile', where: 'version' });
  });
});
