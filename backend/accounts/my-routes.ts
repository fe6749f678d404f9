import { and, desc, eq, gt, isNull, lt, sql } from 'drizzle-orm';
import { MY_ROUTES } from '#shared/contract/people-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { people, sessions } from '#schema/schema';
import { pageFrom } from '../api/page';
import { absent, Refusal, stale } from '../api/refusal';
import { personOf, serve, type Asked, type Served } from '../api/serve';
import { change } from '../audit/change';
import { utcText, type Ground } from '../ground';
import { passwordChanged } from '../mail/notices';
import { actorOf } from './actor';
import { clearCookies } from './cookies';
import { refuseWeakPassword } from './password-rules';
import { meOf, rowOf } from './people-rows';
import { setPassword } from './session-routes';
import { endSession, endSessions } from './sessions';
import { tell } from './tell';
import { countAttempt } from './throttle';

/** What everyone does with their own account. */
export const myRoutes = (): Served[] => [
  serve(MY_ROUTES.readMe, { handle: (asked, { db, nowMs }) => meOf(db, personOf(asked).personId, nowMs()) }),
  serve(MY_ROUTES.changeMe, {
    handle: (asked, ground) => {
      const { personId } = personOf(asked);
      const { name, version } = asked.body;
      change(ground, actorOf(asked), (tx, note) => {
        const changed = tx
          .update(people)
          .set({ name, version: sql`${people.version} + 1` })
          .where(and(eq(people.id, personId), eq(people.version, version)))
          .run();
        if (changed.changes === 0) throw stale();
        note({ action: 'me:changed', subjectKind: 'person', subjectId: personId });
      });
      return meOf(ground.db, personId, ground.nowMs());
    },
  }),
  serve(MY_ROUTES.changeMyPassword, { handle: changeMyPassword }),
  serve(MY_ROUTES.listMySessions, {
    handle: (asked, { db, nowMs }) => {
      const { personId, sessionId } = personOf(asked);
      const { cursor, limit = USUAL_ITEMS } = asked.query;
      const found = db
        .select({
          id: sessions.id,
          browser: sessions.browser,
          createdAt: sessions.createdAt,
          lastUsedAt: sessions.lastUsedAt,
          expiresAt: sessions.expiresAt,
        })
        .from(sessions)
        .where(
          and(
            eq(sessions.personId, personId),
            isNull(sessions.endedAt),
            gt(sessions.expiresAt, utcText(nowMs())),
            cursor === undefined ? undefined : lt(sessions.id, cursor),
          ),
        )
        .orderBy(desc(sessions.id))
        .limit(limit + 1)
        .all();
      return pageFrom(
        found.map((one) => ({ ...one, current: one.id === sessionId })),
        limit,
        ({ id }) => id,
      );
    },
  }),
  serve(MY_ROUTES.endMySession, {
    handle: (asked, ground) => {
      const { personId } = personOf(asked);
      const { sessionId } = asked.params;
      change(ground, actorOf(asked), (tx, note) => {
        const mine = tx.select({ personId: sessions.personId }).from(sessions).where(eq(sessions.id, sessionId)).get();
        if (mine?.personId !== personId || !endSession(tx, sessionId, 'ended-elsewhere', ground.nowMs())) throw absent();
        note({ action: 'session:ended', subjectKind: 'session', subjectId: sessionId, details: { reason: 'ended-elsewhere' } });
      });
      return undefined;
    },
  }),
  serve(MY_ROUTES.signOutEverywhere, {
    handle: (asked, ground) => {
      const { personId } = personOf(asked);
      change(ground, actorOf(asked), (tx, note) => {
        const sessionsEnded = endSessions(tx, personId, 'signed-out', ground.nowMs());
        note({ action: 'my-sessions:ended', subjectKind: 'person', subjectId: personId, details: { sessionsEnded } });
      });
      clearCookies(asked.exchange);
      return undefined;
    },
  }),
];

type PasswordAsked = Asked<unknown, unknown, { readonly current: string; readonly password: string }>;

/** The session that asks lives on; all others of the person end. */
async function changeMyPassword(asked: PasswordAsked, ground: Ground): Promise<undefined> {
  const { db, nowMs, passwords } = ground;
  const { personId, sessionId } = personOf(asked);
  const { current, password } = asked.body;
  const row = rowOf(db, personId);
  refuseWeakPassword(password, row);
  const giveBack = countAttempt(ground, { kind: 'account', of: row.email });
  let passwordHash: string;
  try {
    if (!(await passwords.matches(row.passwordHash, current)))
      throw new Refusal(403, 'Not allowed', 'This is not the password.', { where: 'current' });
    passwordHash = await passwords.hash(password);
    giveBack();
  } catch (fault) {
    if (!(fault instanceof Refusal) || fault.status !== 403) giveBack();
    throw fault;
  }
  change(ground, actorOf(asked), (tx, note) => {
    if (rowOf(tx, personId).passwordHash !== row.passwordHash) throw stale();
    setPassword(tx, personId, passwordHash, nowMs());
    const sessionsEnded = endSessions(tx, personId, 'new-password', nowMs(), sessionId);
    note({ action: 'my-password:changed', subjectKind: 'person', subjectId: personId, details: { by: 'password', sessionsEnded } });
  });
  tell(ground, personId, (noticed) => passwordChanged(noticed, 'password'));
  return undefined;
}
