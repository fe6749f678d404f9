import { hash } from '@node-rs/argon2';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { people, sessions } from '#schema/schema';
import { startApp, type RunningApp } from '../support/app';
import { Client } from '../support/client';
import { makeWorld, PASSWORD, type World } from '../support/world';

const MOST_WAIT_MS = 15 * 60_000;
const DAY_MS = 24 * 3600_000;

let app: RunningApp;
let world: World;
beforeAll(async () => {
  app = await startApp();
  world = await makeWorld(app);
});
afterAll(async () => {
  await app.close();
});

const signIn = (email: string, password: string, client = new Client(app.url)) => client.post('/sign-in', { email, password });
const setPassword = (client: Client, password: string, current = PASSWORD) => client.post('/me/password', { current, password });

describe('1 a new password', () => {
  it.each([
    ['11 characters', 'qv7#Lm2@xZp', '12 to 128'],
    ['129 characters', `${'Unlikely words '.repeat(8)}123456789`, '12 to 128'],
    ['a common one', 'qwerty123456', 'common'],
    ['a common one in capitals', 'QWERTY123456', 'common'],
    ['a common one with digits and signs around it', '!!password12345', 'common'],
    ['a few characters over and over', 'xyzxyzxyzxyz', 'repeated'],
    ['a row upwards', '345678901234', 'a row'],
    ['a row of letters', 'abcdefghijklm', 'a row'],
    ['a row downwards', '9876543210987', 'a row'],
    ['the own name', 'x9!Vera.Xanthe.q', 'your name'],
    ["the mailbox's name", 'tree-ANALYST-stone-4', 'name'],
    ["the product's name", 'skewline rocks 77', 'name'],
  ])('is refused: %s', async (_what, password, words) => {
    app.ground.db.update(people).set({ name: 'Vera Xanthe' }).where(eq(people.id, world.people.analyst)).run();
    const { status, body, text } = await setPassword(world.as('analyst'), password);
    expect(status).toBe(400);
    expect(body).toMatchObject({ where: 'password', detail: expect.stringContaining(words) as string });
    expect(text).not.toContain(password);
  });

  it.each([
    ['12 characters', 'qv7#Lm2@xZpK'],
    ['128 characters', `qv7#Lm2@xZpK${'ü€'.repeat(58)}`],
    ['any Unicode', 'σήμερα 🌋🌋 海の向こう'],
    ['spaces at its ends', '  gravel omelette  '],
  ])('is taken: %s', async (_what, password) => {
    const client = world.as('reviewer');
    expect((await setPassword(client, password)).status).toBe(204);
    expect((await signIn(world.emailOf('reviewer'), password)).status).toBe(200);
    expect((await setPassword(client, PASSWORD, password)).status).toBe(204);
  });

  it('is the same however its characters are composed', async () => {
    const client = world.as('reviewer');
    expect((await setPassword(client, 'Åströmgård 1987 ö'.normalize('NFD'))).status).toBe(204);
    expect((await signIn(world.emailOf('reviewer'), 'Åströmgård 1987 ö'.normalize('NFC'))).status).toBe(200);
    expect((await setPassword(client, PASSWORD, 'Åströmgård 1987 ö')).status).toBe(204);
  });

  it('of 1 MB is refused unhashed', async () => {
    const startMs = performance.now();
    const { status } = await signIn(world.emailOf('analyst'), 'x'.repeat(1_000_000));
    expect(status).toBe(413);
    expect(performance.now() - startMs).toBeLessThan(1_000);
    expect((await signIn(world.emailOf('analyst'), 'x'.repeat(5_000))).status).toBe(400);
  });
});

describe('2 the hash', () => {
  it('is argon2id of at least 19,456 KiB and two passes', () => {
    const { passwordHash } = app.ground.db.select().from(people).where(eq(people.id, world.people.analyst)).get()!;
    const [, memoryKib, passes, lanes] = /^\$argon2id\$v=19\$m=(\d+),t=(\d+),p=(\d+)\$/.exec(passwordHash ?? '') ?? [];
    expect(Number(memoryKib)).toBeGreaterThanOrEqual(19_456);
    expect(Number(passes)).toBeGreaterThanOrEqual(2);
    expect(Number(lanes)).toBe(1);
  });

  it('is made anew at a sign-in where it was weaker', async () => {
    const weak = await hash(PASSWORD, { memoryCost: 4096, timeCost: 1, parallelism: 1 });
    const stored = () => app.ground.db.select().from(people).where(eq(people.id, world.people.operator)).get()!.passwordHash;
    app.ground.db.update(people).set({ passwordHash: weak }).where(eq(people.id, world.people.operator)).run();
    expect((await signIn(world.emailOf('operator'), PASSWORD)).status).toBe(200);
    expect(stored()).toContain('m=19456,t=2');
    expect((await signIn(world.emailOf('operator'), PASSWORD)).status).toBe(200);
  });

  it('is computed for two at once, and more are told to come again', async () => {
    const all = await Promise.all(Array.from({ length: 12 }, (_, at) => signIn(`stranger${at}@example.org`, PASSWORD)));
    const busy = all.filter(({ status }) => status === 503);
    expect(busy.length).toBeGreaterThan(0);
    expect(all.filter(({ status }) => status === 401).length).toBeGreaterThanOrEqual(2);
    for (const { headers } of busy) expect(Number(headers.get('retry-after'))).toBeGreaterThan(0);
    app.forwardMs(DAY_MS + 1);
  });
});

describe('3 an unknown account and a wrong password', () => {
  it('look alike, and so do one that is disabled and one that has no password yet', async () => {
    const { db } = app.ground;
    const createdAt = '2026-01-01T00:00:00.000Z';
    const { passwordHash } = db.select().from(people).where(eq(people.id, world.people.analyst)).get()!;
    db.insert(people).values({ email: 'invited@example.org', name: 'Ada', createdAt }).run();
    db.insert(people).values({ email: 'gone@example.org', name: 'Bo', createdAt, passwordHash, passwordSetAt: createdAt, disabledAt: createdAt }).run(); // prettier-ignore
    const seen = [];
    for (const email of ['nobody@example.org', world.emailOf('analyst'), 'invited@example.org', 'gone@example.org']) {
      const { status, body, headers } = await signIn(email, email === world.emailOf('analyst') ? 'a wrong password' : PASSWORD);
      seen.push({ status, body: { ...(body as object), id: '' }, cookies: headers.getSetCookie() });
    }
    expect(new Set(seen.map((one) => JSON.stringify(one))).size).toBe(1);
    expect(seen[0]).toMatchObject({ status: 401, cookies: [] });
  });

  it('last alike', async () => {
    // Medians of alternating attempts; a way without the hash would take a tenth.
    const tries = 15;
    const times = { unknown: [] as number[], wrong: [] as number[] };
    for (let at = 0; at < tries; at += 1)
      for (const kind of ['unknown', 'wrong'] as const) {
        const startMs = performance.now();
        await signIn(kind === 'unknown' ? `nobody${at}@example.org` : world.emailOf('otherCoordinator'), 'a wrong password');
        times[kind].push(performance.now() - startMs);
        app.forwardMs(MOST_WAIT_MS);
      }
    const median = (list: number[]): number => list.sort((a, b) => a - b)[Math.floor(tries / 2)]!;
    const ratio = median(times.unknown) / median(times.wrong);
    expect(ratio).toBeGreaterThan(0.6);
    expect(ratio).toBeLessThan(1.7);
    app.forwardMs(DAY_MS + 1);
  });
});

describe('4 failed attempts', () => {
  const waitS = async (email: string): Promise<number> => {
    const { status, headers } = await signIn(email, PASSWORD);
    expect(status).toBe(429);
    return Number(headers.get('retry-after'));
  };
  const fail = async (email: string) => expect((await signIn(email, 'a wrong password')).status).toBe(401);

  it('make an account wait, twice as long each time, known or not, while its sessions live on', async () => {
    for (const email of [world.emailOf('chief'), 'unknown@example.org']) {
      const live = world.as('chief');
      for (let at = 0; at < 6; at += 1) await fail(email);
      for (const expectedS of [1, 2, 4, 8]) {
        const actualS = await waitS(email);
        expect(actualS).toBeGreaterThan(expectedS / 2);
        expect(actualS).toBeLessThanOrEqual(expectedS);
        expect((await live.get('/me')).status).toBe(200);
        app.forwardMs(expectedS * 1000);
        await fail(email);
      }
      app.forwardMs(MOST_WAIT_MS);
    }
    expect((await signIn(world.emailOf('chief'), PASSWORD)).status).toBe(200);
    await fail(world.emailOf('chief'));
    expect((await signIn(world.emailOf('chief'), PASSWORD)).status).toBe(200);
    app.forwardMs(DAY_MS + 1);
  });

  it('make an address wait, whatever accounts it tries', async () => {
    for (let at = 0; at < 31; at += 1) await fail(`guess${at}@example.org`);
    expect(await waitS('guess31@example.org')).toBe(1);
    app.forwardMs(DAY_MS + 1);
    expect((await signIn(world.emailOf('chief'), PASSWORD)).status).toBe(200);
  });

  it('cannot slip through by coming all at once', async () => {
    const all = await Promise.all(Array.from({ length: 40 }, () => signIn('many@example.org', 'a wrong password')));
    expect(all.filter(({ status }) => status === 401).length).toBeLessThanOrEqual(6);
    app.forwardMs(DAY_MS + 1);
  });
});

describe('a sign-in', () => {
  it('gives who it is, and begins a session that is listed without a secret', async () => {
    const client = new Client(app.url);
    const { status, body } = await signIn(world.emailOf('operator').toUpperCase(), PASSWORD, client);
    expect(status).toBe(200);
    expect(body).toMatchObject({ id: world.people.operator, roles: [{ role: 'operator', siteId: world.sites.alpha }] });
    expect((await client.get('/me')).body).toEqual(body);
    const { items } = (await client.get('/me/sessions')).body as { items: { id: number; current: boolean }[] };
    expect(items.filter(({ current }) => current)).toHaveLength(1);
    expect(app.ground.db.select().from(sessions).where(eq(sessions.personId, world.people.operator)).all().length).toBeGreaterThan(0);
  });
});
