import { io, type Socket } from 'socket.io-client';
import type * as z from 'zod';
import {
  SITE_NEWS,
  SITE_PROTOCOL,
  SITE_STREAM_PATH,
  siteConnectRefusal,
  siteRefusal,
  siteWelcome,
  type SiteCredit,
  type SiteNewsName,
  type SiteRefusal,
  type SiteRequestName,
  type SiteWelcome,
} from '#shared/contract/site-socket';
import { unreachable } from './unreachable';

const CONNECT_MS = 10_000;
const ANSWER_MS = 30_000;

/** Why a link is no more, or never was: for good, or until it is tried again. */
export interface LinkEnd {
  readonly why: string;
  readonly isForGood: boolean;
  /** What the server asked to wait at least; 0 for nothing. */
  readonly retryAfterMs: number;
  /** Whether something answers at the address that is no server of this protocol. */
  readonly isOther?: boolean;
}

/** A connection that was welcomed. */
export interface SiteLink {
  readonly welcome: SiteWelcome;
  /** What may still be sent: grants are added as they come, and who sends takes it away. */
  credit: SiteCredit;
  /** Whether the server has said that the link will end: nothing more is to be sent. */
  isEnding: boolean;
  /** Asks the server, and gives its answer; undefined when none came, and then the link is no more. */
  readonly ask: <T>(name: SiteRequestName, body: object, answer: z.ZodType<T>) => Promise<T | SiteRefusal | undefined>;
  readonly close: (why: string) => void;
}

/** Who hears of a link. */
export interface LinkListener {
  /** There is more credit. */
  readonly onCredit: () => void;
  /** The last that is heard of it. */
  readonly onEnd: (end: LinkEnd) => void;
}

/** What socket.io calls the ends of a link, in words. */
const ENDS: Readonly<Record<string, string>> = {
  'transport close': 'the link was lost',
  'transport error': 'the link was lost',
  'ping timeout': 'nothing was heard from the server any more',
  'io server disconnect': 'the server ended the link',
  'parse error': 'the server sent what cannot be read',
};

const lostAs = (reason: string): LinkEnd => lost(ENDS[reason] ?? reason);
const lost = (why: string, retryAfterMs = 0): LinkEnd => ({ why, isForGood: false, retryAfterMs });
export const sumOf = (a: SiteCredit, b: SiteCredit): SiteCredit => ({ records: a.records + b.records, bytes: a.bytes + b.bytes });
const isForGood = (code: SiteRefusal['code']): boolean => code === 'refused' || code === 'protocol';

/**
 * Connects once, says hello, and waits for the welcome. A link is used until it ends and never again: socket.io's own reconnecting and its
 * buffer of what could not be sent are not used, since that buffer has no bound and sends twice.
 *
 * @param url scheme, host and port of the server
 * @param key the site's
 * @param software name and version of what sends
 * @returns the link, or why there is none
 */
export async function openLink(
  { url, key, software }: { readonly url: string; readonly key: string; readonly software: string },
  listener: LinkListener,
): Promise<SiteLink | LinkEnd> {
  const socket = io(new URL(url).origin, {
    path: SITE_STREAM_PATH,
    transports: ['websocket'],
    auth: { key },
    reconnection: false,
    forceNew: true,
  });
  const refusedAt = await connected(socket, new URL(url).origin);
  if (refusedAt) {
    socket.disconnect();
    return refusedAt;
  }
  let end: LinkEnd | undefined;
  const ended = (found: LinkEnd): void => {
    if (end) return;
    end = found;
    socket.disconnect();
    if (link) listener.onEnd(found);
  };
  let told: LinkEnd | undefined;
  let link: SiteLink | undefined;
  let early: SiteCredit = { records: 0, bytes: 0 }; // may come before the welcome is read
  socket.on('disconnect', (reason) => ended(told ?? lostAs(reason)));
  hear(socket, 'stream:refused', SITE_NEWS['stream:refused'], ({ text }) => ended({ why: text, isForGood: true, retryAfterMs: 0 }));
  hear(socket, 'stream:ended', SITE_NEWS['stream:ended'], ({ text, retryAfterMs }) => {
    told = lost(text, retryAfterMs);
    if (link) link.isEnding = true;
  });
  hear(socket, 'stream:credited', SITE_NEWS['stream:credited'], (credit) => {
    if (!link) {
      early = sumOf(early, credit);
      return;
    }
    link.credit = sumOf(link.credit, credit);
    listener.onCredit();
  });
  const ask: SiteLink['ask'] = async (name, body, schema) => {
    if (!socket.connected) return undefined;
    let answer: unknown;
    try {
      answer = await socket.timeout(ANSWER_MS).emitWithAck(name, body);
    } catch {
      ended(told ?? lost(`no answer to ${name} came within ${ANSWER_MS / 1000} s`));
      return undefined;
    }
    const found = schema.safeParse(answer);
    if (found.success) return found.data;
    const refusal = siteRefusal.safeParse(answer);
    if (refusal.success) return refusal.data;
    ended({ why: `the server answered ${name} in a way that this client does not know`, isForGood: true, retryAfterMs: 0 });
    return undefined;
  };
  const welcome = await ask('stream:hello', { protocol: SITE_PROTOCOL, software }, siteWelcome);
  if (welcome?.ok) {
    link = {
      welcome,
      credit: sumOf(welcome.credit, early),
      isEnding: told !== undefined,
      ask,
      close: (why) => ended(lost(why)),
    };
    return link;
  }
  socket.disconnect();
  if (!welcome) return end ?? lost('the link was lost');
  return { why: welcome.text, isForGood: isForGood(welcome.code), retryAfterMs: welcome.retryAfterMs ?? 0 };
}

/** Undefined once the server has let the socket in; else why it did not. A link may be lost before that, and may carry nothing. */
function connected(socket: Socket, origin: string): Promise<LinkEnd | undefined> {
  return new Promise((resolve) => {
    const timer = setTimeout(() => done(lost(`${origin} did not let the site in within ${CONNECT_MS / 1000} s`)), CONNECT_MS);
    const done = (end?: LinkEnd): void => {
      clearTimeout(timer);
      resolve(end);
    };
    socket.once('connect', () => done());
    socket.once('disconnect', (reason) => done(lostAs(reason)));
    socket.once('connect_error', (fault: Error & { data?: unknown }) => {
      const { data, success } = siteConnectRefusal.safeParse(fault.data);
      if (success) done({ why: data.text, isForGood: isForGood(data.code), retryAfterMs: data.retryAfterMs ?? 0 });
      else {
        const { why, isOther } = unreachable(fault, origin);
        done({ ...lost(why), isOther });
      }
    });
  });
}

/** Hears news of the form that they must have; others are passed over. */
function hear<T>(socket: Socket, name: SiteNewsName, schema: z.ZodType<T>, listener: (news: T) => void): void {
  socket.on(name, (given: unknown) => {
    const { data, success } = schema.safeParse(given);
    if (success) listener(data);
  });
}
