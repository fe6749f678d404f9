import { setTimeout as sleep } from 'node:timers/promises';
import { SiteClient } from '../../backend/site-client/site-client';
import { History } from './history';
import { dice, recordsOf } from './records';
import { type Harm, StreamedServer } from './streamed-server';

export const QUICK = { leastMs: 50, mostMs: 200 };
const PUSH_AT_ONCE = 10;
const PUSH_EVERY_MS = 25;
const SAY_COMPLETE_EVERY = 300;
/** Between two cuts of the links, and how long the sites stream after the last one before the server is killed; half to one and a half times it. */
const CUT_APART_MS = 150;
const UP_MS = 700;

export interface Chaos {
  readonly seed: number;
  readonly kills: number;
  readonly cuts: number;
  /** What the writer is harmed with once it has started, each time. */
  readonly harm?: Harm;
}

/** The server after it all, with what every site tried and was told. */
export interface Endured {
  readonly server: StreamedServer;
  readonly history: History;
  readonly killed: number;
  readonly cut: number;
  readonly startsMs: readonly number[];
}

/** Streams four sites into the built server through a proxy, while the server is killed and the links are cut so often, to the end. */
export async function endure({ seed, kills, cuts, harm }: Chaos): Promise<Endured> {
  const server = await StreamedServer.start({ preload: harm ? ['planted-writer.mjs'] : [] });
  if (harm) server.plant(harm);
  const history = new History();
  const roll = dice(seed);
  const streaming = new AbortController();
  const streams = server.sites.map((_, at) => streamSite({ server, history, seed, at, signal: streaming.signal }));
  let killed = 0;
  let cut = 0;
  const startsMs: number[] = [];
  while (killed < kills || cut < cuts) {
    for (const goal = Math.min(cuts, (cuts * (killed + 1)) / Math.max(1, kills)); cut < goal; cut += server.proxy.cut())
      await sleep(CUT_APART_MS * (0.5 + roll()));
    await sleep(UP_MS * (0.5 + roll()));
    if (killed === kills) continue;
    await server.end('SIGKILL');
    killed++;
    if (harm) server.clear(harm);
    startsMs.push(await server.startAgain());
    if (harm) server.plant(harm);
  }
  streaming.abort();
  await Promise.all(streams);
  return { server, history, killed, cut, startsMs };
}

/** What one site's stream needs. */
interface SiteStreaming {
  readonly server: StreamedServer;
  readonly history: History;
  readonly seed: number;
  /** Which of the server's sites it is. */
  readonly at: number;
  readonly signal: AbortSignal;
}

/** Streams a site's records until it is told to end, says now and then to which instant it is complete, and waits for all answers. */
export async function streamSite({ server, history, seed, at, signal }: SiteStreaming): Promise<void> {
  const { code, key } = server.sites[at]!;
  const client = new SiteClient({
    url: server.url,
    key,
    software: 'faults 1',
    retry: QUICK,
    onFate: (record, fate) => history.answer(code, record, fate),
  });
  const states: Promise<void>[] = [];
  let count = 0;
  for (const { record, completeTo } of recordsOf(seed, at)) {
    if (count > 0 && count % PUSH_AT_ONCE === 0) await sleep(PUSH_EVERY_MS);
    if (signal.aborted) {
      states.push(client.state({ completeTo }));
      break;
    }
    if (++count % SAY_COMPLETE_EVERY === 0) states.push(client.state({ completeTo }));
    history.attempt(code, record);
    await client.push(record);
  }
  await Promise.all(states);
  await client.finish();
}
