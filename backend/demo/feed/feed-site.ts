import { setTimeout as sleep } from 'node:timers/promises';
import { type Instant } from '#shared/time/instant';
import { SiteClient, type SiteClientOptions } from '../../site-client/site-client';
import { isLinkUp } from '../stream/link';
import { startOfSlice } from '../stream/slice';
import { type World } from '../stream/world';
import { type Resumed } from './session';
import { type SiteQueues } from './site-queues';

const TICK_MS = 500;
const TICKS_A_STATE = 10; // how complete a site is is a commit of its own

/** What a site of the demo streams from, and where to. */
export interface SiteFeed {
  readonly code: string;
  readonly world: World;
  readonly queues: SiteQueues;
  readonly resumed: Resumed;
  readonly server: SiteClientOptions;
  /** The present, TAI. */
  readonly now: () => Instant;
  /** Ends it. */
  readonly signal: AbortSignal;
}

/**
 * Streams a site of the demo until it is told to end: what it writes as it is due, and how complete it is. While its link is down it keeps
 * what it has.
 *
 * @throws SiteStreamRefused when the server will have no more of it
 */
export async function feedSite(feed: SiteFeed): Promise<void> {
  const { code, world, queues, server, now, signal } = feed;
  let client: SiteClient | undefined;
  const stop = (): unknown => client?.stop();
  signal.addEventListener('abort', stop);
  try {
    for (let tick = 0; !signal.aborted; tick += 1) {
      const present = now();
      if (isLinkUp(world, code, present.taiS)) {
        const isNew = client === undefined;
        client ??= new SiteClient(server);
        await client.welcome();
        const { records, completeTo } = queues.take(code, present);
        for (const record of records) if (!client.holds(record.series, record.sequence)) await client.push(record);
        if (isNew) await client.state({ completeTo, live: liveSpans(feed) });
        else if (tick % TICKS_A_STATE === 0) await client.state({ completeTo });
      } else if (client) {
        await client.finish();
        client = undefined;
      }
      await sleep(TICK_MS, undefined, { signal }).catch(() => undefined);
    }
  } finally {
    signal.removeEventListener('abort', stop);
    client?.stop();
  }
}

/** Each session is a span in which all sites could trigger; the present one goes on. */
function liveSpans({ world, resumed: { session, former } }: SiteFeed) {
  const from = ({ firstSlice }: { readonly firstSlice: number }): Instant => startOfSlice(world, firstSlice);
  return [...(former ? [{ from: from(former), to: { taiS: former.lastTaiS, ps: 0 } }] : []), { from: from(session), to: null }];
}
