import { randomUUID } from 'node:crypto';
import { type IncomingMessage, type Server, type ServerResponse } from 'node:http';
import { type Logger } from 'pino';
import { problemAnswer, type Told } from './api/answer';

const STARTING: Told = {
  status: 503,
  title: 'Starting',
  detail: 'The server is starting: try again in a moment.',
  headers: { 'Retry-After': '2' },
};

/**
 * Answers whoever comes before the server can: without an answer a browser or a site would wait until its patience ends. Who asks for a
 * WebSocket is answered too, since Node takes that for a plain request as long as nobody listens for upgrades.
 *
 * @param server listens already
 * @returns ends it, once there is who answers
 */
export function answerWhileStarting(server: Server, log: Logger): () => void {
  const answer = (req: IncomingMessage, res: ServerResponse): void => {
    const id = randomUUID();
    const { status, headers, content } = problemAnswer(STARTING, id);
    log.debug({ id, method: req.method }, 'asked while starting');
    res.writeHead(status, [
      ...headers.flat(),
      ...['Cache-Control', 'no-store', 'X-Content-Type-Options', 'nosniff', 'Connection', 'close'],
      ...['Content-Type', 'application/problem+json; charset=utf-8'],
    ]);
    res.end(content?.text);
  };
  server.on('request', answer);
  return () => void server.off('request', answer);
}
