import { type Socket } from 'socket.io';
import type * as z from 'zod';
import { firstProblem } from '#shared/contract/first-problem';
import { type ChangesInSum, type NetworkChanges } from '#shared/contract/live-changes';
import {
  LIVE_LIMITS,
  LIVE_REQUESTS,
  type FollowAsked,
  type LiveAnswers,
  type LiveEnded,
  type LiveNews,
  type LiveNewsName,
  type LiveRefusal,
  type LiveRequestName,
  type MissedAsked,
} from '#shared/contract/live-socket';
import { judge, policyOf } from '#shared/contract/policies';
import { type SiteStates } from '#shared/contract/site-state';
import { type Claimed } from '../accounts/access-token';
import { type Ground } from '../ground';
import { audienceOf, changesFor, statesFor, type Audience } from './audience';
import { type LiveHub } from './live-hub';
import { areKept, keptChanges, missedChanges } from './network-channel';
import { cutLink, unsentBytes } from './outgoing';
import { type SessionLook, type SessionNow } from './session-look';

/** Above `slow` bytes unsent a browser is slow, and is told nothing more until they are fewer than this; above `most`, or slow for long, it is cut. */
const READ_BYTES = 64 * 1024;
export const UNSENT_BYTES = { slow: 512 * 1024, most: 1024 * 1024 };
const MOST_SLOW_MS = 30_000;
const MOST_FAULTS = 20;
const MOST_SHOWN_NAME = 60;
const REQUESTS_AT_ONCE = 40;
const REQUESTS_PER_S = 10;
const BUSY_MS = 1_000;

/** What a link stands on. */
export interface LinkGround extends Pick<Ground, 'db' | 'log' | 'nowMs'> {
  readonly hub: LiveHub;
  readonly look: SessionLook;
  readonly readStates: (networkId: number) => SiteStates;
  readonly unsentBytes: typeof UNSENT_BYTES;
}

type Acknowledge = (answer: LiveAnswers[LiveRequestName]) => void;

const refusalOf = (code: LiveRefusal['code'], text: string, retryAfterMs?: number): LiveRefusal => ({
  ok: false,
  code,
  text,
  ...(retryAfterMs !== undefined && { retryAfterMs }),
});
const ABSENT = refusalOf('absent', 'There is no such network here.');
const SIGN_IN = refusalOf('sign-in', 'The session has ended, or was not renewed: sign in again.');

/** One browser's socket: every message is judged, checked, answered or counted, and none of them can end the process. */
export class LiveLink {
  readonly claimed: Claimed;
  private readonly follows = new Map<number, Audience>();
  /** What a slow browser is not told, by network; undefined while it is not slow. */
  private untold: Map<number, ChangesInSum> | undefined;
  private slowSinceMs = 0;
  private faults = 0;
  private room = REQUESTS_AT_ONCE;
  private askedAtMs: number;
  private isEnded = false;

  constructor(
    private readonly socket: Socket,
    { personId, sessionId }: SessionNow,
    private readonly ground: LinkGround,
  ) {
    this.claimed = { personId, sessionId };
    this.askedAtMs = ground.nowMs();
    socket.onAny((event: unknown, ...args: unknown[]) => this.take(String(event).slice(0, MOST_SHOWN_NAME), args));
    socket.conn.on('drain', () => this.lookAtRest());
    ground.log.debug({ event: 'live:begun', personId, sessionId }, 'a browser has connected');
  }

  /** A message was told in the rooms of an audience of this link. */
  wasTold(news: NetworkChanges): void {
    if (!this.untold) {
      if (unsentBytes(this.socket) > this.ground.unsentBytes.slow) this.becomeSlow();
      return;
    }
    const { networkId, from, to, atMs } = news;
    const before = this.untold.get(networkId);
    this.untold.set(networkId, {
      kind: 'sum',
      networkId,
      from: before?.from ?? from,
      to,
      atMs,
      events: (before?.events ?? 0) + news.events.items.length,
      coincidences: (before?.coincidences ?? 0) + news.coincidences.items.length,
    });
  }

  /** Ends or narrows the link by what its person may now; to be called twice a second, and whenever something was revoked. */
  lookAgain(): void {
    const session = this.ground.look.again(this.claimed);
    if (!session) {
      this.end({ code: 'sign-in', text: SIGN_IN.text });
      return;
    }
    for (const [networkId, audience] of this.follows) {
      if (audienceOf(session.held, networkId)?.key === audience.key) continue;
      this.leave(networkId);
      this.tell('network:ended', { networkId, text: 'What you may see of this network has changed.' });
    }
  }

  /** A slow browser that has read what was sent is told how much it missed; one that does not read is cut. */
  lookAtRest(): void {
    const { untold } = this;
    const unsent = unsentBytes(this.socket);
    const slowMs = untold ? this.ground.nowMs() - this.slowSinceMs : 0;
    if (unsent > this.ground.unsentBytes.most || (untold && unsent > READ_BYTES && slowMs > MOST_SLOW_MS)) {
      this.ground.log.info({ event: 'live:cut', personId: this.claimed.personId, unsent }, 'a browser does not read what it is sent');
      this.cut();
    } else if (untold && unsent <= READ_BYTES) {
      this.untold = undefined;
      for (const { key } of this.follows.values()) void this.socket.join(key);
      for (const sum of untold.values()) this.tell('network:changed', sum);
    }
  }

  /** Tells why, and ends the link. */
  end(why: LiveEnded): void {
    if (this.isEnded) return;
    this.tell('live:ended', why);
    this.stop();
    if (unsentBytes(this.socket) > READ_BYTES) cutLink(this.socket);
    else this.socket.disconnect(true);
  }

  /** The link is no more. */
  stop(): void {
    this.isEnded = true;
    for (const networkId of [...this.follows.keys()]) this.leave(networkId);
  }

  cut(): void {
    this.stop();
    cutLink(this.socket);
  }

  private becomeSlow(): void {
    this.untold = new Map();
    this.slowSinceMs = this.ground.nowMs();
    for (const { key } of this.follows.values()) void this.socket.leave(key);
  }

  private leave(networkId: number): void {
    const audience = this.follows.get(networkId);
    if (!audience) return;
    this.follows.delete(networkId);
    this.untold?.delete(networkId);
    void this.socket.leave(audience.key);
    this.ground.hub.leave(this, networkId);
  }

  private tell<K extends LiveNewsName>(name: K, news: LiveNews[K]): void {
    this.socket.emit(name, news);
  }

  private take(name: string, args: readonly unknown[]): void {
    if (this.isEnded) return;
    const last = args.at(-1);
    // Without a function for the answer it would not know what became of it.
    if (typeof last !== 'function') {
      this.fault();
      return;
    }
    const answer = last as Acknowledge;
    try {
      answer(this.answerTo(name, args));
    } catch (fault) {
      this.ground.log.error({ err: fault, name }, 'a message of a browser could not be answered');
      answer(refusalOf('unknown', 'The server could not do it: try again.', BUSY_MS));
    }
    if (unsentBytes(this.socket) > this.ground.unsentBytes.most) this.lookAtRest();
  }

  private answerTo(name: string, args: readonly unknown[]): LiveAnswers[LiveRequestName] {
    if (!isRequest(name))
      return this.unusable(`There is no message ${JSON.stringify(name)}; there are ${Object.keys(LIVE_REQUESTS).join(', ')}.`);
    if (args.length !== 2)
      return this.unusable(`${name} came with ${args.length - 1} arguments; it takes one object, and a function for the answer.`);
    if (!this.hasRoom()) return refusalOf('busy', `More than ${REQUESTS_PER_S} messages a second came: wait.`, BUSY_MS);
    switch (name) {
      case 'network:follow':
        return this.parsed(LIVE_REQUESTS[name], args[0], (asked) => this.admitted(name, asked, (audience) => this.follow(asked, audience)));
      case 'network:missed':
        return this.parsed(LIVE_REQUESTS[name], args[0], (asked) => this.admitted(name, asked, (audience) => this.missed(asked, audience)));
      case 'network:leave':
        return this.parsed(LIVE_REQUESTS[name], args[0], ({ networkId }) => {
          this.leave(networkId);
          return { ok: true };
        });
    }
  }

  private hasRoom(): boolean {
    const now = this.ground.nowMs();
    this.room = Math.min(REQUESTS_AT_ONCE, this.room + (Math.max(0, now - this.askedAtMs) / 1000) * REQUESTS_PER_S);
    this.askedAtMs = now;
    if (this.room < 1) return false;
    this.room--;
    return true;
  }

  private parsed<T>(schema: z.ZodType<T>, given: unknown, then: (value: T) => LiveAnswers[LiveRequestName]): LiveAnswers[LiveRequestName] {
    const { data, error, success } = schema.safeParse(given);
    if (success) return then(data);
    const { where, text } = firstProblem(error, given, 'message').problem;
    return this.unusable(where === '' ? text : `${where}: ${text}`);
  }

  /** The policy of the message, by the roles that are held now. */
  private admitted(
    name: LiveRequestName,
    { networkId }: { readonly networkId: number },
    then: (audience: Audience) => LiveAnswers[LiveRequestName],
  ): LiveAnswers[LiveRequestName] {
    const session = this.ground.look.again(this.claimed);
    if (!session) {
      this.noteRefusal(name, networkId, 'sign-in');
      setImmediate(() => this.lookAgain());
      return SIGN_IN;
    }
    const policy = policyOf(name);
    const verdict = policy && judge(policy, { kind: 'person', held: session.held }, { kind: 'network', networkId });
    const audience = verdict === 'allowed' ? audienceOf(session.held, networkId) : undefined;
    if (audience && keptChanges(this.ground.db, networkId)) return then(audience);
    this.noteRefusal(name, networkId, 'hidden');
    return ABSENT;
  }

  /** Messages have no id as requests have: the network that was asked for stands in its place. As many as `hasRoom` lets through. */
  private noteRefusal(policy: LiveRequestName, networkId: number, verdict: 'sign-in' | 'hidden'): void {
    const { personId } = this.claimed;
    this.ground.log.info({ event: 'live:refused', personId, policy, verdict, networkId }, 'someone who is known was refused');
  }

  private follow({ networkId, after }: FollowAsked, audience: Audience): LiveAnswers['network:follow'] {
    const { db, hub, readStates } = this.ground;
    this.leave(networkId);
    if (this.follows.size >= LIVE_LIMITS.followed) return this.unusable(`At most ${LIVE_LIMITS.followed} networks are followed at once.`);
    const last = hub.follow(this, networkId, audience);
    this.follows.set(networkId, audience);
    if (!this.untold) void this.socket.join(audience.key);
    const kept = keptChanges(db, networkId) ?? { last, oldest: last + 1 };
    const isKept = after === undefined || areKept(kept, after);
    return { ok: true, last, oldest: kept.oldest, isKept, states: statesFor(audience, readStates(networkId)) };
  }

  private missed({ networkId, after }: MissedAsked, audience: Audience): LiveAnswers['network:missed'] {
    if (unsentBytes(this.socket) > this.ground.unsentBytes.slow)
      return refusalOf('busy', 'What was sent before is not read yet: wait.', BUSY_MS);
    this.ground.hub.bringUp(networkId);
    const found = missedChanges(this.ground.db, networkId, after, (read) => changesFor(audience, read));
    return found === 'too-old' ? refusalOf('too-old', 'These changes are no longer kept: take everything anew.') : { ok: true, ...found };
  }

  private unusable(text: string): LiveRefusal {
    this.fault();
    return refusalOf('unusable', text);
  }

  /** A fault of the sender; too many of them end the link. */
  private fault(): void {
    if (++this.faults >= MOST_FAULTS)
      setImmediate(() =>
        this.end({ code: 'faults', text: `${MOST_FAULTS} messages were not as they must be.`, retryAfterMs: MOST_SLOW_MS }),
      );
  }
}

const isRequest = (name: string): name is LiveRequestName => Object.hasOwn(LIVE_REQUESTS, name);
