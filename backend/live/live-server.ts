import { type Server as HttpServer } from 'node:http';
import { Server, type Socket } from 'socket.io';
import { LIVE_LIMITS, LIVE_PATH, LIVE_REQUESTS, liveConnectRefusal } from '#shared/contract/live-socket';
import { policyOf } from '#shared/contract/policies';
import { isOurOrigin, sayForbidden } from '../api/socket-door';
import { type Ground } from '../ground';
import { arrivalsOf } from '../sites-gate/arrivals';
import { type Writer } from '../writer/questions';
import { LiveHub } from './live-hub';
import { LiveLink, UNSENT_BYTES, type LinkGround } from './live-link';
import { sessionLook, type SessionNow } from './session-look';
import { siteStatesReader } from './site-states';

const HEARTBEAT_MS = 10_000; // asked so often, and answered within as long again, or the link is taken as lost
const CONNECT_MS = 10_000;
const MOST_LINKS = 2_000;
const MOST_LINKS_OF_PERSON = 20;
const ARRIVALS_AT_ONCE = 100;
const ARRIVALS_PER_S = 50;
const TOO_MANY_MS = 60_000;
const LEAST_RETRY_MS = 2_000;
const RETRY_SPREAD_MS = 3_000;
const LOOK_MS = 500; // what ends by time alone is seen within it, and whoever is slow
const STATES_MS = 1_000;

/** The server for browsers. */
export interface LiveServer {
  /** Lets nobody in any more, tells everybody when to come again, and ends every link. */
  readonly close: () => void;
}

/** What it stands on; its database is only read. */
export type LiveGround = Pick<Ground, 'db' | 'log' | 'nowMs' | 'origin' | 'production' | 'signingKey' | 'deploymentId'>;

/**
 * Opens the socket for browsers on an HTTP server, whose own answers must be in place already.
 *
 * @param server listens, or will
 * @param ground what it reads
 * @param writer whose news say that a network has changed, or that something no longer holds
 * @param unsent how much a browser may leave unread; another for a test of that
 * @throws when an event has no policy for people
 */
export function openLive(server: HttpServer, ground: LiveGround, writer: Pick<Writer, 'on'>, unsent = UNSENT_BYTES): LiveServer {
  for (const name of Object.keys(LIVE_REQUESTS)) refuseUndeclared(name);
  const { nowMs } = ground;
  const io = new Server(server, {
    path: LIVE_PATH,
    transports: ['websocket'],
    allowUpgrades: false,
    serveClient: false,
    cookie: false,
    maxHttpBufferSize: LIVE_LIMITS.messageBytes,
    perMessageDeflate: false,
    httpCompression: false,
    pingInterval: HEARTBEAT_MS,
    pingTimeout: HEARTBEAT_MS,
    connectTimeout: CONNECT_MS,
    allowRequest: (req, decide) => {
      const { origin } = req.headers;
      const isIn = origin !== undefined && isOurOrigin(origin, ground) && io.engine.clientsCount < MOST_LINKS;
      if (!isIn) sayForbidden(req);
      decide(null, isIn);
    },
  });
  const look = sessionLook(ground);
  const arrivals = arrivalsOf(ARRIVALS_AT_ONCE, ARRIVALS_PER_S, LEAST_RETRY_MS);
  const readStates = siteStatesReader(ground);
  const hub = new LiveHub({ ...ground, io, readStates });
  const linkGround: LinkGround = { ...ground, hub, look, readStates, unsentBytes: unsent };
  const links = new Set<LiveLink>();
  const sessions = new WeakMap<Socket, SessionNow>();
  let isEnding = false;
  const retryAfterMs = (): number => LEAST_RETRY_MS + Math.floor(Math.random() * RETRY_SPREAD_MS);

  io.use((socket, next) => {
    const waitMs = isEnding ? retryAfterMs() : arrivals.admit(nowMs());
    if (waitMs !== undefined) {
      next(refusal('busy', 'The server takes no more browsers at this moment: come again later.', waitMs));
      return;
    }
    const session = look.shown(socket.handshake.headers.cookie);
    if (session) sessions.set(socket, session);
    next(session ? undefined : refusal('sign-in', 'Sign in first, or renew the session.'));
  });

  io.on('connection', (socket) => {
    const session = sessions.get(socket);
    if (!session) throw new Error('a link began without a session');
    const others = [...links].filter(({ claimed }) => claimed.personId === session.personId);
    for (const old of others.slice(0, Math.max(0, others.length - MOST_LINKS_OF_PERSON + 1)))
      old.end({ code: 'too-many', text: `${MOST_LINKS_OF_PERSON} newer pages of yours are open.`, retryAfterMs: TOO_MANY_MS });
    const link = new LiveLink(socket, session, linkGround);
    links.add(link);
    socket.on('disconnect', () => {
      links.delete(link);
      link.stop();
    });
  });

  const stopListening = [
    writer.on('changed', ({ networkId }) => hub.changed(networkId)),
    writer.on('revoked', (revoked) => {
      if (revoked.kind !== 'site-key') lookAtLinks();
    }),
  ];
  const timers = [
    setInterval(() => {
      lookAtLinks();
      hub.lookAtAll();
    }, LOOK_MS),
    setInterval(() => hub.tellStates(), STATES_MS),
  ];

  function lookAtLinks(): void {
    for (const link of links) {
      try {
        link.lookAgain();
        link.lookAtRest();
      } catch (fault) {
        ground.log.error({ err: fault }, 'a link could not be looked at');
        link.cut();
      }
    }
  }

  return {
    close: () => {
      isEnding = true;
      for (const stop of stopListening) stop();
      for (const timer of timers) clearInterval(timer);
      hub.close();
      for (const link of links) link.end({ code: 'closing', text: 'The server ends.', retryAfterMs: retryAfterMs() });
      io.disconnectSockets(true);
      io.engine.close();
    },
  };
}

function refuseUndeclared(name: string): void {
  const who = policyOf(name)?.who;
  if (who !== 'signed-in' && who !== 'roles')
    throw new Error(`the event ${name} has no policy for people: it needs a line in shared/contract/policies.ts`);
}

/** An error that socket.io hands to the browser with its data. */
function refusal(code: 'sign-in' | 'busy', text: string, retryAfterMs?: number): Error {
  const data = liveConnectRefusal.parse({ code, text, ...(retryAfterMs !== undefined && { retryAfterMs }) });
  return Object.assign(new Error(text), { data });
}
