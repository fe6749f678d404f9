import { sql } from 'drizzle-orm';
import { PREFERENCE_ROUTES } from '#shared/contract/preference-routes';
import { preferences } from '#schema/schema';
import { personOf, serve, type Served } from '../api/serve';
import { change } from '../audit/change';
import { actorOf } from './actor';
import { preferencesOf, saidBy } from './preference-rows';

/** How everyone likes things. */
export const preferenceRoutes = (): Served[] => [
  serve(PREFERENCE_ROUTES.readMyPreferences, { handle: (asked, { db }) => preferencesOf(saidBy(db, personOf(asked).personId)) }),
  serve(PREFERENCE_ROUTES.changeMyPreferences, {
    handle: (asked, ground) => {
      const { personId } = personOf(asked);
      const { mails = {}, ...shown } = asked.body;
      return change(ground, actorOf(asked), (tx, note) => {
        const before = saidBy(tx, personId);
        const said = { ...before, ...shown, mails: { ...before.mails, ...mails } };
        const body = JSON.stringify(said);
        tx.insert(preferences)
          .values({ personId, body })
          .onConflictDoUpdate({ target: preferences.personId, set: { body, version: sql`${preferences.version} + 1` } })
          .run();
        const ofMails = Object.fromEntries(Object.entries(mails).map(([kind, wanted]) => [`mails.${kind}`, wanted]));
        note({ action: 'my-preferences:changed', subjectKind: 'person', subjectId: personId, details: { ...shown, ...ofMails } });
        return preferencesOf(said);
      });
    },
  }),
];
