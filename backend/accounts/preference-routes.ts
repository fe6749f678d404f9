import { eq, sql } from 'drizzle-orm';
import { PREFERENCE_ROUTES, preferences as preferencesForm, type PreferencesShown } from '#shared/contract/preference-routes';
import { preferences } from '#schema/schema';
import { personOf, serve, type Served } from '../api/serve';
import { change } from '../audit/change';
import { type Db } from '../db';
import { actorOf } from './actor';

const NOT_SAID: PreferencesShown = { theme: null, scale: null, shortcuts: null };

/** How everyone likes things. */
export const preferenceRoutes = (): Served[] => [
  serve(PREFERENCE_ROUTES.readMyPreferences, { handle: (asked, { db }) => preferencesOf(db, personOf(asked).personId) }),
  serve(PREFERENCE_ROUTES.changeMyPreferences, {
    handle: (asked, ground) => {
      const { personId } = personOf(asked);
      return change(ground, actorOf(asked), (tx, note) => {
        const changed = { ...preferencesOf(tx, personId), ...asked.body };
        const body = JSON.stringify(changed);
        tx.insert(preferences)
          .values({ personId, body })
          .onConflictDoUpdate({ target: preferences.personId, set: { body, version: sql`${preferences.version} + 1` } })
          .run();
        note({ action: 'my-preferences:changed', subjectKind: 'person', subjectId: personId, details: asked.body });
        return changed;
      });
    },
  }),
];

function preferencesOf(db: Pick<Db, 'select'>, personId: number): PreferencesShown {
  const row = db.select({ body: preferences.body }).from(preferences).where(eq(preferences.personId, personId)).get();
  return row ? { ...NOT_SAID, ...preferencesForm.partial().parse(JSON.parse(row.body)) } : NOT_SAID;
}
