import { once, setMaxListeners } from 'node:events';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { taiOf } from '../../tables/present';
import { VERSION } from '../../version';
import { readDemoFile } from '../demo-file';
import { SEED } from '../scenario';
import { makeWorld } from '../stream/world';
import { feedSite } from './feed-site';
import { keepSession, readSession, resume } from './session';
import { siteQueues } from './site-queues';

const KEEP_MS = 10_000;
const LISTENERS_A_SITE = 2; // its link, and its sleep between two ticks

/** Where the demo streams to and from, and what tells it to end. */
export interface FeedOptions {
  /** Scheme, host and port of the server. */
  readonly url: string;
  readonly dataDir: string;
  readonly signal: AbortSignal;
  /** Takes a line for whoever started it. */
  readonly say: (line: string) => void;
}

/** Streams all sites of the demo, each by its own key and link, until it is told to end. */
export async function runFeed({ url, dataDir, signal, say }: FeedOptions): Promise<void> {
  const demo = readDemoFile(dataDir);
  if (!demo) {
    say(`the demo does not stream: ${dataDir} holds no demo.json that can be read`);
    return;
  }
  const leapSeconds = shippedLeapSeconds();
  const now = () => taiOf(Date.now(), leapSeconds);
  const world = makeWorld(SEED, demo.firstTaiS, leapSeconds);
  const resumed = resume(readSession(dataDir), demo.firstTaiS, now().taiS);
  const queues = siteQueues(world, resumed);
  const keep = (): void => keepSession(dataDir, { ...resumed.session, lastTaiS: now().taiS });
  setMaxListeners(LISTENERS_A_SITE * world.sites.size + 1, signal);
  const sites = Object.entries(demo.keys).map(async ([code, key]) => {
    const server = { url, key, software: `demo ${VERSION}` };
    try {
      await feedSite({ code, world, queues, resumed, server, now, signal });
    } catch (fault) {
      if (!signal.aborted) say(`the demo's site ${code} streams no more: ${fault instanceof Error ? fault.message : String(fault)}`);
    }
  });
  keep();
  const keeping = setInterval(keep, KEEP_MS);
  // A site that waits for the server when it is told to end waits for good.
  await Promise.race([Promise.all(sites), once(signal, 'abort')]);
  clearInterval(keeping);
  keep();
}
