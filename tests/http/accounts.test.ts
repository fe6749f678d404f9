import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { mailedTokens, people, siteKeys } from '#schema/schema';
import { inviteFirstCoordinator } from '../../backend/accounts/first-coordinator';
import { startApp, type RunningApp } from '../support/app';
import { Client } from '../support/client';
import { mailsTo, tokenMailedTo } from '../support/mails';
import { makeWorld, PASSWORD, type World } from '../support/world';

const HOUR_MS = 3600_000;

let app: RunningApp;
let world: World;
beforeAll(async () => {
  app = await startApp({ publicOrigin: 'https://skewline.example' });
  world = await makeWorld(app);
});
afterAll(async () => {
  await app.close();
});

const anyone = (): Client => new Client(app.url);
const analystOfFirst = () => ({ role: 'analyst', networkId: world.networks.first, siteId: null, expiresAt: null });
const invite = (email: string, client = world.as('chief')) => client.post('/people', { email, name: 'Ida Novak', role: analystOfFirst() });
const accept = (token: string, password = PASSWORD) => anyone().post('/invitations/accept', { token, password });
const useReset = (token: string, password = PASSWORD) => anyone().post('/resets/use', { token, password });
const signInStatus = async (email: string, password = PASSWORD) => (await anyone().post('/sign-in', { email, password })).status;

describe('5 the first coordinator', () => {
  it('is let in by a link that works once, may be asked for again until it is used, and never after', async () => {
    const empty = await startApp();
    try {
      expect(empty.ground.db.select().from(people).all()).toEqual([]);
      const tokenOf = (link: string | undefined) => /^http:\/\/localhost:\d+\/invitation#([A-Za-z0-9_-]{22})$/.exec(link ?? '')![1]!;
      const lost = tokenOf(inviteFirstCoordinator(empty.ground, 'ida@example.org', 'Ida Novak'));
      const mistyped = tokenOf(inviteFirstCoordinator(empty.ground, 'odo@example.org', 'Odo'));
      const good = tokenOf(inviteFirstCoordinator(empty.ground, 'eva@example.org', 'Eva Lind'));
      const client = new Client(empty.url);
      for (const token of [lost, mistyped])
        expect((await client.post('/invitations/accept', { token, password: PASSWORD })).status).toBe(400);
      expect((await client.post('/invitations/accept', { token: good, password: PASSWORD })).status).toBe(204);
      expect((await client.post('/sign-in', { email: 'eva@example.org', password: PASSWORD })).body).toMatchObject({
        roles: [{ role: 'coordinator', networkId: null, siteId: null }],
      });
      expect(inviteFirstCoordinator(empty.ground, 'eva@example.org', 'Eva Lind')).toBeUndefined();
      expect(inviteFirstCoordinator(empty.ground, 'odd@example.org', 'Odd')).toBeUndefined();
    } finally {
      await empty.close();
    }
  });
});

describe('6 an invitation', () => {
  it('comes by mail, lets its person in once, and is kept as a hash alone', async () => {
    const { status, body, text } = await invite('ida@example.org');
    expect(status).toBe(201);
    expect(body).toMatchObject({ state: 'invited', roles: [{ role: 'analyst' }] });
    const token = await tokenMailedTo(app, 'ida@example.org');
    expect(Buffer.from(token, 'base64url')).toHaveLength(16); // 128 bits
    expect(text).not.toContain(token);
    for (const { hash } of app.ground.db.select().from(mailedTokens).all()) expect(hash).toHaveLength(32);
    expect(await signInStatus('ida@example.org')).toBe(401);
    expect((await accept(token)).status).toBe(204);
    expect(await signInStatus('ida@example.org')).toBe(200);
    expect((await accept(token, 'another gravel omelette')).status).toBe(400);
    expect(await signInStatus('ida@example.org')).toBe(200);
  });

  it('has a link that is made from the configuration, whatever Host the request named', async () => {
    const { status } = await world.as('chief').post(
      '/people',
      { email: 'host@example.org', name: 'Host', role: analystOfFirst() },
      {
        headers: { host: 'evil.example', 'x-forwarded-host': 'evil.example', 'x-forwarded-proto': 'http' },
      },
    );
    expect(status).toBe(201);
    await tokenMailedTo(app, 'host@example.org');
    const [mail] = mailsTo(app, 'host@example.org');
    expect(mail!.text).toContain('https://skewline.example/invitation#');
    expect(mail!.text).not.toContain('evil');
    expect(mail!.sender).toBe('skewline@skewline.example');
  });

  it('expires after 72 hours, and not before', async () => {
    await invite('late@example.org');
    const token = await tokenMailedTo(app, 'late@example.org');
    app.forwardMs(72 * HOUR_MS);
    expect((await accept(token)).status).toBe(400);
    await invite('timely@example.org');
    const timely = await tokenMailedTo(app, 'timely@example.org');
    app.forwardMs(72 * HOUR_MS - 60_000);
    expect((await accept(timely)).status).toBe(204);
  });

  it('is void when a newer one was sent', async () => {
    const { body } = await invite('twice@example.org');
    const first = await tokenMailedTo(app, 'twice@example.org');
    expect((await world.as('coordinator').post(`/people/${(body as { id: number }).id}/invite-again`)).status).toBe(204);
    const second = await tokenMailedTo(app, 'twice@example.org', 2);
    expect((await accept(first)).status).toBe(400);
    expect((await accept(second)).status).toBe(204);
    expect((await world.as('coordinator').post(`/people/${(body as { id: number }).id}/invite-again`)).status).toBe(409);
  });

  it('is no use for another purpose, and a reset none as an invitation', async () => {
    await invite('cross@example.org');
    const token = await tokenMailedTo(app, 'cross@example.org');
    expect((await useReset(token)).status).toBe(400);
    expect((await accept(token)).status).toBe(204);
    await anyone().post('/resets', { email: 'cross@example.org' });
    const reset = await tokenMailedTo(app, 'cross@example.org', 2);
    expect((await accept(reset, 'another gravel omelette')).status).toBe(400);
    expect((await useReset(reset, 'another gravel omelette')).status).toBe(204);
  });

  it('is used by one of two at the same moment', async () => {
    await invite('race@example.org');
    const token = await tokenMailedTo(app, 'race@example.org');
    const both = await Promise.all([accept(token), accept(token, 'another gravel omelette')]);
    expect(both.map(({ status }) => status).sort()).toEqual([204, 400]);
  });

  it('is not used by a GET, nor used up by a password that is refused', async () => {
    await invite('get@example.org');
    const token = await tokenMailedTo(app, 'get@example.org');
    expect((await anyone().get(`/invitations/accept?token=${token}`)).status).toBe(405);
    expect((await accept(token, 'ida novak 1987')).status).toBe(400);
    expect((await accept(token)).status).toBe(204);
  });

  it('is refused for who is there already, and for an address that is two', async () => {
    expect((await invite(world.emailOf('analyst').toUpperCase())).status).toBe(409);
    for (const email of ['a@example.org, b@example.org', 'a@example.org\r\nBcc: b@example.org', '<a@example.org>', 'a@@example.org', ''])
      expect((await invite(email)).status, email).toBe(400);
  });
});

describe('6 a link for a new password', () => {
  it('is asked for by anyone with one answer, and goes to those who are there alone', async () => {
    const emails = [world.emailOf('reviewer'), 'nobody@example.org'];
    const answers = await Promise.all(emails.map((email) => anyone().post('/resets', { email })));
    expect(answers.map(({ status, text }) => [status, text])).toEqual([
      [204, ''],
      [204, ''],
    ]);
    const token = await tokenMailedTo(app, world.emailOf('reviewer'));
    expect(mailsTo(app, 'nobody@example.org')).toEqual([]);
    const live = world.as('reviewer');
    expect((await useReset(token, 'another gravel omelette')).status).toBe(204);
    expect((await live.get('/me')).status).toBe(401);
    expect((await useReset(token)).status).toBe(400);
    expect(await signInStatus(world.emailOf('reviewer'), 'another gravel omelette')).toBe(200);
  });

  it('expires after 30 minutes', async () => {
    await anyone().post('/resets', { email: world.emailOf('operator') });
    const token = await tokenMailedTo(app, world.emailOf('operator'));
    app.forwardMs(30 * 60_000);
    expect((await useReset(token)).status).toBe(400);
  });

  it('is sent a few times, and then waited for', async () => {
    const statuses = [];
    for (let at = 0; at < 5; at += 1) statuses.push((await anyone().post('/resets', { email: 'flood@example.org' })).status);
    expect(statuses).toEqual([204, 204, 204, 204, 429]);
  });

  it('goes to nobody who is disabled', async () => {
    app.ground.db.update(people).set({ disabledAt: '2026-01-01T00:00:00.000Z' }).where(eq(people.id, world.people.nobodySpecial)).run();
    await anyone().post('/resets', { email: world.emailOf('nobodySpecial') });
    await anyone().post('/resets', { email: world.emailOf('otherOperator') });
    await tokenMailedTo(app, world.emailOf('otherOperator'));
    expect(mailsTo(app, world.emailOf('nobodySpecial'))).toEqual([]);
  });
});

describe('13 a site key', () => {
  const make = async (client: Client, site: number): Promise<{ id: number; key: string; prefix: string }> =>
    (await client.post(`/sites/${site}/keys`, { label: 'control room' })).body as { id: number; key: string; prefix: string };
  const own = (key: string) => anyone().get('/site-key', { headers: { authorization: `Bearer ${key}` } });

  it('is shown whole once, then by its prefix and last use, and kept as a hash', async () => {
    const operator = world.as('operator');
    const { id, key, prefix } = await make(operator, world.sites.alpha);
    expect(key).toMatch(/^swk_[A-Za-z0-9_-]{43}$/);
    expect(key.startsWith(prefix)).toBe(true);
    const listed = async () =>
      (await operator.get(`/sites/${world.sites.alpha}/keys`)).body as { items: { id: number; lastUsedAt: string | null }[] };
    expect((await listed()).items.find((one) => one.id === id)).toMatchObject({ prefix, lastUsedAt: null });
    expect((await own(key)).body).toEqual({ label: 'control room', prefix, siteCode: 'ALPHA', networkCode: 'FIRST' });
    const text = JSON.stringify(await listed());
    expect((await listed()).items.find((one) => one.id === id)!.lastUsedAt).toMatch(/Z$/);
    expect(text).not.toContain(key);
    const { hash } = app.ground.db.select().from(siteKeys).where(eq(siteKeys.id, id)).get()!;
    expect(hash).toHaveLength(32);
    expect(text).not.toContain(hash.toString('hex'));
  });

  it('is of a kind of its own: no person by it, no site by a session, and nothing by half a key', async () => {
    const { key } = await make(world.as('operator'), world.sites.alpha);
    expect((await anyone().get('/me', { headers: { authorization: `Bearer ${key}` } })).status).toBe(401);
    expect((await world.as('chief').get('/me', { headers: { authorization: `Bearer ${key}` } })).status).toBe(401);
    expect((await world.as('operator').get('/site-key')).status).toBe(401);
    for (const half of [key.slice(0, -1), `${key}x`, key.toLowerCase(), '', 'swk_']) expect((await own(half)).status).toBe(401);
    expect((await anyone().get('/site-key', { headers: { authorization: `Basic ${key}` } })).status).toBe(401);
  });

  it('is of no more use once it is revoked', async () => {
    const operator = world.as('operator');
    const { id, key } = await make(operator, world.sites.alpha);
    expect((await own(key)).status).toBe(200);
    expect((await operator.post(`/sites/${world.sites.alpha}/keys/${id}/revoke`)).body).toMatchObject({
      revokedAt: expect.stringMatching(/Z$/) as string,
    });
    expect((await own(key)).status).toBe(401);
    expect((await operator.post(`/sites/${world.sites.alpha}/keys/${id}/revoke`)).status).toBe(409);
  });

  it('23 of another operator is as if it were not, by the site and by the key', async () => {
    const { id } = await make(world.as('otherOperator'), world.sites.beta);
    const operator = world.as('operator');
    const bodyOf = async (answer: Promise<{ status: number; body: unknown }>) => {
      const { status, body } = await answer;
      return { status, body: { ...(body as object), id: '' } };
    };
    const noSite = await bodyOf(operator.get('/sites/99999/keys'));
    expect(noSite.status).toBe(404);
    expect(await bodyOf(operator.get(`/sites/${world.sites.beta}/keys`))).toEqual(noSite);
    expect(await bodyOf(operator.get(`/sites/${world.sites.gamma}/keys`))).toEqual(noSite);
    expect(await bodyOf(operator.post(`/sites/${world.sites.beta}/keys`, { label: 'mine' }))).toEqual(noSite);
    expect(await bodyOf(operator.post(`/sites/${world.sites.beta}/keys/${id}/revoke`))).toEqual(noSite);
    expect(await bodyOf(operator.post(`/sites/${world.sites.alpha}/keys/${id}/revoke`))).toEqual(noSite);
    expect(await bodyOf(operator.post(`/sites/${world.sites.alpha}/keys/99999/revoke`))).toEqual(noSite);
    expect((await world.as('analyst').get(`/sites/${world.sites.beta}/keys`)).status).toBe(403);
    expect((await world.as('coordinator').get(`/sites/${world.sites.beta}/keys`)).status).toBe(200);
    expect((await world.as('otherCoordinator').get(`/sites/${world.sites.beta}/keys`)).status).toBe(404);
  });
});

describe('a role', () => {
  const give = (body: object, client = world.as('chief')) =>
    client.post(`/people/${world.people.analyst}/roles`, { networkId: null, siteId: null, expiresAt: null, ...body });

  it('of an invitation that cannot be is named by its path in the request', async () => {
    const chief = world.as('chief');
    const invited = (role: object) =>
      chief.post('/people', {
        email: 'new@example.org',
        name: 'New',
        role: { role: 'operator', networkId: world.networks.first, siteId: 99_999, expiresAt: null, ...role },
      });
    expect((await invited({})).body).toMatchObject({ status: 400, where: 'role.siteId' });
    expect((await invited({ siteId: world.sites.alpha, expiresAt: '2020-01-01T00:00:00.000Z' })).body).toMatchObject({
      status: 400,
      where: 'role.expiresAt',
    });
  });

  it('is given where its giver coordinates, and nowhere else', async () => {
    const [first, second] = [world.networks.first, world.networks.second];
    expect((await give({ role: 'reviewer', networkId: first }, world.as('coordinator'))).status).toBe(201);
    expect((await give({ role: 'reviewer', networkId: first }, world.as('coordinator'))).status).toBe(409);
    expect((await give({ role: 'reviewer', networkId: second }, world.as('coordinator'))).status).toBe(404);
    expect((await give({ role: 'reviewer', networkId: 99999 }, world.as('coordinator'))).status).toBe(404);
    expect((await give({ role: 'reviewer', networkId: 99999 })).status).toBe(404);
    expect((await give({ role: 'coordinator' }, world.as('coordinator'))).status).toBe(403);
    expect((await give({ role: 'reviewer', networkId: second }, world.as('analyst'))).status).toBe(403);
  });

  it.each<[string, object]>([
    ['an unknown one', { role: 'king' }],
    ['an analyst of everything', { role: 'analyst' }],
    ['an operator of no site', { role: 'operator', networkId: 1 }],
    ['an analyst of one site', { role: 'analyst', networkId: 1, siteId: 1 }],
    ["an operator of another network's site", { role: 'operator', networkId: 1, siteId: 3 }],
    ['an end that is past', { role: 'operator', networkId: 1, siteId: 1, expiresAt: '2020-01-01T00:00:00.000Z' }],
    ['an end that is no instant', { role: 'operator', networkId: 1, siteId: 1, expiresAt: '2027-02-30T00:00:00.000Z' }],
  ])('is refused: %s', async (_what, body) => {
    expect((await give(body)).status).toBe(400);
  });

  it('of the last coordinator of the deployment stays, and so do they', async () => {
    const chief = world.as('chief');
    const { roles: held, version } = (await chief.get('/me')).body as { roles: { id: number; version: number }[]; version: number };
    const [role] = held;
    const ahead = new Date(app.ground.nowMs() + HOUR_MS).toISOString();
    expect((await chief.post(`/roles/${role!.id}/take`, { version: role!.version })).status).toBe(409);
    expect((await chief.patch(`/roles/${role!.id}`, { version: role!.version, expiresAt: ahead })).status).toBe(409);
    expect((await chief.post(`/people/${world.people.chief}/disable`, { version })).status).toBe(409);
  });

  it('27 is changed and taken from the version that was seen', async () => {
    const { body } = await give({ role: 'analyst', networkId: world.networks.second });
    const { id } = body as { id: number };
    expect((await world.as('chief').post(`/roles/${id}/take`, { version: 7 })).status).toBe(409);
    expect((await world.as('chief').post(`/roles/${id}/take`, { version: 1 })).status).toBe(204);
    expect((await world.as('chief').post(`/roles/${id}/take`, { version: 1 })).status).toBe(404);
  });
});

describe('the list of people', () => {
  it('comes in pages that together hold everyone once', async () => {
    const chief = world.as('chief');
    const ids: number[] = [];
    let cursor = '';
    for (let pages = 0; pages < 50; pages += 1) {
      const { body } = await chief.get(`/people?limit=3${cursor}`);
      const { items, next } = body as { items: { id: number }[]; next: string | null };
      expect(items.length).toBeLessThanOrEqual(3);
      ids.push(...items.map(({ id }) => id));
      if (next === null) break;
      cursor = `&cursor=${next}`;
    }
    const all = app.ground.db.select({ id: people.id }).from(people).orderBy(people.id).all();
    expect(ids).toEqual(all.map(({ id }) => id));
  });

  it.each([
    'limit=0',
    'limit=201',
    'limit=-1',
    'limit=1e2',
    'limit=',
    'cursor=x',
    'cursor=0',
    'limit=1&limit=2',
    'sort=name',
    '__proto__=1',
  ])('refuses ?%s', async (query) => {
    expect((await world.as('chief').get(`/people?${query}`)).status).toBe(400);
  });
});
