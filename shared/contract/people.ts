import * as z from 'zod';
import { record, text } from './leaves';
import { ROLES } from './roles';

export const LEAST_PASSWORD_CHARACTERS = 12;
export const MOST_PASSWORD_CHARACTERS = 128;
const MOST_PASSWORD_UNITS = 4 * MOST_PASSWORD_CHARACTERS; // before it is normalized, which can only take place on what is short
const MOST_EMAIL_CHARACTERS = 254; // RFC 5321
const MOST_NAME_CHARACTERS = 200;
const MOST_LABEL_CHARACTERS = 100;

/** Control characters, lone surrogates, line ends, and marks that turn the direction of what follows: none belongs into one line of text. */
export const NOT_IN_A_LINE = /[\p{Cc}\p{Cs}\u2028\u2029\u061c\u200e\u200f\u202a-\u202e\u2066-\u2069]/u;

/** One line of text without spaces at its ends, of 1 to a number of characters. */
export const line = (most: number) => {
  const right = `1 to ${most} characters on one line, without control characters`;
  return text(right)
    .transform((given) => given.trim())
    .refine((given) => given.length >= 1 && given.length <= most && !NOT_IN_A_LINE.test(given), right);
};

/** An instant as UTC with milliseconds, such as 2027-03-01T00:00:00.000Z. */
export const utc = () => z.iso.datetime({ precision: 3, error: 'an instant such as "2027-03-01T00:00:00.000Z"' });

const EMAIL_RIGHT = `an e-mail address, at most ${MOST_EMAIL_CHARACTERS} characters`;
const EMAIL = /^[^\s@,;:<>()[\]\\"\p{C}]+@[^\s@,;:<>()[\]\\"\p{C}]+$/u;

/** An e-mail address, in lower case whatever was typed. */
export const email = () =>
  text(EMAIL_RIGHT)
    .transform((given) => given.trim().toLowerCase())
    .refine((given) => given.length <= MOST_EMAIL_CHARACTERS && EMAIL.test(given), EMAIL_RIGHT);

/** A password as it counts: one form of each character (NFKC), so that keyboards that compose differently agree. */
export const normalPassword = (given: string): string => given.normalize('NFKC');

const characters = (given: string): number => Array.from(given).length;
const PASSWORD_RIGHT = `${LEAST_PASSWORD_CHARACTERS} to ${MOST_PASSWORD_CHARACTERS} characters`;

/** A new password: 12 to 128 characters of any kind. Which are too common is judged by the server. */
export const newPassword = () =>
  text(PASSWORD_RIGHT)
    .refine((given) => given.length <= MOST_PASSWORD_UNITS, { error: PASSWORD_RIGHT, abort: true })
    .refine((given) => {
      const count = characters(normalPassword(given));
      return count >= LEAST_PASSWORD_CHARACTERS && count <= MOST_PASSWORD_CHARACTERS;
    }, PASSWORD_RIGHT);

const GIVEN_PASSWORD_RIGHT = `at most ${MOST_PASSWORD_CHARACTERS} characters`;

/** A password that is tried: longer than any that exists, it is not even compared. */
export const givenPassword = () =>
  text(GIVEN_PASSWORD_RIGHT).refine((given) => given.length >= 1 && given.length <= MOST_PASSWORD_UNITS, GIVEN_PASSWORD_RIGHT);

/** The token of a mailed link: 128 random bits in base64url. */
export const mailedToken = () => z.string({ error: 'the token of the link' }).regex(/^[A-Za-z0-9_-]{22}$/, 'the token of the link');

/** A role and its place, as it is given to someone: a network for all but the deployment's coordinator, a site for an operator. */
export const roleGiven = record({
  role: z.enum(ROLES, { error: `one of ${ROLES.map((role) => `"${role}"`).join(', ')}` }),
  networkId: z.int({ error: 'the id of a network, or null' }).positive('the id of a network, or null').nullable(),
  siteId: z.int({ error: 'the id of a site, or null' }).positive('the id of a site, or null').nullable(),
  /** Null for until it is taken. */
  expiresAt: utc().nullable(),
})
  .refine(({ role, networkId }) => networkId !== null || role === 'coordinator', {
    path: ['networkId'],
    error: 'the id of a network: only a coordinator can be one of the whole deployment',
  })
  .refine(({ role, siteId }) => (siteId !== null) === (role === 'operator'), {
    path: ['siteId'],
    error: 'the id of a site for an operator, and null for every other role',
  });

/** A role as someone holds it. */
export const roleHeld = z.strictObject({
  id: z.int(),
  role: z.enum(ROLES),
  networkId: z.int().nullable(),
  siteId: z.int().nullable(),
  givenAt: utc(),
  expiresAt: utc().nullable(),
  version: z.int(),
});

/** The one who is signed in. */
export const me = z.strictObject({
  id: z.int(),
  email: z.string(),
  name: z.string(),
  roles: z.array(roleHeld),
  version: z.int(),
});

/** Someone as coordinators see them. */
export const person = me.extend({
  state: z.enum(['invited', 'active', 'disabled']),
  createdAt: utc(),
});

/** One sign-in in one browser; `current` for the one that asks. */
export const session = z.strictObject({
  id: z.int(),
  browser: z.string(),
  createdAt: utc(),
  lastUsedAt: utc(),
  expiresAt: utc(),
  current: z.boolean(),
});

/** A site's key as it is shown: its first characters, never more. */
export const siteKey = z.strictObject({
  id: z.int(),
  label: z.string(),
  prefix: z.string(),
  createdAt: utc(),
  lastUsedAt: utc().nullable(),
  revokedAt: utc().nullable(),
});

export const personName = () => line(MOST_NAME_CHARACTERS);
export const keyLabel = () => line(MOST_LABEL_CHARACTERS);
export const version = () => z.int({ error: 'the version that you saw' }).positive('the version that you saw');
/** A body that says nothing but what was seen of that which is to be changed. */
export const versionSeen = () => record({ version: version() });

export type Me = z.infer<typeof me>;
export type Person = z.infer<typeof person>;
export type RoleGiven = z.infer<typeof roleGiven>;
export type RoleHeld = z.infer<typeof roleHeld>;
export type Session = z.infer<typeof session>;
export type SiteKey = z.infer<typeof siteKey>;
