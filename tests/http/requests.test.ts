import { request } from 'node:http';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { problem } from '#shared/contract/problem';
import { startApp, type RunningApp } from '../support/app';
import { DECLARED } from '../support/declared';
import { Client, type Answer } from '../support/client';
import { allRows } from '../support/rows';
import { makeWorld, PASSWORD, type Persona, type World } from '../support/world';

const ORIGIN = 'https://skewline.example';

let app: RunningApp;
let world: World;
beforeAll(async () => {
  app = await startApp({ publicOrigin: ORIGIN, trustedProxies: ['127.0.0.0/8'] });
  world = await makeWorld(app);
});
afterAll(async () => {
  await app.close();
});

const patchMe = (
  sending: { headers?: Record<string, string>; raw?: string | Buffer<ArrayBuffer> },
  body: unknown = { name: 'Vera', version: 1 },
): Promise<Answer> => world.as('analyst').patch('/me', body, sending);

describe('14 a request that would change something', () => {
  it.each([
    ['another site, by its origin', { origin: 'https://evil.example' }],
    ['another site, by what the browser says', { 'sec-fetch-site': 'cross-site' }],
    ['a neighbour under the same domain', { 'sec-fetch-site': 'same-site', origin: 'https://skewline.example' }],
    ['no site at all', { origin: 'null' }],
    ['an address bar', { 'sec-fetch-site': 'none' }],
    ['our host without TLS', { origin: 'http://skewline.example' }],
    ['another port of this machine', { origin: 'http://127.0.0.1:9999' }],
    ['another site that says it is the same', { origin: 'https://evil.example', 'sec-fetch-site': 'same-origin' }],
  ])('is refused from %s', async (_what, headers) => {
    expect((await patchMe({ headers })).status).toBe(403);
  });

  it.each([
    ['a form', 'application/x-www-form-urlencoded'],
    ['an upload', 'multipart/form-data; boundary=x'],
    ['plain text', 'text/plain'],
    ['nothing', ''],
    ['something like JSON', 'application/jsonp'],
    ['JSON among others', 'text/plain; application/json'],
    ['another charset', 'application/json; charset=utf-16'],
  ])('is refused as %s', async (_what, type) => {
    expect((await patchMe({ headers: { 'content-type': type } })).status).toBe(415);
  });

  it('is refused before its body is read, and before it can sign anyone in', async () => {
    const headers = { origin: 'https://evil.example' };
    expect((await patchMe({ headers, raw: '{' })).status).toBe(403);
    const client = new Client(app.url);
    expect((await client.post('/sign-in', { email: world.emailOf('chief'), password: PASSWORD }, { headers })).status).toBe(403);
    expect(client.cookies.size).toBe(0);
  });

  it('is taken from our own pages, and from a program', async () => {
    const sent = { origin: ORIGIN, 'sec-fetch-site': 'same-origin' };
    expect((await patchMe({ headers: sent })).status).toBe(200);
    expect((await patchMe({ headers: { 'content-type': 'application/json; charset=UTF-8' } })).status).toBe(409);
  });
});

describe('24 who may not act at a place', () => {
  it('is told so before their body is read or a field of it is looked at', async () => {
    const { alpha } = world.sites;
    const bodies = ['{', '{"label":1}', '{"label":"x","more":1}', 'x'.repeat(200_000)];
    const statuses = (who: Persona, path: string) =>
      Promise.all(bodies.map(async (raw) => (await world.as(who).post(path, undefined, { raw })).status));
    expect(await statuses('coordinator', `/sites/${alpha}/keys`)).toEqual([400, 400, 400, 413]);
    expect(await statuses('analyst', `/sites/${alpha}/keys`)).toEqual([403, 403, 403, 403]);
    expect(await statuses('otherOperator', `/sites/${alpha}/keys`)).toEqual([404, 404, 404, 404]);
    expect(await statuses('operator', '/leap-second-tables')).toEqual([403, 403, 403, 403]);
    for (const query of ['?limit=x', '?x=1']) {
      expect((await world.as('otherOperator').get(`/sites/${alpha}/keys${query}`)).status).toBe(404);
      expect((await world.as('analyst').get(`/sites/${alpha}/keys${query}`)).status).toBe(403);
    }
  });

  it('and could not anywhere is told so where only the body says the place', async () => {
    const statuses = (who: Persona, raw: string) =>
      Promise.all(
        ['/people', `/people/${world.people.analyst}/roles`].map(async (path) => (await world.as(who).post(path, {}, { raw })).status),
      );
    for (const who of ['nobodySpecial', 'analyst', 'operator'] as const)
      expect(await statuses(who, 'x'.repeat(200_000)), who).toEqual([403, 403]);
    expect(await statuses('coordinator', '{}')).toEqual([400, 400]);
  });
});

describe('25 a body', () => {
  it('with a field that its route does not know is refused, and says which there are', async () => {
    const { status, body } = await patchMe({}, { name: 'Vera', version: 1, role: 'coordinator' });
    expect(status).toBe(400);
    expect(body).toMatchObject({ where: 'role', detail: expect.stringContaining('known here: name, version') as string });
  });
});

describe('31 a body', () => {
  const deep = (levels: number): string => `${'['.repeat(levels)}${']'.repeat(levels)}`;
  it.each<[string, string | Buffer<ArrayBuffer>, number, string]>([
    ['is refused above its bound', `{"name":"${'x'.repeat(64 * 1024)}"}`, 413, 'at most 65536 bytes'],
    ['is refused when it is deeper than 32 levels', deep(33), 400, '32 levels'],
    ['is refused when it is very deep', deep(30_000), 400, '32 levels'],
    ['is refused when it has more than 10,000 items', `[${'1,'.repeat(10_000)}1]`, 400, '10000 items'],
    ['is refused with __proto__', '{"name":"x","version":1,"__proto__":{"role":1}}', 400, 'no field __proto__'],
    ['is refused with __proto__ deep inside', '{"name":[{"__proto__":1}]}', 400, 'no field __proto__'],
    ['is refused with constructor', '{"constructor":{"prototype":{}}}', 400, 'no field constructor'],
    ['is refused with half a character', '{"name":"\\ud800","version":1}', 400, 'half a character'],
    ['is refused in bytes that are not UTF-8', Buffer.from([0x7b, 0x22, 0xff, 0x22, 0x3a, 0x31, 0x7d]), 400, 'JSON in UTF-8'],
    ['is refused when it is not JSON', '{name: 1}', 400, 'JSON in UTF-8'],
    ['is refused when it is empty', '', 400, 'JSON in UTF-8'],
    ['37 is refused with a number that no double holds', '{"name":"x","version":1e999}', 400, 'too large'],
    ['37 is refused with NaN, which JSON does not have', '{"name":"x","version":NaN}', 400, 'JSON in UTF-8'],
    ['37 is refused with null in place of a number', '{"name":"x","version":null}', 400, 'version is null'],
  ])('%s', async (_what, raw, status, words) => {
    const answer = await patchMe({ raw });
    expect(answer.status).toBe(status);
    expect(answer.body).toMatchObject({ detail: expect.stringContaining(words) as string });
  });

  it('at its bounds is read', async () => {
    for (const raw of [deep(32), `[${'1,'.repeat(9_999)}1]`])
      expect((await patchMe({ raw })).body).toMatchObject({ detail: expect.stringMatching(/^is |an object/) as string });
  });

  it('is refused when it is compressed, chunked beyond its bound, or not whole', async () => {
    expect((await patchMe({ headers: { 'content-encoding': 'gzip' }, raw: Buffer.from([31, 139]) })).status).toBe(415);
    const cookie = [...world.as('analyst').cookies].map(([name, value]) => `${name}=${value}`).join('; ');
    const status = await new Promise<number | undefined>((resolve, reject) => {
      const req = request(`${app.url}/api/me`, { method: 'PATCH', headers: { 'content-type': 'application/json', cookie } }, (res) => {
        res.resume();
        resolve(res.statusCode);
      });
      req.on('error', reject);
      for (let part = 0; part < 5; part += 1) req.write('x'.repeat(20_000));
      req.end();
    });
    expect(status).toBe(413);
  });
});

describe('15 GET', () => {
  it('never changes state, whoever asks for whatever', async () => {
    const chief = world.as('chief');
    const before = allRows(app.ground.db);
    const paths = [
      '/me',
      '/me/sessions',
      '/people',
      `/people/${world.people.analyst}`,
      `/sites/${world.sites.alpha}/keys`,
      '/audit',
      '/kept-mails',
      '/health',
    ];
    // Every GET there is, of the things of this world where there are such, else of nothing.
    const ids: Readonly<Record<string, number>> = {
      networkId: world.networks.first,
      siteId: world.sites.alpha,
      personId: world.people.analyst,
    };
    const every = DECLARED.filter(({ method }) => method === 'GET').map(({ path }) =>
      path.replaceAll(/:(\w+)/g, (_all, name: string) => String(ids[name] ?? 1)),
    );
    for (const path of every) expect([200, 400, 401, 404], path).toContain((await chief.get(path)).status);
    for (const path of paths) expect((await chief.get(path)).status, path).toBe(200);
    for (const path of [
      '/sign-out',
      '/sign-out-everywhere',
      '/refresh',
      '/resets',
      '/resets/use',
      `/people/${world.people.analyst}/disable`,
    ])
      expect((await chief.get(path)).status, path).toBe(405);
    expect(allRows(app.ground.db)).toEqual(before);
  });
});

describe('18 and 19 every answer of the API', () => {
  it('is not stored, not sniffed, and names nobody as its referrer', async () => {
    const chief = world.as('chief');
    const answers = [
      await chief.get('/me'),
      await chief.get('/nothing'),
      await chief.post('/me/password', {}),
      await new Client(app.url).get('/me'),
      await chief.get('/sign-in'),
    ];
    expect(answers.map(({ status }) => status)).toEqual([200, 404, 400, 401, 405]);
    for (const { headers } of answers) {
      expect(headers.get('cache-control')).toBe('no-store');
      expect(headers.get('x-content-type-options')).toBe('nosniff');
      expect(headers.get('referrer-policy')).toBe('no-referrer');
      expect(headers.get('cross-origin-resource-policy')).toBe('same-origin');
      expect(headers.get('cross-origin-opener-policy')).toBe('same-origin');
      expect(headers.get('permissions-policy')).toContain('geolocation=()');
      expect(headers.get('strict-transport-security')).toBeNull(); // over plain http
      expect(headers.get('x-powered-by')).toBeNull();
      expect(headers.get('access-control-allow-origin')).toBeNull();
    }
  });
});

describe('21 X-Forwarded-For', () => {
  const failures = async (target: RunningApp, count: number, forwarded: (at: number) => string): Promise<number[]> => {
    const statuses: number[] = [];
    for (let at = 0; at < count; at += 1) {
      const headers = { 'x-forwarded-for': forwarded(at) };
      statuses.push(
        (await new Client(target.url).post('/sign-in', { email: `x${at}@example.org`, password: 'a wrong password' }, { headers })).status,
      );
    }
    return statuses;
  };

  it('is not read when no proxy is configured: changing it frees nobody', async () => {
    const bare = await startApp();
    try {
      expect((await failures(bare, 32, (at) => `203.0.113.${at}`)).at(-1)).toBe(429);
    } finally {
      await bare.close();
    }
  });

  it('is read from a configured one, and only its last part: what a client puts before it frees nobody', async () => {
    expect(new Set(await failures(app, 32, (at) => `203.0.113.${at}`))).toEqual(new Set([401]));
    expect((await failures(app, 32, (at) => `198.51.100.${at}, 192.0.2.7`)).at(-1)).toBe(429);
    expect((await failures(app, 32, (at) => `2001:db8:1:2::${at}`)).at(-1)).toBe(429);
  });
});

describe('38 every fault', () => {
  it('is an RFC 9457 problem whose id is in the log, and nothing else', async () => {
    const chief = world.as('chief');
    const answers = [
      await chief.get('/nothing'),
      await chief.get('/people/0'),
      await chief.post('/people', {}),
      await chief.send('DELETE', '/me', {}),
      await new Client(app.url).get('/me'),
      await world.as('analyst').get('/people'),
      await patchMe({ raw: 'x' }),
    ];
    for (const { status, headers, body } of answers) {
      expect(status).toBeGreaterThanOrEqual(400);
      expect(headers.get('content-type')).toBe('application/problem+json; charset=utf-8');
      const { id } = problem.parse(body);
      expect(app.log.some((line) => (line['req'] as { id?: string } | undefined)?.id === id)).toBe(true);
    }
  });

  it('of our own tells its id alone, and the rest to the log', async () => {
    const broken = await startApp();
    try {
      broken.ground.db.$client.exec('DROP TABLE failed_attempts');
      const { status, body, text } = await new Client(broken.url).post('/sign-in', { email: 'a@example.org', password: PASSWORD });
      expect(status).toBe(500);
      expect(text).not.toMatch(/failed_attempts|sqlite|\.ts|at /i);
      const lines = broken.log.filter((line) => JSON.stringify(line).includes(problem.parse(body).id));
      expect(JSON.stringify(lines)).toContain('no such table');
    } finally {
      await broken.close();
    }
  });
});

describe('39 the log', () => {
  it('has one line for a sign-in, a refusal, a role that changed and a key, and no secret', async () => {
    const client = new Client(app.url);
    await client.post('/sign-in', { email: world.emailOf('chief'), password: 'not this password' });
    await client.post('/sign-in', { email: world.emailOf('chief'), password: PASSWORD });
    const given = { role: 'reviewer', networkId: world.networks.second, siteId: null, expiresAt: null };
    await client.post(`/people/${world.people.analyst}/roles`, given);
    const { key } = (await client.post(`/sites/${world.sites.alpha}/keys`, { label: 'x' })).body as { key: string };
    const events = app.log.map((line) => line['event']);
    for (const event of ['session:refused', 'session:begun', 'role:given', 'site-key:made'])
      expect(events.filter((one) => one === event).length, event).toBeGreaterThanOrEqual(1);
    for (const secret of [PASSWORD, 'not this password', key, ...client.cookies.values(), world.emailOf('chief')])
      expect(app.rawLog()).not.toContain(secret);
  });

  const linesOf = (event: string) => app.log.filter((line) => line['event'] === event);

  it('has one line for each refusal of someone who is known: who, by which policy, and at which request', async () => {
    const before = linesOf('request:refused').length;
    const refused = [
      await world.as('analyst').get(`/sites/${world.sites.alpha}/keys`),
      await world.as('otherOperator').get(`/sites/${world.sites.alpha}/keys`),
      await world.as('analyst').post(`/sites/${world.sites.alpha}/keys`, { label: 'x' }),
      await world.as('operator').post('/people', {}),
      await world.as('operator').get('/people'),
      await world.as('operator').get('/site-key'),
      await new Client(app.url).get('/people'), // nobody that is known
    ];
    expect(refused.map(({ status }) => status)).toEqual([403, 404, 403, 403, 403, 401, 401]);
    const { analyst, operator, otherOperator } = world.people;
    expect(
      linesOf('request:refused')
        .slice(before)
        .map(({ personId, policy, verdict, requestId }) => [personId, policy, verdict, requestId]),
    ).toEqual([
      [analyst, 'site-key:list', 'forbidden', problem.parse(refused[0]!.body).id],
      [otherOperator, 'site-key:list', 'hidden', problem.parse(refused[1]!.body).id],
      [analyst, 'site-key:make', 'forbidden', problem.parse(refused[2]!.body).id],
      [operator, 'person:invite', 'forbidden', problem.parse(refused[3]!.body).id],
      [operator, 'person:list', 'forbidden', problem.parse(refused[4]!.body).id],
      [operator, 'site-key:read-own', 'sign-in', problem.parse(refused[5]!.body).id],
    ]);
  });

  it('has one line a minute for the use of a key', async () => {
    const made = await world.as('chief').post(`/sites/${world.sites.alpha}/keys`, { label: 'used' });
    const { id, key } = made.body as { id: number; key: string };
    const use = () => new Client(app.url).get('/site-key', { headers: { authorization: `Bearer ${key}` } });
    for (let at = 0; at < 3; at += 1) expect((await use()).status).toBe(200);
    await vi.waitFor(() => expect(linesOf('site-key:used').map(({ keyId }) => keyId)).toEqual([id]));
  });

  it('has no character that a terminal would obey', () => {
    app.ground.log.info({ text: 'a\u0007\u001b[31m\u009b31m\u2028\u202e\u007fz' }, 'x\ny');
    const written = app.rawLog().trimEnd().split('\n').at(-1)!;
    expect(written).not.toMatch(/[\p{Cc}\u2028\u202e]/u);
    expect(JSON.parse(written)).toMatchObject({ text: 'a\u0007\u001b[31m\u009b31m\u2028\u202e\u007fz', msg: 'x\ny' });
  });
});
