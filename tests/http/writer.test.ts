import { existsSync, mkdirSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import Database from 'better-sqlite3';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { changeHeads, networks } from '#schema/schema';
import { route } from '#shared/contract/routes';
import { root } from '../../scripts/lib.mjs';
import { handOverTo } from '../../backend/api/hand-over';
import { type Answer } from '../../backend/api/answer';
import { headerIn, newReply, type Exchange } from '../../backend/api/exchange';
import { serve } from '../../backend/api/serve';
import { openReading } from '../../backend/db';
import { noteChange } from '../../backend/live/note-change';
import { commit, noteRevoked, type NotedChange } from '../../backend/writer/commit';
import { type News } from '../../backend/writer/questions';
import { startApp, type RunningApp } from '../support/app';
import { Client } from '../support/client';
import { newFolder } from '../support/folder';
import { type RunningServer, startServer } from '../support/server';
import { makeWorld, PASSWORD, type World } from '../support/world';

const LOOK_MS = 5;
const GETS = 20;
const END_MS = 5_000; // what whoever stops the server may count on

interface Plantable {
  readonly server: RunningServer;
  readonly dataDir: string;
  readonly plant: (name: 'block' | 'fsync' | 'crash' | 'exit') => void;
  readonly clear: (name: 'block') => void;
  readonly blocked: () => Promise<void>;
}

/** A server as people run it, whose writer thread a test can harm. */
async function startPlantable(): Promise<Plantable> {
  const folder = newFolder('planted');
  const dataDir = join(folder, 'data');
  mkdirSync(dataDir);
  const preload = pathToFileURL(join(root, 'tests/support/planted.mjs')).href;
  const server = await startServer({ DATA_DIR: dataDir, PLANTED: folder, NODE_OPTIONS: `--import ${preload}` });
  return {
    server,
    dataDir,
    plant: (name) => writeFileSync(join(folder, name), ''),
    clear: (name) => rmSync(join(folder, name)),
    blocked: async () => {
      while (!existsSync(join(folder, 'blocked'))) await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
    },
  };
}

const clientOf = ({ server }: Plantable): Client => new Client(server.url.replace(/\/$/, ''));
const trySignIn = (client: Client) => client.post('/sign-in', { email: 'nobody@example.org', password: PASSWORD });

function attemptsIn({ dataDir }: Plantable): number {
  const db = new Database(join(dataDir, 'skewline.sqlite'), { readonly: true });
  const count = db.prepare<[], number>('SELECT count(*) FROM failed_attempts').pluck().get();
  db.close();
  return count ?? -1;
}

describe('the HTTP thread', () => {
  it('answers what reads while the writer is in a long transaction, whose request waits for its end', async () => {
    const planted = await startPlantable();
    try {
      planted.plant('block');
      const client = clientOf(planted);
      let answered = false;
      const changing = trySignIn(client).finally(() => (answered = true));
      await planted.blocked();
      for (let at = 0; at < GETS; at += 1) expect((await client.get('/health')).status).toBe(200);
      expect((await client.get('/me')).status).toBe(401);
      expect(answered).toBe(false);
      planted.clear('block');
      expect((await changing).status).toBe(401);
    } finally {
      await planted.server.stop();
    }
  });

  it('has a connection that cannot write, whatever is tried', async () => {
    const app = await startApp();
    const db = openReading(app.dataDir);
    try {
      const tries = ["UPDATE deployment SET created_with = 'x'", 'CREATE TABLE x (y)', 'DELETE FROM people'];
      for (const sql of tries) expect(() => db.$client.exec(sql), sql).toThrow('readonly');
      db.$client.pragma('query_only = OFF');
      for (const sql of tries) expect(() => db.$client.exec(sql), sql).toThrow('readonly');
      expect(() => db.insert(networks).values({ code: 'X', name: 'X', originTaiS: 0, originPs: 0, createdAt: 'x' }).run()).toThrow();
    } finally {
      db.$client.close();
      await app.close();
    }
  });
});

describe('a writer that breaks down', () => {
  it.each([
    ['by a fault', 'crash', 'planted crash'],
    ['by its end', 'exit', 'the writer broke down'],
    ['at an I/O error, which leaves nobody knowing what is on disk', 'fsync', 'disk I/O error'],
  ] as const)('%s ends the process with status 1', async (_what, harm, words) => {
    const planted = await startPlantable();
    planted.plant(harm);
    const outcome = await trySignIn(clientOf(planted)).then(
      ({ status }) => status,
      () => 'none',
    );
    const { code, stderr } = await planted.server.ended;
    expect(code).toBe(1);
    expect(stderr).toContain(words);
    expect(stderr).toContain('the writer broke down');
    // An answer is given for what is committed alone; the fault comes after the commit, and its answer may be on its way.
    const kept = attemptsIn(planted);
    if (harm === 'crash') expect(['none', 401]).toContain(outcome);
    else expect([outcome, kept]).toEqual(['none', 0]);
  });
});

describe('the end of a server', () => {
  it('comes after what its writer has begun, within 5 s', async () => {
    const planted = await startPlantable();
    planted.plant('block');
    const changing = trySignIn(clientOf(planted));
    await planted.blocked();
    const startMs = performance.now();
    const stopped = planted.server.stop();
    planted.clear('block');
    const [{ status }, { code, stderr }] = await Promise.all([changing, stopped]);
    expect(status).toBe(401);
    expect(performance.now() - startMs).toBeLessThan(END_MS);
    expect([code, stderr.includes('broke down')]).toEqual([0, false]);
    expect(existsSync(join(planted.dataDir, 'skewline.sqlite-wal'))).toBe(false);
  });
});

describe('a start that fails for what nobody foresaw', () => {
  it('is one line and status 1, without a stack', async () => {
    const folder = newFolder('unforeseen');
    mkdirSync(join(folder, 'session-secret'));
    await expect(startServer({ DATA_DIR: folder })).rejects.toThrow(/^the server ended with 1: skewline: EISDIR[^\n]*\n$/);
  });
});

describe('requests that wait for the writer', () => {
  it('are bounded: one more is told to try again, and taken once there is room', async () => {
    const waiting: ((answer: Answer) => void)[] = [];
    const app = await startApp();
    try {
      const handOver = handOverTo({ ask: () => new Promise((resolve) => waiting.push(resolve)) });
      const served = serve(route('POST', '/planted', { policy: 'session:end' }), { handle: () => undefined });
      const send = (): Promise<Answer> => handOver(served, exchange(), app.ground);
      const most = 256;
      const all = Array.from({ length: most }, send);
      while (waiting.length < most) await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
      const refused = await send();
      expect([refused.status, refused.headers]).toEqual([503, [['Retry-After', '1']]]);
      const done = { status: 204, headers: [] };
      waiting.shift()?.(done);
      await all[0];
      const taken = send();
      while (waiting.length < most) await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
      for (const resolve of waiting) resolve(done);
      expect((await taken).status).toBe(204);
      await Promise.all(all);
    } finally {
      await app.close();
    }
  });

  function exchange(): Exchange {
    const headers = { 'content-type': 'application/json' };
    const bytes = () => Promise.resolve(new TextEncoder().encode('{}'));
    const asked = { method: 'POST', path: '/planted', params: {}, query: {}, ip: '127.0.0.1', requestId: 'x' };
    return { ...asked, headers, header: headerIn(headers), bytes, reply: newReply() };
  }
});

describe('news of commits', () => {
  let app: RunningApp;
  let world: World;
  let networkId: number;
  beforeAll(async () => {
    app = await startApp();
    world = await makeWorld(app);
    networkId = world.networks.first;
    app.ground.db.insert(changeHeads).values({ networkId }).onConflictDoNothing().run();
  });
  afterAll(async () => {
    await app.close();
  });

  const nextTurn = (): Promise<void> => new Promise((resolve) => setTimeout(resolve, LOOK_MS));

  it('reaches listeners after the commit with all of it, and the HTTP side with the last number', async () => {
    const heard: (readonly NotedChange[])[] = [];
    const changed: News['changed'][] = [];
    const ends = [
      app.ground.onCommitted(({ changes }) => {
        expect(app.ground.db.$client.inTransaction).toBe(false);
        heard.push(changes);
      }),
      app.writer.on('changed', (news) => changed.push(news)),
    ];
    const [first, last] = commit(app.ground.db, (tx) => [1, 2].map(() => noteChange(tx, networkId, 'setup', {}, app.ground.nowMs())));
    expect(heard).toEqual([[first, last].map((number) => ({ networkId, kind: 'setup', number }))]);
    await nextTurn();
    expect(changed[0]).toEqual({ networkId, last }); // what follows from a new set-up may be told by now too
    for (const end of ends) end();
  });

  it('tell of a transaction within another once that is committed, and of none that was undone', () => {
    const heard: (readonly NotedChange[])[] = [];
    const { db, onCommitted, nowMs } = app.ground;
    const end = onCommitted(({ changes }) => heard.push(changes));
    const note = (): number => commit(db, (tx) => noteChange(tx, networkId, 'records', {}, nowMs()));
    const numbers = commit(db, (tx) => {
      const first = noteChange(tx, networkId, 'records', {}, nowMs());
      const within = note();
      const undone = (): never => {
        throw new Error(`the change ${note()} is undone`);
      };
      expect(() => commit(db, undone)).toThrow('is undone');
      expect(heard).toEqual([]);
      return [first, within];
    });
    end();
    expect(heard).toEqual([numbers.map((number) => ({ networkId, kind: 'records', number }))]);
    expect(note()).toBe(numbers[1]! + 1);
  });

  it('is not told of what was undone, and cannot be noted past it', () => {
    const heard: unknown[] = [];
    const end = app.ground.onCommitted((committed) => heard.push(committed));
    const undone = () =>
      commit(app.ground.db, (tx) => {
        noteRevoked(tx, { kind: 'session', sessionId: 1 });
        throw new Error('planted');
      });
    expect(undone).toThrow('planted');
    expect(() => app.ground.db.transaction((tx) => noteRevoked(tx, { kind: 'session', sessionId: 1 }))).toThrow('did not begin');
    expect(heard).toEqual([]);
    end();
  });

  it('names the session, person, role or key that no longer holds', async () => {
    const revoked: News['revoked'][] = [];
    const end = app.writer.on('revoked', (news) => revoked.push(news));
    const chief = world.as('chief');
    await world.as('reviewer').post('/sign-out');
    await world.as('analyst').post('/me/password', { current: PASSWORD, password: 'meadow turbine 19 parsley' });
    const { items } = (await chief.get('/people')).body as {
      items: { id: number; version: number; roles: { id: number; version: number }[] }[];
    };
    const { operator, coordinator } = world.people;
    const role = items.find(({ id }) => id === operator)!.roles[0]!;
    expect((await chief.post(`/roles/${role.id}/take`, { version: role.version })).status).toBe(204);
    const { version } = items.find(({ id }) => id === coordinator)!;
    expect((await chief.post(`/people/${coordinator}/disable`, { version })).status).toBe(200);
    const { alpha: siteId } = world.sites;
    const { id: keyId } = (await chief.post(`/sites/${siteId}/keys`, { label: 'x' })).body as { id: number };
    await chief.post(`/sites/${siteId}/keys/${keyId}/revoke`);
    await nextTurn();
    expect(revoked).toEqual([
      { kind: 'session', sessionId: expect.any(Number) as number },
      { kind: 'person', personId: world.people.analyst },
      { kind: 'role', personId: operator },
      { kind: 'person', personId: coordinator },
      { kind: 'site-key', keyId, siteId },
    ]);
    end();
  });
});
