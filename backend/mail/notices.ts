import { letter, type Letter, type Receiver } from './letters';

/** What every notice is written from: whom it is for, where browsers find the server, and when it happened (`utcText`). */
export interface Noticed {
  readonly receiver: Receiver;
  readonly origin: string;
  readonly at: string;
}

/** An instant of the server's clock to the second, as people read it. */
export const timeWords = (at: string): string => `${at.slice(0, 10)} ${at.slice(11, 19)} UTC`;

/** Where a person says which mails they want. */
export const choice = (origin: string) => [
  'Which of these mails you get is your choice, on the page of your account:',
  { page: `${origin}/account` },
];

/** Tells someone that their password is another now. */
export const passwordChanged = ({ receiver, origin, at }: Noticed, by: 'password' | 'reset'): Letter =>
  letter('password-changed', receiver, 'Your password at Skewline was changed', [
    by === 'reset'
      ? 'the password of your account at Skewline was changed, by a link that was mailed to you. All your sessions have ended.'
      : 'the password of your account at Skewline was changed, by someone who knew the former one. All other sessions have ended.',
    { facts: [['When', timeWords(at)]] },
    'If that was you, there is nothing to do. If it was not, tell a coordinator, and choose another password here:',
    { page: `${origin}/forgotten-password` },
    'This mail always comes.',
  ]);

/**
 * Tells someone that their account was entered from a browser that they have not used lately.
 *
 * @param browser what people call it
 */
export const enteredFromNewBrowser = ({ receiver, origin, at }: Noticed, browser: string): Letter =>
  letter('new-browser', receiver, 'Sign-in to Skewline from a new browser', [
    'someone, probably you, signed in to your account at Skewline from a browser that you have not used there for 30 days.',
    {
      facts: [
        ['When', timeWords(at)],
        ['It calls itself', browser],
      ],
    },
    'If it was not you, choose another password, which ends all other sessions, and tell a coordinator.',
    ...choice(origin),
  ]);

const ROLE_SUBJECTS = {
  given: 'You were given a role at Skewline',
  changed: 'A role of yours at Skewline was changed',
  ended: 'A role of yours at Skewline was ended',
} as const;

/** What happened to a role. */
export type RoleHappening = keyof typeof ROLE_SUBJECTS;

const ROLE_WORDS = {
  given: 'gave you a role at Skewline.',
  changed: 'changed until when you hold a role at Skewline.',
  ended: 'ended a role that you held at Skewline.',
} as const satisfies Record<RoleHappening, string>;

/** A role in words, and until when it is held (`utcText`; null for until it is taken away). */
export interface RoleTold {
  readonly role: string;
  readonly expiresAt: string | null;
}

/**
 * Tells someone what happened to a role of theirs.
 *
 * @param by the name of who did it
 */
export const roleNotice = ({ receiver, origin, at }: Noticed, what: RoleHappening, { role, expiresAt }: RoleTold, by: string): Letter =>
  letter('role', receiver, ROLE_SUBJECTS[what], [
    `${by} ${ROLE_WORDS[what]}`,
    {
      facts: [
        ['Role', role],
        ['When', timeWords(at)],
        ...(what === 'ended' ? [] : ([['Held until', expiresAt === null ? 'it is taken away' : timeWords(expiresAt)]] as const)),
      ],
    },
    ...choice(origin),
  ]);
