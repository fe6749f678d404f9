import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type SetAside, type SetAsideInFull } from '#shared/contract/set-aside-routes';
import { checkConservation } from '../../backend/ingest/conservation';
import { openIngest } from '../../backend/ingest/ingest';
import { startApp, type RunningApp } from '../support/app';
import { type Answer, type Client } from '../support/client';
import { record } from '../support/ingest';
import { insertNetwork } from '../support/network-rows';
import { signIn } from '../support/sign-in';
import { smallNetwork } from '../support/small-network';

let app: RunningApp;
let networkId: number;
let operator: Client;
let coordinator: Client;
let otherOperator: Client;
beforeAll(async () => {
  app = await startApp();
  const { db, log, nowMs } = app.ground;
  const network = insertNetwork(db, smallNetwork());
  networkId = network.networkId;
  const [a, b] = ['A', 'B'].map((code) => network.siteIds.get(code)!) as [number, number];
  operator = signIn(app, [{ role: 'operator', networkId, siteId: a }]);
  otherOperator = signIn(app, [{ role: 'operator', networkId, siteId: b }]);
  coordinator = signIn(app, [{ role: 'coordinator', networkId, siteId: null }]);
  const ingest = openIngest({
    db,
    log,
    nowMs,
    listener: { onStored: () => undefined, onInForce: () => undefined },
    fatal: () => undefined,
  });
  await ingest.batch(a, [
    record({ sequence: '1' }),
    record({ sequence: '1', amplitude: '2' }),
    record({ sequence: '2' }),
    record({ sequence: '2', amplitude: '2' }),
    record({ sequence: 'seven' }),
    record({ sequence: '8', sigmaNs: 'wide' }),
    record({ sequence: 'noise' }),
  ]);
});
afterAll(async () => {
  await app.close();
});

const openOnes = async (): Promise<SetAside[]> => {
  const { body } = await coordinator.get(`/networks/${networkId}/set-asides`);
  return (body as { items: SetAside[] }).items;
};
const one = async (reason: string, has = ''): Promise<SetAside> =>
  (await openOnes()).find((setAside) => setAside.reason === reason && setAside.verbatim.includes(has))!;
const decide = (client: Client, { id }: SetAside, what: string, body: object): Promise<Answer> =>
  client.post(`/set-asides/${id}/${what}`, body);

describe('a set-aside', () => {
  it('29 and 27: of two decisions at once one wins, and the other is stale', async () => {
    const noise = await one('sequence', 'noise');
    const answers = await Promise.all(
      [1, 2].map(() => decide(operator, noise, 'dismiss', { version: noise.version, why: 'a test pulse' })),
    );
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    const { body } = await operator.get(`/set-asides/${noise.id}`);
    expect(body).toMatchObject({
      state: 'dismissed',
      decision: 'a test pulse',
      decidedBy: { name: 'Someone' },
      version: noise.version + 1,
    });
  });

  it('stands once it is mended, and not before it is right', async () => {
    const seven = await one('sequence', 'seven');
    const mended = record({ sequence: 'seven' });
    const wrong = await decide(operator, seven, 'accept', { version: seven.version, why: 'x', record: mended });
    expect([wrong.status, (await operator.get(`/set-asides/${seven.id}`)).body]).toMatchObject([
      400,
      { state: 'open', version: seven.version },
    ]);
    const right = await decide(operator, seven, 'accept', {
      version: seven.version,
      why: 'seven is 7',
      record: { ...mended, sequence: '7' },
    });
    expect([right.status, right.body]).toMatchObject([200, { state: 'accepted', decision: 'seven is 7' }]);
    const { body } = await operator.get(`/networks/${networkId}/events`);
    const event = (body as { items: { id: number; name: string }[] }).items.find(({ name }) => name === 'A:7')!;
    // One leads to the other and back.
    expect(right.body).toMatchObject({ mendedEventId: event.id });
    expect((await operator.get(`/events/${event.id}`)).body).toMatchObject({ record: { mendedFromId: seven.id } });
  });

  it('of a conflict is decided for one content, or for none', async () => {
    const [first, second] = (await openOnes()).filter(({ reason, sequence }) => reason === 'conflict' && sequence === '1');
    const chosen = await decide(coordinator, second!, 'accept', { version: second!.version, why: 'the log says so' });
    expect((chosen.body as SetAsideInFull).contents.map(({ stands }) => stands)).toEqual([false, true]);
    expect((await coordinator.get(`/set-asides/${first!.id}`)).body).toMatchObject({ state: 'dismissed' });
    const none = (await openOnes()).find(({ reason, sequence }) => reason === 'conflict' && sequence === '2')!;
    const dismissed = await decide(coordinator, none, 'dismiss-conflict', { version: none.version, why: 'both broken' });
    expect((dismissed.body as SetAsideInFull).contents.map(({ stands }) => stands)).toEqual([false, false]);
    expect((await openOnes()).filter(({ reason }) => reason === 'conflict')).toEqual([]);
  });

  it('of no conflict is not decided as one, is dismissed with a reason alone, and takes no field that is unknown', async () => {
    const wide = await one('sigma');
    const { version } = wide;
    expect((await decide(operator, wide, 'dismiss-conflict', { version, why: 'x' })).status).toBe(409);
    for (const body of [
      { version, why: ' ' },
      { version },
      { why: 'x' },
      { version, why: 'x', state: 'accepted' },
      { version, why: 'x'.repeat(2001) },
    ])
      expect((await decide(operator, wide, 'dismiss', body)).status).toBe(400);
  });

  it("23 is not another operator's to decide", async () => {
    const wide = await one('sigma');
    const { status } = await decide(otherOperator, wide, 'dismiss', { version: wide.version, why: 'x' });
    expect([status, (await one('sigma')).state]).toEqual([404, 'open']);
  });

  it('stays counted, and each decision is in the audit trail', () => {
    const { db } = app.ground;
    expect(checkConservation(db)).toEqual([]);
    const actions = db.$client.prepare<[], string>("SELECT action FROM audit WHERE action LIKE 'set-aside:%'").pluck().all();
    expect(actions.filter((action) => action === 'set-aside:accepted')).toHaveLength(2);
    // That a reason was given stands in the trail, its words in the row alone.
    const details = db.$client.prepare<[], string>("SELECT details FROM audit WHERE action LIKE 'set-aside:%'").pluck().all();
    for (const text of details)
      expect(JSON.parse(text)).toEqual({ reason: expect.any(String) as string, siteId: expect.any(Number) as number, whyGiven: true });
    // 39: one line a reason, with how many.
    const lines = app.log.filter(({ event }) => event === 'set-aside:made');
    expect(lines.map(({ reason, records }) => [reason, records]).sort()).toEqual([
      ['conflict', 4],
      ['sequence', 2],
      ['sigma', 1],
    ]);
    expect(actions.filter((action) => action === 'set-aside:dismissed')).toHaveLength(4);
  });
});
