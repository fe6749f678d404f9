import { type Server as HttpServer } from 'node:http';
import { type Socket } from 'socket.io';
import { LIVE_LIMITS, LIVE_PATH, LIVE_REQUESTS, liveConnectRefusal } from '#shared/contract/live-socket';
import { policyOf } from '#shared/contract/policies';
import { type SiteStates } from '#shared/contract/site-state';
import { doorArrivals, isOurOrigin, openSocketDoor, retryAfterMs } from '../api/socket-door';
import { type Ground } from '../ground';
import { type Writer } from '../writer/questions';
import { LiveHub } from './live-hub';
import { LiveLink, UNSENT_BYTES, type LinkGround } from './live-link';
import { sessionLook, type SessionNow } from './session-look';
import { siteStatesOf } from './site-states';

const MOST_LINKS_OF_PERSON = 20;
const TOO_MANY_MS = 60_000;
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
  const io = openSocketDoor(server, {
    path: LIVE_PATH,
    mostBytes: LIVE_LIMITS.messageBytes,
    letsIn: (origin) => origin !== undefined && isOurOrigin(origin, ground),
  });
  const look = sessionLook(ground);
  const arrivals = doorArrivals();
  const readStates = (networkId: number): SiteStates => siteStatesOf(ground, networkId);
  const hub = new LiveHub({ ...ground, io, readStates });
  const linkGround: LinkGround = { ...ground, hub, look, readStates, unsentBytes: unsent };
  const links = new Set<LiveLink>();
  const sessions = new WeakMap<Socket, SessionNow>();
  let isEnding = false;

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
function refusal(code: 'sign-in' | 'busy', text: string, waitMs?: number): Error {
  const data = liveConnectRefusal.parse({ code, text, ...(waitMs !== undefined && { retryAfterMs: waitMs }) });
  return Object.assign(new Error(text), { data });
}
