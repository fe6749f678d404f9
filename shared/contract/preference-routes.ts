import * as z from 'zod';
import { SCALES } from '../time/scales';
import { oneOf, record } from './leaves';
import { MAIL_KINDS } from './mail-kinds';
import { route } from './routes';

/** Colours: as the system has them, or always the one. */
export const THEMES = ['system', 'light', 'dark'] as const;
export type Theme = (typeof THEMES)[number];

export const SWITCH = ['on', 'off'] as const;
export type Switch = (typeof SWITCH)[number];

/** How a person likes things shown, in whatever browser they sign in; null where they have not said. */
const showing = z.strictObject({
  theme: z.enum(THEMES).nullable(),
  /** The scale in which instants are printed. */
  scale: z.enum(SCALES).nullable(),
  /** Whether single keys act. */
  shortcuts: z.enum(SWITCH).nullable(),
});

/** Some of the optional mails, each wanted or not. */
const mailsSaid = z.partialRecord(z.enum(MAIL_KINDS), oneOf(...SWITCH), {
  error: ({ code }: { readonly code?: string }) =>
    code === 'unrecognized_keys' ? `known here: ${MAIL_KINDS.join(', ')}` : 'an object { }',
});

/** All optional mails, each wanted or not: as the person said, or as is usual. */
export const mailsWanted = z.record(z.enum(MAIL_KINDS), z.enum(SWITCH));

/** How a person likes things. */
const preferences = showing.extend({ mails: mailsWanted });

/** What a person has said of it. */
export const preferencesSaid = showing.extend({ mails: mailsSaid }).partial();

/** What is absent stays as it is. Each choice stands for itself and the last one holds, so that none names a version that it saw. */
export const PREFERENCE_ROUTES = {
  readMyPreferences: route('GET', '/me/preferences', { policy: 'my-preferences:read', answer: preferences }),
  changeMyPreferences: route('PATCH', '/me/preferences', {
    policy: 'my-preferences:change',
    body: record({
      theme: oneOf(...THEMES).optional(),
      scale: oneOf(...SCALES).optional(),
      shortcuts: oneOf(...SWITCH).optional(),
      mails: mailsSaid.optional(),
    }),
    answer: preferences,
  }),
};

export type Showing = z.infer<typeof showing>;
export type PreferencesShown = z.infer<typeof preferences>;
export type PreferencesSaid = z.infer<typeof preferencesSaid>;
