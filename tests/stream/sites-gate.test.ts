import { createServer } from 'node:http';
import { eq } from 'drizzle-orm';
import fc from 'fast-check';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { networks, siteKeys, sites } from '#schema/schema';
import { SITE_REQUESTS } from '#shared/contract/site-socket';
import { packRecords } from '#shared/contract/record-batch';
import { SiteClient } from '../../backend/site-client/site-client';
import { openSitesGate } from '../../backend/sites-gate/sites-gate';
import { utf8 } from '../../backend/site-client/utf8';
import { connecting, ended, HELLO, plainLink, recordingDesk, recordOf, startGate, welcomedLink } from './gate';
import { type RecordingDesk, type RunningGate } from './gate';

const CUT_WITHIN_MS = 2_000;
const MUTATIONS = 500; // of whole packets; `record-batch.test.ts` mutates 10,000 batches

let desk: RecordingDesk;
let gate: RunningGate;
beforeEach(async () => {
  desk = recordingDesk();
  gate = await startGate(desk);
});
afterEach(() => gate.close());

/** The gate still serves another site. */
async function servesAnother(): Promise<void> {
  const client = new SiteClient({ url: gate.url, key: gate.keys[1], software: 'other 1' });
  await client.push(recordOf('1'));
  await client.finish();
}

const packed = (count: number): Buffer => {
  const found = packRecords(Array.from({ length: count }, (_, n) => recordOf(String(n))), utf8); // prettier-ignore
  if (!found.ok) throw new Error(found.problem.text);
  return Buffer.from(found.value);
};

describe('16 an origin', () => {
  it.each(['https://evil.example', 'null'])('%s is not let in', async (origin) => {
    const fault = await connecting(plainLink(gate.url, gate.keys[0], { origin }));
    expect(fault).toMatchObject({ message: 'websocket error' });
    const answer = await fetch(`${gate.url}/site-stream/?EIO=4&transport=websocket`, { headers: { origin } });
    expect(answer.ok).toBe(false);
  });

  it('that is ours, or that a program does not say, is', async () => {
    for (const headers of [{ origin: gate.url }, {}] as Record<string, string>[]) {
      const socket = plainLink(gate.url, gate.keys[0], headers);
      expect(await connecting(socket)).toBeUndefined();
      socket.disconnect();
    }
  });
});

describe('13 a key', () => {
  it.each([
    ['unknown', 'swk_x'],
    ['no text', 7],
    ['absent', undefined],
    ['very long', 'x'.repeat(100_000)],
  ])(
    // prettier-ignore
    'that is %s is refused in words, without saying which keys there are',
    async (_what, key) => {
      const fault = await connecting(plainLink(gate.url, key));
      expect(fault?.data).toEqual({ code: 'refused', text: expect.stringMatching(/unknown here|is missing/) as string });
      expect(JSON.stringify(gate.log)).not.toContain(gate.keys[0]);
    },
  );

  it('that is revoked cuts its streams within 2 s, says why, and lets nobody in again', async () => {
    const socket = await welcomedLink(gate.url, gate.keys[0]);
    const said = new Promise((resolve) => socket.once('stream:refused', resolve));
    const cut = ended(socket);
    const startMs = performance.now();
    gate.db.update(siteKeys).set({ revokedAt: '2026-02-01T00:00:00.000Z' }).where(eq(siteKeys.id, gate.keyIds[0])).run();
    expect(await said).toEqual({ text: expect.stringContaining('revoked') as string });
    await cut;
    expect(performance.now() - startMs).toBeLessThan(CUT_WITHIN_MS);
    expect((await connecting(plainLink(gate.url, gate.keys[0])))?.data).toMatchObject({ code: 'refused' });
    await servesAnother();
  });

  it('that is revoked stores nothing more, from the next message on', async () => {
    const socket = await welcomedLink(gate.url, gate.keys[0]);
    gate.db.update(siteKeys).set({ revokedAt: '2026-02-01T00:00:00.000Z' }).where(eq(siteKeys.id, gate.keyIds[0])).run();
    await expect(socket.timeout(3_000).emitWithAck('stream:batch', { number: 1, packed: packed(3) })).rejects.toThrow();
    expect(desk.kept.size).toBe(0);
  });

  it('has its use noted when a stream says hello with it, exact to a minute', async () => {
    const [first] = gate.keyIds;
    const unsaid = plainLink(gate.url, gate.keys[0]);
    await connecting(unsaid);
    unsaid.disconnect();
    expect(gate.keyUses).toEqual([]);
    for (let n = 0; n < 2; n++) (await welcomedLink(gate.url, gate.keys[0])).disconnect();
    expect(gate.keyUses).toEqual([first]);
    gate.db
      .update(siteKeys)
      .set({ lastUsedAt: new Date(Date.now() - 61_000).toISOString() })
      .where(eq(siteKeys.id, first))
      .run();
    (await welcomedLink(gate.url, gate.keys[0])).disconnect();
    expect(gate.keyUses).toEqual([first, first]);
  });

  it.each(['site', 'network'] as const)('of a %s that is closed is refused, and says so', async (what) => {
    const closed = { closedAt: '2026-02-01T00:00:00.000Z' };
    if (what === 'site') gate.db.update(sites).set(closed).where(eq(sites.id, gate.siteIds[0])).run();
    else gate.db.update(networks).set(closed).run();
    expect((await connecting(plainLink(gate.url, gate.keys[0])))?.data).toMatchObject({
      code: 'refused',
      text: expect.stringContaining('is closed') as string,
    });
  });
});

describe('22 an event', () => {
  it('without a policy, or with one that is not for sites, stops the start', () => {
    const requests: Record<string, unknown> = SITE_REQUESTS;
    for (const planted of ['stream:planted', 'person:list']) {
      requests[planted] = SITE_REQUESTS['stream:state'];
      try {
        expect(() => openSitesGate(createServer(), gate.ground, desk)).toThrow(`the event ${planted} has no policy for site keys`);
      } finally {
        // eslint-disable-next-line @typescript-eslint/no-dynamic-delete -- what was planted
        delete requests[planted];
      }
    }
    expect(Object.keys(SITE_REQUESTS)).toEqual(['stream:hello', 'stream:batch', 'stream:state']);
  });
});

describe('24 each message', () => {
  const MESSAGES: readonly (readonly [string, () => object])[] = [
    ['stream:hello', () => HELLO],
    ['stream:batch', () => ({ number: 1, packed: packed(3) })],
    ['stream:state', () => ({ completeTo: { taiS: 5, ps: 6 } })],
  ];

  const REVOKED = { revokedAt: '2026-02-01T00:00:00.000Z' };
  const CLOSED = { closedAt: '2026-02-01T00:00:00.000Z' };
  const HARMS: Readonly<Record<string, () => unknown>> = {
    'its key was revoked': () => gate.db.update(siteKeys).set(REVOKED).where(eq(siteKeys.id, gate.keyIds[0])).run(),
    'its site was closed': () => gate.db.update(sites).set(CLOSED).where(eq(sites.id, gate.siteIds[0])).run(),
    'its network was closed': () => gate.db.update(networks).set(CLOSED).run(),
  };

  it.each(MESSAGES.flatMap(([name, body]) => Object.keys(HARMS).map((harm) => [name, harm, body] as const)))(
    '%s of a stream that was let in is not done once %s',
    async (name, harm, body) => {
      const socket = plainLink(gate.url, gate.keys[0]);
      await connecting(socket);
      if (name !== 'stream:hello') await socket.emitWithAck('stream:hello', HELLO);
      const before = [...desk.said];
      const refused = new Promise((resolve) => socket.once('stream:refused', resolve));
      const cut = ended(socket);
      HARMS[harm]!();
      const answer = socket.timeout(CUT_WITHIN_MS).emitWithAck(name, body());
      await expect(answer).rejects.toThrow();
      expect(await refused).toEqual({ text: expect.stringMatching(/was revoked|is closed/) as string });
      await cut;
      expect(desk.kept.size).toBe(0);
      expect(desk.said.filter((line) => !before.includes(line)).every((line) => line.startsWith('bye'))).toBe(true);
    },
  );

  it('is for the site of its own key, whatever it says: two links of two sites never mix', async () => {
    const [first, second] = [await welcomedLink(gate.url, gate.keys[0]), await welcomedLink(gate.url, gate.keys[1])];
    const rows = [{ sequence: '1', reading: '2026-03-01T12:00:00.5' }];
    await first.emitWithAck('stream:batch', { number: 1, rows });
    await second.emitWithAck('stream:batch', { number: 1, rows });
    expect([...desk.kept.keys()]).toEqual(gate.siteIds.map((siteId) => `${siteId}::1`));
    const forged = { number: 2, rows: [{ ...rows[0], sequence: '2', siteId: gate.siteIds[1] }] };
    expect(await first.emitWithAck('stream:batch', forged)).toMatchObject({ ok: false, code: 'unusable' });
    expect(desk.kept.size).toBe(2);
    for (const socket of [first, second]) socket.disconnect();
  });
});

describe('36 a message', () => {
  it.each<[string, string, unknown[], string]>([
    ['of an unknown name', 'stream:nothing', [{}], 'unusable'],
    ['named __proto__', '__proto__', [{}], 'unusable'],
    ['that is the name of an HTTP policy', 'person:list', [{}], 'unusable'],
    ['without an argument', 'stream:batch', [], 'unusable'],
    ['with an argument too many', 'stream:batch', [{ number: 1, rows: [{ sequence: '1', reading: 'x' }] }, 1], 'unusable'],
    ['with null', 'stream:batch', [null], 'unusable'],
    ['with a list', 'stream:batch', [[]], 'unusable'],
    ['with a huge number', 'stream:batch', [{ number: 1e300, rows: [{ sequence: '1', reading: 'x' }] }], 'unusable'],
    ['with a number for a text (37)', 'stream:batch', [{ number: 1, rows: [{ sequence: 1, reading: 'x' }] }], 'unusable'],
    ['with null for a number (37)', 'stream:batch', [{ number: null, rows: [{ sequence: '1', reading: 'x' }] }], 'unusable'],
    ['with an unknown field (25)', 'stream:batch', [{ number: 1, rows: [{ sequence: '1', reading: 'x', site: 'VES' }] }], 'unusable'],
    ['with a column __proto__', 'stream:batch', [JSON.parse('{"number":1,"rows":[{"sequence":"1","reading":"x","extra":{"__proto__":"y"}}]}')], 'unusable'], // prettier-ignore
    ['with both rows and an attachment', 'stream:batch', [{ number: 1, packed: Buffer.from('x'), rows: [{ sequence: '1', reading: 'x' }] }], 'unusable'], // prettier-ignore
    ['with no rows', 'stream:batch', [{ number: 1, rows: [] }], 'unusable'],
    ['with an attachment that is no batch', 'stream:batch', [{ number: 1, packed: Buffer.from('hello') }], 'unusable'],
    ['with a time in a double', 'stream:state', [{ completeTo: { taiS: 1.5, ps: 0 } }], 'unusable'],
    ['with a second hello', 'stream:hello', [HELLO], 'unusable'],
  ])('%s is answered, and nothing is kept', async (_what, name, args, code) => {
    const socket = await welcomedLink(gate.url, gate.keys[0]);
    const answer: unknown = await socket.timeout(5_000).emitWithAck(name, ...args);
    expect(answer).toMatchObject({ ok: false, code, text: expect.stringMatching(/\S/) as string });
    expect(desk.kept.size).toBe(0);
    await servesAnother();
    socket.disconnect();
  });

  it('without a function for its answer is not done, and twenty of them end the stream', async () => {
    const socket = await welcomedLink(gate.url, gate.keys[0]);
    const cut = ended(socket);
    for (let n = 0; n < 20; n++) socket.emit('stream:batch', { number: n, packed: packed(1) });
    await cut;
    expect(desk.kept.size).toBe(0);
    await servesAnother();
  });

  it('before the hello, and a protocol that is not spoken, are told', async () => {
    const socket = plainLink(gate.url, gate.keys[0]);
    await connecting(socket);
    expect(await socket.emitWithAck('stream:batch', { number: 1, packed: packed(1) })).toMatchObject({ code: 'hello-first' });
    expect(await socket.emitWithAck('stream:hello', { ...HELLO, protocol: 99 })).toMatchObject({ code: 'protocol' });
    socket.disconnect();
  });

  it('above 512 KiB cuts its own link and no other', async () => {
    const socket = await welcomedLink(gate.url, gate.keys[0]);
    const cut = ended(socket);
    socket.emit('stream:batch', { number: 1, packed: Buffer.alloc(600 * 1024) }, () => undefined);
    await cut;
    await servesAnother();
  });

  it('as a mutated packet, whatever it is, ends at most its own link', async () => {
    let socket = await welcomedLink(gate.url, gate.keys[0]);
    const like = '451-7["stream:batch",{"number":1,"packed":{"_placeholder":true,"num":0}}]';
    await fc.assert(
      fc.asyncProperty(fc.array(fc.tuple(fc.nat(like.length - 1), fc.string({ maxLength: 3 })), { maxLength: 4 }), async (changes) => {
        let text = like;
        for (const [at, by] of changes) text = text.slice(0, at) + by + text.slice(at + 1);
        if (!socket.connected) {
          socket = plainLink(gate.url, gate.keys[0]);
          await connecting(socket);
        }
        socket.io.engine.write(text.slice(1));
        socket.io.engine.write(packed(1));
        await new Promise((resolve) => setImmediate(resolve));
      }),
      { numRuns: MUTATIONS },
    );
    socket.disconnect();
    await servesAnother();
  });
});

describe('credit', () => {
  it('is refused beyond the grant, and then the stream ends', async () => {
    desk.delayMs = 500;
    const socket = plainLink(gate.url, gate.keys[0]);
    await connecting(socket);
    const welcome = (await socket.emitWithAck('stream:hello', HELLO)) as { credit: { records: number } };
    const cut = ended(socket);
    let number = 0;
    const send = (answer: (given: unknown) => void): unknown =>
      socket.emit('stream:batch', { number: number++, packed: packed(1_000) }, answer);
    for (let sent = 0; sent < welcome.credit.records; sent += 1_000) send(() => undefined);
    expect(await new Promise(send)).toMatchObject({ ok: false, code: 'past-credit' });
    send(() => undefined);
    await cut;
    expect(desk.attempts).toBe(welcome.credit.records / 1_000);
  });

  it('falls while the work is behind, and memory does not grow', async () => {
    desk.delayMs = 3_000;
    const client = new SiteClient({ url: gate.url, key: gate.keys[0], software: 'test 1' });
    let pushed = 0;
    const pushing = (async () => {
      for (; pushed < 100_000; pushed++) await client.push(recordOf(String(pushed)));
    })().catch(() => undefined);
    await new Promise((resolve) => setTimeout(resolve, 1_500));
    expect(pushed).toBeLessThanOrEqual(4_001);
    const other = plainLink(gate.url, gate.keys[1]);
    await connecting(other);
    const welcome: unknown = await other.emitWithAck('stream:hello', HELLO);
    expect(welcome).toMatchObject({ credit: { records: 100 } }); // the least
    other.disconnect();
    client.stop();
    await Promise.race([pushing, new Promise((resolve) => setTimeout(resolve, 100))]);
  });
});

describe('a crowd', () => {
  it('of 300 sites that come back at once is let in one after another, each within 30 s', async () => {
    const clients = Array.from({ length: 300 }, (_, n) => new SiteClient({ url: gate.url, key: gate.keys[n % 2 === 0 ? 0 : 1], software: `crowd ${n}` })); // prettier-ignore
    for (const [n, client] of clients.entries()) await client.push(recordOf(String(n)));
    await Promise.all(clients.map((client) => client.finish()));
    expect(desk.kept.size).toBe(300);
  }, 60_000);
});

describe('the end of the server', () => {
  it('waits for what is with the writer, answers it, and says when to come again', async () => {
    desk.delayMs = 500;
    const socket = await welcomedLink(gate.url, gate.keys[0]);
    const said = new Promise((resolve) => socket.once('stream:ended', resolve));
    const answer = socket.emitWithAck('stream:batch', { number: 7, packed: packed(3) });
    await new Promise((resolve) => setTimeout(resolve, 100));
    await gate.close();
    expect(await said).toMatchObject({ retryAfterMs: expect.any(Number) as number });
    expect(await answer).toMatchObject({ ok: true, number: 7, stored: [[0, 1], [1, 1], [2, 1]], credit: { records: 0, bytes: 0 } }); // prettier-ignore
  });
});
