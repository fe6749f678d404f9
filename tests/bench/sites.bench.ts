import { setTimeout as sleep } from 'node:timers/promises';
import { io, type Socket } from 'socket.io-client';
import { type NetworkChanged } from '#shared/contract/live-changes';
import { LIVE_PATH } from '#shared/contract/live-socket';
import { packRecords } from '#shared/contract/record-batch';
import { siteFates, siteStateKept } from '#shared/contract/site-socket';
import { SiteClient } from '../../backend/site-client/site-client';
import { openLink, sumOf, type SiteLink } from '../../backend/site-client/site-link';
import { utf8 } from '../../backend/site-client/utf8';
import { type Figures, type Order } from './sites-process';
import { SiteTriggers } from './site-triggers';

const SOFTWARE = 'bench';
const BATCH_RECORDS = 500; // as the client library packs them
const MOST_ON_THE_WAY = 8;
const STATE_EVERY = 4; // batches
const STATE_EVERY_MS = 1_000;
/** What was streamed lies so far back that nothing of it meets what is sent as it happens. */
const BURSTS_BEGIN_MS = 6 * 3_600_000;
const LAST_SEEN_MS = 500;

type Begin = Extract<Order, { is: 'begin' }>;
let begun: Begin | undefined;
let browser: Socket | undefined;
let bare: Socket | undefined;
let bursts: readonly SiteTriggers[] | undefined;
let run = 0;
const sentAtMs = new Map<string, number>();
let seenMs: number[] = [];
/** Messages that came so late that they could not tell all coincidences. */
let cuts = 0;

const nowMs = (): number => performance.timeOrigin + performance.now();

function begin(order: Begin): Promise<void> {
  begun = order;
  if (order.bareUrl !== '') bare = io(order.bareUrl, { transports: ['websocket'] });
  if (order.networkId === 0) return Promise.resolve();
  browser = io(order.url, { path: LIVE_PATH, transports: ['websocket'], extraHeaders: { origin: order.url, cookie: order.cookie } });
  browser.on('network:changed', (news: NetworkChanged) => {
    const atMs = performance.now();
    if (news.kind !== 'changes') throw new Error('the browser was too slow');
    if (news.coincidences.isCut) cuts++;
    for (const { members } of news.coincidences.items) {
      const sent = members.map(({ name }) => sentAtMs.get(name) ?? NaN);
      const lastMs = Math.max(...sent);
      if (!Number.isNaN(lastMs)) seenMs.push(atMs - lastMs);
    }
  });
  return browser.timeout(10_000).emitWithAck('network:follow', { networkId: order.networkId }).then(refuseNo);
}

function refuseNo(answer: { readonly ok: boolean }): void {
  if (!answer.ok) throw new Error(JSON.stringify(answer));
}

async function burst({ records, rateHz }: Extract<Order, { is: 'burst' }>): Promise<Figures> {
  const { url, keys } = asked();
  bursts ??= keys.map((_, at) => new SiteTriggers('burst', rateHz / keys.length, Date.now() - BURSTS_BEGIN_MS, at + 1));
  const acknowledgedMs: number[] = [];
  const sites = await Promise.all(
    bursts.map(async (triggers, at) => {
      const batches: { packed: Uint8Array; completeTo: SiteTriggers['completeTo'] }[] = [];
      for (let left = records / keys.length; left > 0; left -= BATCH_RECORDS) {
        const packed = packRecords(
          Array.from({ length: Math.min(left, BATCH_RECORDS) }, () => triggers.take()),
          utf8,
        );
        if (!packed.ok) throw new Error(packed.problem.text);
        batches.push({ packed: packed.value, completeTo: triggers.completeTo });
      }
      return { link: await linkOf(url, keys[at] ?? ''), batches };
    }),
  );
  const startedMs = performance.now();
  await Promise.all(sites.map(({ link, batches }) => streamAll(link, batches, acknowledgedMs)));
  const seconds = (performance.now() - startedMs) / 1e3;
  for (const { link } of sites) link.close('done');
  return { records, seconds, acknowledgedMs, seenMs: [], cuts: 0 };
}

const wakers = new Map<SiteLink, () => void>();

async function linkOf(url: string, key: string): Promise<SiteLink> {
  const link = await openLink({ url, key, software: SOFTWARE }, { onCredit: () => wake(), onEnd: () => undefined });
  if (!('welcome' in link)) throw new Error(link.why);
  const wake = (): void => wakers.get(link)?.();
  return link;
}

/** Sends batches as credit allows, a few at a time; each is acknowledged after its commit. */
async function streamAll(
  link: SiteLink,
  batches: readonly { readonly packed: Uint8Array; readonly completeTo: SiteTriggers['completeTo'] }[],
  acknowledgedMs: number[],
): Promise<void> {
  const onTheWay = new Set<Promise<void>>();
  for (const [number, { packed, completeTo }] of batches.entries()) {
    while (onTheWay.size >= MOST_ON_THE_WAY || link.credit.records < BATCH_RECORDS || link.credit.bytes < packed.length)
      await Promise.race([...onTheWay, new Promise<void>((resolve) => wakers.set(link, resolve))]);
    link.credit = sumOf(link.credit, { records: -BATCH_RECORDS, bytes: -packed.length });
    const sentMs = performance.now();
    const sending = link.ask('stream:batch', { number, packed }, siteFates).then((answer) => {
      acknowledgedMs.push(performance.now() - sentMs);
      onTheWay.delete(sending);
      if (!answer?.ok || answer.stored.length !== 1) throw new Error(JSON.stringify(answer).slice(0, 1_000));
      link.credit = sumOf(link.credit, answer.credit);
    });
    onTheWay.add(sending);
    if (number % STATE_EVERY === STATE_EVERY - 1) {
      const saying = link.ask('stream:state', { completeTo }, siteStateKept).then((answer) => {
        onTheWay.delete(saying);
        if (!answer?.ok) throw new Error(JSON.stringify(answer));
      });
      onTheWay.add(saying);
    }
  }
  await Promise.all(onTheWay);
}

async function pace({ seconds, rateHz }: Extract<Order, { is: 'pace' }>): Promise<Figures> {
  const { url, keys } = asked();
  const series = `pace${++run}`;
  const acknowledgedMs: number[] = [];
  const clients = keys.map(
    (key, at) =>
      new SiteClient({
        url,
        key,
        software: SOFTWARE,
        onFate: ({ sequence }, { fate }) => {
          if (fate !== 'stored') throw new Error(`a trigger was not stored: ${fate}`);
          acknowledgedMs.push(performance.now() - (sentAtMs.get(nameOf(at, series, sequence)) ?? NaN));
        },
      }),
  );
  await Promise.all(clients.map((client) => client.welcome()));
  const beginMs = nowMs();
  const sites = clients.map((client, at) => ({
    client,
    triggers: new SiteTriggers(series, rateHz / keys.length, beginMs, 100 * run + at),
  }));
  let records = 0;
  let saidMs = beginMs;
  for (;;) {
    const now = nowMs();
    if (now > beginMs + seconds * 1e3) break;
    for (const [at, { client, triggers }] of sites.entries())
      while (triggers.nextMs <= now) {
        const record = triggers.take();
        sentAtMs.set(nameOf(at, series, record.sequence), performance.now());
        void client.push(record);
        records++;
      }
    if (now > saidMs + STATE_EVERY_MS) {
      saidMs = now;
      for (const { client, triggers } of sites) void client.state({ completeTo: triggers.completeTo });
    }
    await sleep(1);
  }
  await Promise.all(clients.map((client) => client.finish()));
  await sleep(LAST_SEEN_MS);
  sentAtMs.clear();
  const seen = seenMs;
  seenMs = [];
  const cut = cuts;
  cuts = 0;
  return { records, seconds, acknowledgedMs, seenMs: seen, cuts: cut };
}

const nameOf = (at: number, series: string, sequence: string): string => `S${at + 1}:${series}:${sequence}`;

/** One record to the bare server and back again, again and again. */
async function roundTrips({ seconds, perS }: Extract<Order, { is: 'bare' }>): Promise<Figures> {
  if (!bare) throw new Error('there is no bare server');
  const triggers = new SiteTriggers('', perS, Date.now(), 1);
  const packed = packRecords([triggers.take()], utf8);
  if (!packed.ok) throw new Error(packed.problem.text);
  const times: number[] = [];
  const endMs = performance.now() + seconds * 1e3;
  while (performance.now() < endMs) {
    const sentMs = performance.now();
    await bare.emitWithAck('trigger', { packed: packed.value });
    times.push(performance.now() - sentMs);
    await sleep(1e3 / perS);
  }
  return { records: times.length, seconds, acknowledgedMs: [], seenMs: times, cuts: 0 };
}

function asked(): Begin {
  if (!begun) throw new Error('nothing is known of the server yet');
  return begun;
}

async function obey(order: Order): Promise<Figures> {
  switch (order.is) {
    case 'begin':
      await begin(order);
      return { records: 0, seconds: 0, acknowledgedMs: [], seenMs: [], cuts: 0 };
    case 'burst':
      return burst(order);
    case 'pace':
      return pace(order);
    case 'bare':
      return roundTrips(order);
  }
}

process.on('message', (order: Order) => {
  void obey(order).then((figures) => process.send?.(figures));
});
