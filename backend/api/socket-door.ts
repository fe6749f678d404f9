import { type IncomingMessage } from 'node:http';
import { type Ground } from '../ground';

const LOCAL_HOSTS = ['localhost', '127.0.0.1', '[::1]'];

/**
 * Whether an origin, as a browser says it, is ours. Outside production a page of this machine counts as ours: the development server passes
 * sockets on from its own port.
 */
export function isOurOrigin(origin: string, ours: Pick<Ground, 'origin' | 'production'>): boolean {
  if (origin === ours.origin) return true;
  return !ours.production && URL.canParse(origin) && LOCAL_HOSTS.includes(new URL(origin).hostname);
}

/** Says 403 to whoever asked for a WebSocket: the engine would say 400. */
export function sayForbidden({ socket }: IncomingMessage): void {
  socket.end('HTTP/1.1 403 Forbidden\r\nConnection: close\r\nContent-Length: 0\r\n\r\n');
}
