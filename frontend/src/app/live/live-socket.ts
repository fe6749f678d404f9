import { InjectionToken } from '@angular/core';
import { type ManagerOptions, type Socket, type SocketOptions } from 'socket.io-client';
import type * as z from 'zod';
import {
  LIVE_ANSWERS,
  LIVE_NEWS,
  LIVE_PATH,
  liveConnectRefusal,
  type LiveAnswers,
  type LiveNews,
  type LiveNewsName,
  type LiveRequestName,
} from '#shared/contract/live-socket';

const ANSWER_MS = 15_000;
const CONNECT_MS = 10_000;

/** Why there is no link: the server's reason where it gave one. */
export type Unlinked = z.infer<typeof liveConnectRefusal> | undefined;

/** Who hears of the link. */
export interface SocketListener {
  readonly linked: () => void;
  /** Refused, not reached, or lost: nothing comes any more until `link` is called again. */
  readonly unlinked: (why: Unlinked) => void;
  readonly news: (news: OneNews) => void;
}

export type OneNews = { readonly [K in LiveNewsName]: { readonly name: K; readonly news: LiveNews[K] } }[LiveNewsName];

/** The page's socket: it never links by itself, and keeps nothing for later that could not be sent. */
export interface LiveSocket {
  readonly link: () => void;
  /** @throws when the link is lost before the answer, or the answer is none that this page can read */
  readonly ask: <K extends LiveRequestName>(name: K, asked: object) => Promise<LiveAnswers[K]>;
  readonly close: () => void;
}

export type OpenLiveSocket = (listener: SocketListener) => Promise<LiveSocket>;

/** Opens the socket; a test gives another. */
export const OPEN_LIVE_SOCKET = new InjectionToken<OpenLiveSocket>('the live socket', { factory: () => openLiveSocket });

const OPTIONS: Partial<ManagerOptions & SocketOptions> = {
  path: LIVE_PATH,
  transports: ['websocket'],
  reconnection: false,
  autoConnect: false,
  forceNew: true,
  timeout: CONNECT_MS,
};

async function openLiveSocket(listener: SocketListener): Promise<LiveSocket> {
  const { io } = await import('socket.io-client'); // the first page comes without it
  const socket: Socket = io(OPTIONS);
  socket.on('connect', () => listener.linked());
  socket.on('disconnect', () => listener.unlinked(undefined));
  socket.on('connect_error', (fault: Error & { readonly data?: unknown }) => {
    socket.disconnect();
    listener.unlinked(liveConnectRefusal.safeParse(fault.data).data);
  });
  for (const name of NEWS_NAMES) socket.on(name, (given: unknown) => tell(name, given));
  return {
    link: () => void socket.connect(),
    ask: async (name, asked) => {
      if (!socket.connected) throw new Error('the link is lost');
      const given: unknown = await socket.timeout(ANSWER_MS).emitWithAck(name, asked);
      return answerOf(name, given);
    },
    close: () => void socket.removeAllListeners().disconnect(),
  };

  function tell(name: LiveNewsName, given: unknown): void {
    const { data } = LIVE_NEWS[name].safeParse(given);
    // What this page cannot read is a newer server's: the jump in the numbers shows that something is missing.
    if (data) listener.news({ name, news: data } as OneNews); // the compiler does not see that a name and its own news make one of them
  }
}

const NEWS_NAMES = Object.keys(LIVE_NEWS) as LiveNewsName[];

function answerOf<K extends LiveRequestName>(name: K, given: unknown): LiveAnswers[K] {
  const schema: z.ZodType<LiveAnswers[LiveRequestName]> = LIVE_ANSWERS[name];
  return schema.parse(given) as LiveAnswers[K]; // checked by the schema of that very name
}
