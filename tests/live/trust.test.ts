import { createServer, request } from 'node:http';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { io } from 'socket.io-client';
import { sessions } from '#schema/schema';
import { LIVE_PATH, LIVE_REQUESTS } from '#shared/contract/live-socket';
import { ACCESS_S } from '../../backend/accounts/access-token';
import { openLive } from '../../backend/live/live-server';
import { noteChange } from '../../backend/live/note-change';
import { commit } from '../../backend/writer/commit';
import { startApp, type RunningApp } from '../support/app';
import { Client } from '../support/client';
import { insertRow } from '../support/network-rows';
import { makeWorld, PASSWORD, type Persona, type World } from '../support/world';
import { ask, browserSocket, ended, heard, linked, linking } from './live-app';

const WITHIN_MS = 2_000;

let app: RunningApp;
let world: World;
beforeAll(async () => {
  app = await startApp();
  world = await makeWorld(app);
});
afterAll(() => app.close());

const follower = async (client: Client) => {
  const socket = await linked(app, client);
  expect(await ask(socket, 'network:follow', { networkId: world.networks.first })).toMatchObject({ ok: true });
  return socket;
};

/** How long something takes to come, in ms. */
async function within(coming: Promise<unknown>): Promise<void> {
  const late = new Promise<never>((_, reject) =>
    setTimeout(() => reject(new Error(`did not come within ${WITHIN_MS} ms`)), WITHIN_MS).unref(),
  );
  await Promise.race([coming, late]);
}

const personAt = async (persona: Persona) => {
  const { body } = await world.as('chief').get(`/people/${world.people[persona]}`);
  return body as { version: number; roles: { id: number; version: number }[] };
};

describe('11 a socket ends within 2 s', () => {
  it('when its person signs out, and no other of the same person does', async () => {
    const [client, elsewhere] = [world.as('reviewer'), world.as('reviewer')];
    const [socket, other] = [await follower(client), await follower(elsewhere)];
    const [news, end] = [heard(socket, 'live:ended'), ended(socket)];
    await client.post('/sign-out');
    await within(end);
    expect(await news).toMatchObject({ code: 'sign-in' });
    expect(other.connected).toBe(true);
    other.disconnect();
  });

  it('when another session of the person chooses a new password (7)', async () => {
    const [here, there] = [world.as('analyst'), world.as('analyst')];
    const [stays, goes] = [await follower(here), await follower(there)];
    const end = ended(goes);
    await here.post('/me/password', { current: PASSWORD, password: 'another gravel omelette' });
    await within(end);
    expect(stays.connected).toBe(true);
    stays.disconnect();
  });

  it('when its token has expired and nobody renewed the session, and not when somebody did', async () => {
    const [renewed, forgotten] = [world.as('operator'), world.as('operator')];
    const [stays, goes] = [await follower(renewed), await follower(forgotten)];
    const end = ended(goes);
    app.forwardMs((ACCESS_S - 60) * 1000);
    expect((await renewed.post('/refresh')).status).toBe(200);
    app.forwardMs(61_000);
    await within(end);
    await new Promise((resolve) => setTimeout(resolve, 1_000));
    expect(stays.connected).toBe(true);
    stays.disconnect();
  });

  it('when its person is disabled', async () => {
    const socket = await follower(world.as('otherOperator'));
    const end = ended(socket);
    const { version } = await personAt('otherOperator');
    expect((await world.as('chief').post(`/people/${world.people.otherOperator}/disable`, { version })).status).toBe(200);
    await within(end);
  });
});

describe('11 a socket is narrowed within 2 s', () => {
  const roleOf = async (persona: Persona) => (await personAt(persona)).roles[0]!;

  it('when the role is taken by which it follows', async () => {
    const socket = await follower(world.as('coordinator'));
    const news = heard(socket, 'network:ended');
    const { id, version } = await roleOf('coordinator');
    expect((await world.as('chief').post(`/roles/${id}/take`, { version })).status).toBe(204);
    await within(news);
    let isTold = false;
    socket.on('network:changed', () => (isTold = true));
    noteSomething();
    await new Promise((resolve) => setTimeout(resolve, 300));
    expect(isTold).toBe(false);
    expect(await ask(socket, 'network:follow', { networkId: world.networks.first })).toMatchObject({ ok: false, code: 'absent' });
    socket.disconnect();
  });

  it('when the role runs out by time alone', async () => {
    const socket = await follower(world.as('reviewer'));
    const news = heard(socket, 'network:ended');
    const { id, version } = await roleOf('reviewer');
    const expiresAt = new Date(app.ground.nowMs() + 30_000).toISOString();
    expect((await world.as('chief').send('PATCH', `/roles/${id}`, { expiresAt, version })).status).toBe(200);
    app.forwardMs(31_000);
    await within(news);
    socket.disconnect();
  });
});

const noteSomething = (): number =>
  commit(app.ground.db, (tx) => noteChange(tx, world.networks.first, 'setup', { what: 'run', id: 1 }, app.ground.nowMs()));

describe('16 a browser socket', () => {
  it.each([
    ['foreign', 'https://elsewhere.example'],
    ['null', 'null'],
    ['missing', undefined],
    ['alike', 'http://localhost.elsewhere.example'],
  ])('is refused to a %s origin with 403', async (_, origin) => {
    const status = await new Promise<number | undefined>((resolve) => {
      const asked = request(`${app.url}${LIVE_PATH}/?EIO=4&transport=websocket`, {
        headers: {
          ...(origin !== undefined && { origin }),
          connection: 'Upgrade',
          upgrade: 'websocket',
          'sec-websocket-version': '13',
          'sec-websocket-key': 'dGhlIHNhbXBsZSBub25jZQ==',
        },
      });
      asked.on('response', ({ statusCode }) => resolve(statusCode));
      asked.on('upgrade', () => resolve(101));
      asked.end();
    });
    expect(status).toBe(403);
  });

  it('is not reached in any other way than by WebSocket', async () => {
    expect((await fetch(`${app.url}${LIVE_PATH}/?EIO=4&transport=polling`, { headers: { origin: app.url } })).status).toBe(400);
  });

  it('is refused without a session, whatever else is shown', async () => {
    const nobody = browserSocket(app, new Client(app.url), { authorization: 'Bearer swk_something' });
    expect((await linking(nobody))?.data).toMatchObject({ code: 'sign-in' });
    const recovered = io(app.url, { path: LIVE_PATH, transports: ['websocket'], reconnection: false, auth: { pid: 'x', offset: 'y' } });
    expect(await linking(recovered)).toBeDefined();
  });
});

describe('22 an event', () => {
  it('without a policy, or with one that is not for people, stops the start', () => {
    const requests: Record<string, unknown> = LIVE_REQUESTS;
    const declared = Object.keys(LIVE_REQUESTS);
    for (const planted of ['network:planted', 'toString', 'health:read', 'stream:state']) {
      Object.defineProperty(requests, planted, { value: LIVE_REQUESTS['network:leave'], enumerable: true, configurable: true });
      try {
        expect(() => openLive(createServer(), app.ground, app.writer)).toThrow(`the event ${planted} has no policy for people`);
      } finally {
        Reflect.deleteProperty(requests, planted);
      }
    }
    expect(Object.keys(LIVE_REQUESTS)).toEqual(declared);
    openLive(createServer(), app.ground, app.writer).close();
  });
});

describe('24 each message is judged by its place', () => {
  it.each([
    ['otherCoordinator', 'first'],
    ['nobodySpecial', 'first'],
  ] as const)('and a network of others is to %s as if it were not', async (persona, network) => {
    const socket = await linked(app, world.as(persona));
    const absent = await ask(socket, 'network:follow', { networkId: 999_999 });
    expect(absent).toMatchObject({ ok: false, code: 'absent' });
    expect(await ask(socket, 'network:follow', { networkId: world.networks[network] })).toEqual(absent);
    expect(await ask(socket, 'network:missed', { networkId: world.networks[network], after: 0 })).toEqual(absent);
    socket.disconnect();
  });

  it('and an operator hears of their own sites alone', async () => {
    const socket = await linked(app, world.as('operator'));
    const answer = await ask(socket, 'network:follow', { networkId: world.networks.first });
    expect(answer.ok && answer.states.sites.map(({ site }) => site)).toEqual(['ALPHA']);
    const news = heard(socket, 'network:changed');
    commit(app.ground.db, (tx) =>
      noteChange(
        tx,
        world.networks.first,
        'set-aside',
        { sites: { [world.sites.alpha]: { sigma: 2 }, [world.sites.beta]: { sigma: 3 } } },
        app.ground.nowMs(),
      ),
    );
    expect(await news).toMatchObject({ kind: 'changes', setAsides: [{ siteId: world.sites.alpha, records: 2 }] });
    socket.disconnect();
  });
});

describe('39 the log', () => {
  it('has one line for each message that is refused: who, by which policy, for which network', async () => {
    const { first, second } = world.networks;
    const lines = () => app.log.filter(({ event }) => event === 'live:refused');
    const before = lines().length;
    const client = world.as('otherCoordinator');
    const socket = await linked(app, client);
    expect(await ask(socket, 'network:follow', { networkId: second })).toMatchObject({ ok: true });
    expect(await ask(socket, 'network:follow', { networkId: first })).toMatchObject({ ok: false, code: 'absent' });
    expect(await ask(socket, 'network:missed', { networkId: 999_999, after: 0 })).toMatchObject({ ok: false, code: 'absent' });
    const personId = world.people.otherCoordinator;
    const refused = lines().slice(before);
    expect(refused.map(({ personId, policy, verdict, networkId }) => [personId, policy, verdict, networkId])).toEqual([
      [personId, 'network:follow', 'hidden', first],
      [personId, 'network:missed', 'hidden', 999_999],
    ]);
    for (const cookie of client.cookies.values()) expect(app.rawLog()).not.toContain(cookie);
    socket.disconnect();
  });

  // The look at all links, twice a second, may end the link in the moment between its session's end and the message: then it is tried again.
  it('has a line for a message of a session that has ended', { retry: 3 }, async () => {
    const socket = await linked(app, world.as('chief'));
    const end = ended(socket);
    const asking = ask(socket, 'network:follow', { networkId: world.networks.first });
    app.ground.db.update(sessions).set({ endedAt: '2026-03-01T00:00:00.000Z', endReason: 'signed-out' }).run();
    expect(await asking).toMatchObject({ ok: false, code: 'sign-in' });
    expect(app.log.findLast(({ event }) => event === 'live:refused')).toMatchObject({
      personId: world.people.chief,
      policy: 'network:follow',
      verdict: 'sign-in',
      networkId: world.networks.first,
    });
    await within(end);
  });
});

describe('36 a message that is not as it must be', () => {
  it('is answered, and the socket goes on', async () => {
    const socket = await linked(app, world.as('chief'));
    const networkId = world.networks.first;
    const nasty: readonly (readonly [string, unknown])[] = [
      ['network:steal', {}],
      ['constructor', {}],
      ['__proto__', {}],
      ['network:follow', null],
      ['network:follow', { networkId: '1' }],
      ['network:follow', { networkId: 1.5 }],
      ['network:follow', { networkId, after: -1 }],
      ['network:follow', { networkId, more: 1 }],
      ['network:missed', { networkId }],
      ['network:missed', { networkId, after: Infinity }],
      ['network:leave', Buffer.from('x')],
      ['network:follow', JSON.parse('{"networkId":1,"__proto__":{"x":1}}')],
    ];
    for (const [name, given] of nasty) {
      const answer: unknown = await socket.timeout(2_000).emitWithAck(name, given);
      expect(answer, `${name} ${JSON.stringify(given)}`).toMatchObject({ ok: false, code: 'unusable' });
    }
    expect(await ask(socket, 'network:missed', { networkId, after: 10_000_000 })).toMatchObject({ ok: false, code: 'too-old' });
    expect(await ask(socket, 'network:follow', { networkId, after: 10_000_000 })).toMatchObject({ ok: true, isKept: false });
    expect(await ask(socket, 'network:leave', { networkId })).toEqual({ ok: true });
    socket.disconnect();
  });

  it('without a function for the answer is counted, and too many end that socket and no other', async () => {
    const [socket, other] = [await follower(world.as('chief')), await follower(world.as('chief'))];
    const news = heard(socket, 'live:ended');
    const end = ended(socket);
    for (let times = 0; times < 20; times++) socket.emit('network:follow', { networkId: world.networks.first });
    await end;
    expect(await news).toMatchObject({ code: 'faults' });
    expect(await ask(other, 'network:leave', { networkId: world.networks.first })).toEqual({ ok: true });
    other.disconnect();
  });

  it('of more than 64 KiB cuts that link alone', async () => {
    const [socket, other] = [await follower(world.as('chief')), await follower(world.as('chief'))];
    const end = ended(socket);
    socket.emit('network:follow', { networkId: 1, text: 'x'.repeat(65 * 1024) });
    await end;
    expect(await ask(other, 'network:leave', { networkId: world.networks.first })).toEqual({ ok: true });
    other.disconnect();
  });

  it('comes too often and is told to wait', async () => {
    const socket = await linked(app, world.as('chief'));
    const asked = { networkId: world.networks.first, after: 0 };
    const answers = await Promise.all(Array.from({ length: 60 }, () => ask(socket, 'network:missed', asked)));
    const busy = answers.filter((answer) => !answer.ok && answer.code === 'busy');
    expect(busy.length).toBeGreaterThan(10);
    expect(busy.length).toBeLessThan(30);
    socket.disconnect();
  });
});

describe('the states of sites', () => {
  it('come when they have changed, say what HTTP says, and no more than once a second', async () => {
    const client = world.as('chief');
    const socket = await follower(client);
    const times: number[] = [];
    socket.on('site:states', () => times.push(Date.now()));
    for (let at = 1; at <= 15; at++) {
      app.ground.db.$client.prepare('UPDATE site_streams SET connected_at_ms = ? WHERE site_id = ?').run(at, world.sites.alpha);
      await new Promise((resolve) => setTimeout(resolve, 150));
    }
    const states = await heard(socket, 'site:states', ({ sites }) => sites[0]?.connectedAtMs === 15);
    const { body } = await client.get(`/networks/${world.networks.first}/site-states`);
    expect(states.sites).toEqual((body as typeof states).sites);
    expect(times.length).toBeGreaterThan(1);
    for (const [at, ms] of times.slice(1).entries()) expect(ms - times[at]!).toBeGreaterThan(700);
    socket.disconnect();
  });
});

describe('the look at the database', () => {
  it('finds what a command wrote beside the server', async () => {
    const socket = await follower(world.as('chief'));
    const news = heard(socket, 'network:changed');
    const { last } = app.ground.db.$client
      .prepare<[number], { last: number }>('SELECT last FROM change_heads WHERE network_id = ?')
      .get(world.networks.first)!;
    insertRow(app.ground.db, 'changes', {
      network_id: world.networks.first,
      number: last + 1,
      at_ms: 1,
      kind: 'rule',
      body: JSON.stringify({ ruleId: 7 }),
    });
    await within(news);
    expect(await news).toMatchObject({ from: last + 1, to: last + 1, hints: [{ kind: 'rule', what: null, id: 7 }] });
    socket.disconnect();
  });
});
