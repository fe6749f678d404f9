import { headerIn, newReply, type Exchange } from '../api/exchange';

/** An exchange as plain data, its body read: what crosses from the thread that took it to the one that answers. */
export interface SentExchange extends Pick<Exchange, 'method' | 'path' | 'params' | 'query' | 'headers' | 'ip' | 'requestId'> {
  /** The path of its route, as declared. */
  readonly routePath: string;
  readonly body: Uint8Array;
}

/** The exchange again, on the other side. */
export function receivedExchange({ body, routePath: _, ...sent }: SentExchange): Exchange {
  return {
    ...sent,
    header: headerIn(sent.headers),
    bytes: () => Promise.resolve(body), // its bound was held where it was read
    reply: newReply(),
  };
}
