import * as z from 'zod';
import { SCALES } from '../time/scales';
import { oneOf, record } from './leaves';
import { route } from './routes';

/** Colours: as the system has them, or always the one. */
export const THEMES = ['system', 'light', 'dark'] as const;
export type Theme = (typeof THEMES)[number];

export const SWITCH = ['on', 'off'] as const;
export type Switch = (typeof SWITCH)[number];

/** How a person likes things, in whatever browser they sign in; null where they have not said. */
export const preferences = z.strictObject({
  theme: z.enum(THEMES).nullable(),
  /** The scale in which instants are printed. */
  scale: z.enum(SCALES).nullable(),
  /** Whether single keys act. */
  shortcuts: z.enum(SWITCH).nullable(),
});

/** What is absent stays as it is. Each choice stands for itself and the last one holds, so that none names a version that it saw. */
export const PREFERENCE_ROUTES = {
  readMyPreferences: route('GET', '/me/preferences', { policy: 'my-preferences:read', answer: preferences }),
  changeMyPreferences: route('PATCH', '/me/preferences', {
    policy: 'my-preferences:change',
    body: record({
      theme: oneOf(...THEMES).optional(),
      scale: oneOf(...SCALES).optional(),
      shortcuts: oneOf(...SWITCH).optional(),
    }),
    answer: preferences,
  }),
};

export type PreferencesShown = z.infer<typeof preferences>;
