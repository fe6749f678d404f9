import { eq } from 'drizzle-orm';
import { type MailKind, OPTIONAL_MAILS } from '#shared/contract/mail-kinds';
import { mailsWanted, type PreferencesSaid, preferencesSaid, type PreferencesShown } from '#shared/contract/preference-routes';
import { preferences } from '#schema/schema';
import { type Db } from '../db';

const USUAL_MAILS = Object.fromEntries(OPTIONAL_MAILS.map(({ kind, usual }) => [kind, usual]));

/** What a person has said of how they like things; nothing of it is filled in, so that what is usual can change for who never said. */
export function saidBy(db: Pick<Db, 'select'>, personId: number): PreferencesSaid {
  const row = db.select({ body: preferences.body }).from(preferences).where(eq(preferences.personId, personId)).get();
  return row ? preferencesSaid.parse(JSON.parse(row.body)) : {};
}

/** How a person likes things, with what is usual where they have not said. */
export const preferencesOf = ({ theme = null, scale = null, shortcuts = null, mails }: PreferencesSaid): PreferencesShown => ({
  theme,
  scale,
  shortcuts,
  mails: mailsWanted.parse({ ...USUAL_MAILS, ...mails }),
});

/** Whether a person wants mails of a kind. */
export const wantsMail = (db: Pick<Db, 'select'>, personId: number, kind: MailKind): boolean =>
  preferencesOf(saidBy(db, personId)).mails[kind] === 'on';
