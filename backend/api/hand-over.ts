import { type Ground } from '../ground';
import { type Writer } from '../writer/questions';
import { problemAnswer, toldBy, type Answer } from './answer';
import { type Exchange } from './exchange';
import { later, Refusal } from './refusal';
import { type Served } from './serve';

const MOST_WAITING = 256; // of 64 KiB each, as a rule
const RETRY_S = 1;

/** How a request that changes something is answered: its first steps and its body here, the rest by the writer. */
export type HandOver = (served: Served, exchange: Exchange, ground: Ground) => Promise<Answer>;

/** Hands requests over to a writer, so many at a time; those above are told to try again. */
export function handOverTo(writer: Pick<Writer, 'ask'>): HandOver {
  let waiting = 0;
  const ask = async (served: Served, { method, path, params, query, headers, ip, requestId, bytes }: Exchange): Promise<Answer> => {
    const came = await bytes(served.route.mostBodyBytes);
    if (waiting >= MOST_WAITING) throw later(503, 'Busy', 'Too many changes wait to be made: try again in a second.', RETRY_S);
    waiting += 1;
    try {
      const body = new Uint8Array(came); // a copy, which can be given away: what came may be a part of a pool
      const sent = { method, path, params: { ...params }, query: { ...query }, headers, ip, requestId, body, routePath: served.route.path };
      return await writer.ask('http:exchange', sent, [body.buffer]);
    } finally {
      waiting -= 1;
    }
  };
  return async (served, exchange, ground) => {
    try {
      served.admit(exchange, ground);
      return await ask(served, exchange);
    } catch (fault) {
      if (fault instanceof Refusal) return problemAnswer(toldBy(fault), exchange.requestId);
      throw fault;
    }
  };
}
