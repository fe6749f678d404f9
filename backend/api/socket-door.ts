import { type IncomingMessage, type Server as HttpServer } from 'node:http';
import { Server } from 'socket.io';
import { type Ground } from '../ground';
import { arrivalsOf, type Arrivals } from './arrivals';
import { isOfThisMachine } from './same-origin';

const HEARTBEAT_MS = 10_000; // asked so often, and answered within as long again, or the link is taken as lost
const CONNECT_MS = 10_000;
const MOST_LINKS = 2_000;
const LEAST_RETRY_MS = 2_000;
const RETRY_SPREAD_MS = 3_000;
const ARRIVALS_AT_ONCE = 100;
const ARRIVALS_PER_S = 50;

/** What a socket.io server of ours is opened by. */
export interface Door {
  readonly path: string;
  /** Of one message. */
  readonly mostBytes: number;
  /** Whether whoever says this origin, or none, may come so far as to say who they are. */
  readonly letsIn: (origin: string | undefined) => boolean;
}

/**
 * Opens a socket.io server beside an HTTP server's own answers: WebSockets alone, uncompressed, so many at most; others are told 403.
 *
 * @param server listens, or will
 */
export function openSocketDoor(server: HttpServer, { path, mostBytes, letsIn }: Door): Server {
  const io = new Server(server, {
    path,
    transports: ['websocket'],
    allowUpgrades: false,
    serveClient: false,
    cookie: false,
    maxHttpBufferSize: mostBytes,
    perMessageDeflate: false,
    httpCompression: false,
    pingInterval: HEARTBEAT_MS,
    pingTimeout: HEARTBEAT_MS,
    connectTimeout: CONNECT_MS,
    allowRequest: (req, decide) => {
      const isIn = letsIn(req.headers.origin) && io.engine.clientsCount < MOST_LINKS;
      if (!isIn) sayForbidden(req);
      decide(null, isIn);
    },
  });
  return io;
}

/** The pace at which a crowd comes in by a door. */
export const doorArrivals = (): Arrivals => arrivalsOf(ARRIVALS_AT_ONCE, ARRIVALS_PER_S, LEAST_RETRY_MS);

/** When whoever is sent away should come again, each at a time of their own. */
export const retryAfterMs = (): number => LEAST_RETRY_MS + Math.floor(Math.random() * RETRY_SPREAD_MS);

/**
 * Whether an origin, as a browser says it, is ours. Outside production a page of this machine counts as ours: the development server passes
 * sockets on from its own port.
 */
export const isOurOrigin = (origin: string, ours: Pick<Ground, 'origin' | 'production'>): boolean =>
  origin === ours.origin || (!ours.production && isOfThisMachine(origin));

/** Says 403 to whoever asked for a WebSocket: the engine would say 400. */
function sayForbidden({ socket }: IncomingMessage): void {
  socket.end('HTTP/1.1 403 Forbidden\r\nConnection: close\r\nContent-Length: 0\r\n\r\n');
}
