import { eq } from 'drizzle-orm';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { siteKeys } from '#schema/schema';
import { secretHash } from '../../backend/accounts/secret-token';
import { SiteClient, SiteStreamRefused, type FinalFate, type LinkNews } from '../../backend/site-client/site-client';
import { startChaosProxy, type ChaosProxy } from '../support/chaos-proxy';
import { recordingDesk, recordOf, startGate, type RunningGate } from './gate';

const QUICK = { leastMs: 10, mostMs: 50 }; // so that a test with many cuts does not wait as long as a site does

const open: { close: () => Promise<void> }[] = [];
afterEach(async () => {
  for (const one of open.splice(0).reverse()) await one.close();
});

function tally() {
  const counts = new Map<string, number>();
  const links: LinkNews[] = [];
  return {
    counts,
    links,
    onFate: (_record: unknown, { fate }: FinalFate) => void counts.set(fate, (counts.get(fate) ?? 0) + 1),
    onLink: (news: LinkNews) => void links.push(news),
  };
}

async function started(desk = recordingDesk()): Promise<{ gate: RunningGate; proxy: ChaosProxy; desk: typeof desk; url: string }> {
  const gate = await startGate(desk);
  const proxy = await startChaosProxy(gate.port);
  open.push(gate, proxy);
  return { gate, proxy, desk, url: `http://127.0.0.1:${proxy.port}` };
}

describe("a site's client", () => {
  it('sends records, hears what became of each, and says its state after them', async () => {
    const { gate, desk, url } = await started();
    const heard = tally();
    const client = new SiteClient({ url, key: gate.keys[0], software: 'test 1', ...heard });
    expect(await client.welcome()).toMatchObject({ site: 'ORL', network: 'NET', scale: 'UTC' });
    for (let n = 0; n < 5_000; n++) await client.push(recordOf(String(n)));
    await client.push(recordOf('17'));
    await client.push(recordOf(''));
    await client.state({ completeTo: { taiS: 5, ps: 6 } });
    await client.finish();
    expect(Object.fromEntries(heard.counts)).toEqual({ stored: 5_000, known: 1, 'set-aside': 1 });
    expect(desk.said).toContain('state {"completeTo":{"taiS":5,"ps":6}} after 5000');
    expect(desk.attempts).toBeLessThan(200);
  });

  it('loses and doubles nothing over 100 cuts of the link, and holds back its source meanwhile', async () => {
    const { gate, proxy, desk, url } = await started();
    const heard = tally();
    const client = new SiteClient({ url, key: gate.keys[0], software: 'test 1', retry: QUICK, ...heard });
    desk.delayMs = 2;
    let cuts = 0;
    const cutting = setInterval(() => {
      if (cuts < 100) cuts += proxy.cut();
    }, 60);
    let most = 0;
    const total = 20_000;
    let n = 0;
    while (n < total || cuts < 100) {
      await client.push(recordOf(String(n++)));
      most = Math.max(most, n - [...heard.counts.values()].reduce((sum, count) => sum + count, 0));
    }
    clearInterval(cutting);
    await client.finish();
    expect(cuts).toBeGreaterThanOrEqual(100);
    expect(desk.kept.size).toBe(n);
    expect((heard.counts.get('stored') ?? 0) + (heard.counts.get('known') ?? 0)).toBe(n);
    expect(most).toBeLessThanOrEqual(4_001);
  });

  // Each answer that nobody knows costs 2 s of waiting, and how many batches there are depends on how busy the machine is.
  it('sends again what nobody knows to be kept', async () => {
    const { gate, desk, url } = await started();
    const heard = tally();
    desk.unsureEvery = 2;
    const client = new SiteClient({ url, key: gate.keys[0], software: 'test 1', ...heard });
    for (let n = 0; n < 1_000; n++) await client.push(recordOf(String(n)));
    await client.finish();
    expect((heard.counts.get('stored') ?? 0) + (heard.counts.get('known') ?? 0)).toBe(1_000);
    expect(desk.kept.size).toBe(1_000);
  }, 180_000);

  it('goes record by record once the link was lost on the same batch several times', async () => {
    const { gate, proxy, desk, url } = await started();
    const heard = tally();
    proxy.cutAfterBytes(4_000); // a whole batch never comes through, a record does
    const client = new SiteClient({ url, key: gate.keys[0], software: 'test 1', retry: QUICK, ...heard });
    for (let n = 0; n < 200; n++) await client.push(recordOf(String(n), { amplitude: `${n}.${'5'.repeat(60)}` }));
    await client.finish();
    expect(desk.kept.size).toBe(200);
    expect(heard.links.filter(({ is }) => is === 'lost').length).toBeGreaterThanOrEqual(3);
  });

  it('ends with the reason in words when its key is refused', async () => {
    const { url } = await started();
    const client = new SiteClient({ url, key: 'swk_wrong', software: 'test 1' });
    await expect(client.welcome()).rejects.toThrow(SiteStreamRefused);
    await expect(client.push(recordOf('1'))).rejects.toThrow('The key is unknown here, or was revoked');
  });

  it('does not send what no message can hold, and says so', async () => {
    const { gate, desk, url } = await started();
    const heard = tally();
    const client = new SiteClient({ url, key: gate.keys[0], software: 'test 1', ...heard });
    await client.push(recordOf('1'));
    await client.push(recordOf('2', { amplitude: 'x'.repeat(70_000) }));
    await client.finish();
    expect(Object.fromEntries(heard.counts)).toEqual({ stored: 1, unsendable: 1 });
    expect(desk.kept.size).toBe(1);
  });

  it('waits as long as a server that ends has asked, and goes on at the next', async () => {
    const desk = recordingDesk();
    const { gate, proxy, url } = await started(desk);
    const heard = tally();
    const client = new SiteClient({ url, key: gate.keys[0], software: 'test 1', retry: QUICK, ...heard });
    await client.push(recordOf('1'));
    await client.welcome();
    await gate.close();
    await vi.waitFor(() => expect(heard.links.at(-1)).toMatchObject({ is: 'lost', why: 'The server ends.' }));
    const last = heard.links.at(-1);
    expect(last?.is === 'lost' && last.againInMs).toBeGreaterThanOrEqual(2_000);
    const next = await startGate(desk);
    open.push(next);
    next.db
      .update(siteKeys)
      .set({ hash: secretHash(gate.keys[0]) })
      .where(eq(siteKeys.id, next.keyIds[0]))
      .run();
    proxy.leadTo(next.port);
    await client.push(recordOf('2'));
    await client.finish();
    expect([...desk.kept.keys()].map((name) => name.split(':').at(-1))).toEqual(['1', '2']);
  });
});
