import * as z from 'zod';
import { numberThat, record } from './leaves';
import { networkChanged, networkChanges } from './live-changes';
import { siteStates } from './site-state';

/**
 * How browsers hear of a network's changes: a socket.io path of its own, over WebSocket alone, by the cookies of the session.
 *
 * The database is the truth and the socket a hint. Every change of a network has a number (1, 2, 3, ...), and every list over HTTP says
 * `change`: the number at which it was read. To have a list and what follows without a gap and without a double:
 *
 * 1. `network:follow`; from then on come `network:changed`, each from the number behind the last one's `to`.
 * 2. Ask for the list over HTTP; of several pages the least `change` counts.
 * 3. Put over it every message whose `to` is above that number, in their order.
 * 4. A message whose `from` is not the number behind the last one (after a lost link, or `kind: 'sum'`) means that some are missing: ask
 *    `network:missed` for those behind the last one had, again and again until `to` is `last`. When that is refused as 'too-old', begin anew.
 */
export const LIVE_PATH = '/live';

export const LIVE_LIMITS = {
  /** Of a message of a browser; beyond it the link is cut. */
  messageBytes: 64 * 1024,
  /** Networks that a browser follows at once. */
  followed: 8,
} as const;

const networkId = () => numberThat('the id of a network', (value) => Number.isSafeInteger(value) && value >= 1);
const changeNumber = () =>
  numberThat('the number of a change, 0 for before the first', (value) => Number.isSafeInteger(value) && value >= 0);

/** `after`: the last change that is known, if any. */
export const followAsked = record({ networkId: networkId(), after: changeNumber().optional() });
export const leaveAsked = record({ networkId: networkId() });
/** For the changes behind a number. */
export const missedAsked = record({ networkId: networkId(), after: changeNumber() });

/** The messages of a browser; each takes one object, and a function for the answer. */
export const LIVE_REQUESTS = { 'network:follow': followAsked, 'network:leave': leaveAsked, 'network:missed': missedAsked } as const;
export type LiveRequestName = keyof typeof LIVE_REQUESTS;

/**
 * Why something is refused. 'absent': there is no such network, or nothing in it for this person. 'too-old': what is asked for is no longer
 * kept, or was never (the database was put back to an earlier state): begin anew. 'unusable': the message is not as it must be. 'busy': too
 * much was asked, try again later. 'sign-in': the session has ended. 'unknown': the server could not do it.
 */
export const LIVE_REFUSALS = ['absent', 'too-old', 'unusable', 'busy', 'sign-in', 'unknown'] as const;

export const liveRefusal = z.strictObject({
  ok: z.literal(false),
  code: z.enum(LIVE_REFUSALS),
  text: z.string(),
  retryAfterMs: z.int().optional(),
});

/** The network is followed from `last` on: what comes next begins behind it. */
export const followed = z.strictObject({
  ok: z.literal(true),
  last: z.int(),
  /** The oldest change that is still kept. */
  oldest: z.int(),
  /** Whether all changes behind `after` are kept, so that `network:missed` gives them; without `after` it is true. */
  isKept: z.boolean(),
  states: siteStates,
});

/** The first of the changes that were asked for, as many as one message holds; null when there are none. */
export const missed = z.strictObject({ ok: z.literal(true), changes: networkChanges.nullable(), last: z.int() });

export const left = z.strictObject({ ok: z.literal(true) });

export const LIVE_ANSWERS = {
  'network:follow': z.discriminatedUnion('ok', [followed, liveRefusal]),
  'network:leave': z.discriminatedUnion('ok', [left, liveRefusal]),
  'network:missed': z.discriminatedUnion('ok', [missed, liveRefusal]),
} as const;

/** The network is no longer followed, since what this person may see of it is now another: follow it again and begin anew. */
const networkEnded = z.strictObject({ networkId: z.int(), text: z.string() });

/**
 * The link ends. 'sign-in': the session has ended, or was not renewed. 'too-many': newer pages of this person are open. 'faults': too many messages were
 * unusable. 'closing': the server ends, come again after `retryAfterMs`. A browser that
 * does not read what it is sent is cut without a word.
 */
export const liveEnded = z.strictObject({
  code: z.enum(['sign-in', 'too-many', 'faults', 'closing']),
  text: z.string(),
  retryAfterMs: z.int().optional(),
});

/** What comes unasked. States come at most once a second. */
export const LIVE_NEWS = {
  'network:changed': networkChanged,
  'network:ended': networkEnded,
  'site:states': siteStates,
  'live:ended': liveEnded,
} as const;
export type LiveNewsName = keyof typeof LIVE_NEWS;

/** The data of a refused connection. */
export const liveConnectRefusal = z.strictObject({ code: z.enum(['sign-in', 'busy']), text: z.string(), retryAfterMs: z.int().optional() });

export type FollowAsked = z.infer<typeof followAsked>;
export type MissedAsked = z.infer<typeof missedAsked>;
export type LiveAnswers = { readonly [K in LiveRequestName]: z.infer<(typeof LIVE_ANSWERS)[K]> };
export type LiveRefusal = z.infer<typeof liveRefusal>;
export type LiveNews = { readonly [K in LiveNewsName]: z.infer<(typeof LIVE_NEWS)[K]> };
export type LiveEnded = z.infer<typeof liveEnded>;
