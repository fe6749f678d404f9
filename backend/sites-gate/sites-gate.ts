import { type Server as HttpServer } from 'node:http';
import { type Socket } from 'socket.io';
import {
  SITE_LIMITS,
  SITE_REQUESTS,
  SITE_STREAM_PATH,
  siteAuth,
  siteConnectRefusal,
  type SiteRefusalCode,
} from '#shared/contract/site-socket';
import { policyOf } from '#shared/contract/policies';
import { doorArrivals, isOurOrigin, openSocketDoor, retryAfterMs } from '../api/socket-door';
import { type Ground } from '../ground';
import { CreditOffice } from './credit-office';
import { type SiteDesk } from './site-desk';
import { keyReader, type SiteOfKey } from './site-of-key';
import { SiteStream, type StreamGround } from './site-stream';

const MOST_STREAMS_OF_SITE = 8;
const LOOK_MS = 250;
const KEYS_MS = 1_000; // a key that was revoked ends its streams within 2 s
const BEHIND_MS = 1_000; // a batch that waits longer than this says that the work is behind
const FINISH_MS = 2_500; // what is with the writer may take so long once the server is told to end

/**
 * What the streams of all sites may have on their way to the database. A record takes some 700 bytes of memory on its way, so the records bound
 * it at about 45 MB, and the bytes, whose texts are held once more as they are unpacked, at some 24 MB.
 */
const CREDIT = {
  budget: { records: 65_536, bytes: 8 * 1024 * 1024 },
  most: { records: 8_000, bytes: 1024 * 1024 },
  least: { records: 100, bytes: SITE_LIMITS.batchBytes / 8 },
} as const;

/** The gate for sites. */
export interface SitesGate {
  /** Lets nobody in any more, grants nothing, waits for what is with the writer, says when to come again, and ends every stream. */
  readonly close: () => Promise<void>;
}

/** What the gate stands on. */
export type GateGround = Pick<Ground, 'db' | 'log' | 'nowMs' | 'noteKeyUse' | 'origin' | 'production'>;

/**
 * Opens the gate for sites on an HTTP server, whose own answers must be in place already.
 *
 * @param server listens, or will
 * @param ground its database is only read
 * @param desk who keeps what comes
 * @throws when an event has no policy for site keys
 */
export function openSitesGate(server: HttpServer, ground: GateGround, desk: SiteDesk): SitesGate {
  for (const name of Object.keys(SITE_REQUESTS)) refuseUndeclared(name);
  const io = openSocketDoor(server, {
    path: SITE_STREAM_PATH,
    mostBytes: SITE_LIMITS.messageBytes,
    // Programs say no origin; a browser always says one, and no page of another site may reach the gate.
    letsIn: (origin) => origin === undefined || isOurOrigin(origin, ground),
  });
  const readKey = keyReader(ground.db);
  const office = new CreditOffice(CREDIT);
  const arrivals = doorArrivals();
  const streams = new Set<SiteStream>();
  let isEnding = false;

  io.use((socket, next) => {
    const waitMs = isEnding || office.isFull ? retryAfterMs() : arrivals.admit(ground.nowMs());
    if (waitMs !== undefined) {
      next(refusal('busy', 'The server takes no more sites at this moment: come again later.', waitMs));
      return;
    }
    const auth = siteAuth.safeParse(socket.handshake.auth);
    const found = auth.success ? readKey(auth.data.key) : 'The key of a site is missing: connect with auth { "key": "swk_..." }.';
    if (typeof found !== 'string') {
      keys.set(socket, { ...found, key: auth.success ? auth.data.key : '' });
      next();
      return;
    }
    ground.log.info({ event: 'site-stream:refused', address: socket.handshake.address, why: found }, 'a site was not let in');
    next(refusal('refused', found));
  });
  const keys = new WeakMap<Socket, SiteOfKey & { readonly key: string }>();

  io.on('connection', (socket) => {
    const holder = keys.get(socket);
    if (!holder) throw new Error('a stream began without a key');
    const others = [...streams].filter(({ siteId }) => siteId === holder.siteId);
    for (const old of others.slice(0, Math.max(0, others.length - MOST_STREAMS_OF_SITE + 1)))
      old.end(`The site has ${MOST_STREAMS_OF_SITE} newer streams.`, retryAfterMs());
    const streamGround: StreamGround = { ...ground, desk, office, readKey, isEnding: () => isEnding, retryAfterMs };
    const stream = new SiteStream(socket, holder, streamGround);
    streams.add(stream);
    socket.on('disconnect', (why) => {
      streams.delete(stream);
      stream.left(why);
    });
  });

  const look = setInterval(() => {
    const oldestMs = Math.min(...[...streams].map(({ waitingSinceMs }) => waitingSinceMs));
    office.isBehind = ground.nowMs() - oldestMs > BEHIND_MS;
    for (const stream of streams) stream.giveCredit();
  }, LOOK_MS);
  const lookAtKeys = setInterval(() => {
    for (const stream of streams) stream.isAllowed();
  }, KEYS_MS);

  return {
    close: async () => {
      isEnding = true;
      clearInterval(look);
      clearInterval(lookAtKeys);
      for (const stream of streams) stream.tellEnd('The server ends.', retryAfterMs());
      let timer: NodeJS.Timeout | undefined;
      const late = new Promise<void>((resolve) => (timer = setTimeout(resolve, FINISH_MS)));
      await Promise.race([late, Promise.all([...streams].map((stream) => stream.settled()))]);
      clearTimeout(timer);
      io.disconnectSockets(true);
      io.engine.close();
    },
  };
}

function refuseUndeclared(name: string): void {
  if (policyOf(name)?.who !== 'site-key')
    throw new Error(`the event ${name} has no policy for site keys: it needs a line in shared/contract/policies.ts`);
}

/** An error that socket.io hands to the client with its data. */
function refusal(code: SiteRefusalCode, text: string, waitMs?: number): Error {
  const data = siteConnectRefusal.parse({ code, text, ...(waitMs !== undefined && { retryAfterMs: waitMs }) });
  return Object.assign(new Error(text), { data });
}
