import { and, eq, gt, isNull, lt, ne } from 'drizzle-orm';
import { people, refreshTokens, sessions } from '#schema/schema';
import { type Tx } from '../audit/change';
import { type Db } from '../db';
import { utcText, type Ground } from '../ground';
import { noteRevoked } from '../writer/commit';
import { type Claimed } from './access-token';
import { newSecret, secretHash } from './secret-token';

const REFRESH_BITS = 256;
/** How long a session lives without a refresh, and at most. */
export const IDLE_S = 7 * 24 * 3600;
const LONGEST_S = 30 * 24 * 3600;
const KEEP_ENDED_S = 30 * 24 * 3600;
const MOST_BROWSER_CHARACTERS = 200;

export type EndReason = NonNullable<(typeof sessions.$inferSelect)['endReason']>;

/** The row of a session that lives: not ended, not expired, its person not disabled. */
export function liveSession({ db, nowMs }: Pick<Ground, 'db' | 'nowMs'>, { sessionId, personId }: Claimed): Claimed | undefined {
  return db
    .select({ sessionId: sessions.id, personId: sessions.personId })
    .from(sessions)
    .innerJoin(people, eq(people.id, sessions.personId))
    .where(
      and(
        eq(sessions.id, sessionId),
        eq(sessions.personId, personId),
        isNull(sessions.endedAt),
        gt(sessions.expiresAt, utcText(nowMs())),
        isNull(people.disabledAt),
      ),
    )
    .get();
}

/** What is kept of what a browser calls itself. */
export const keptBrowser = (userAgent: string): string => userAgent.slice(0, MOST_BROWSER_CHARACTERS);

/** Begins a session and gives its first refresh token; sessions that ended a month ago are forgotten meanwhile. */
export function beginSession(tx: Tx, personId: number, browser: string, nowMs: number): { sessionId: number; refresh: string } {
  tx.delete(sessions)
    .where(lt(sessions.expiresAt, utcText(nowMs - KEEP_ENDED_S * 1000)))
    .run();
  const { sessionId } = tx
    .insert(sessions)
    .values({
      personId,
      createdAt: utcText(nowMs),
      lastUsedAt: utcText(nowMs),
      expiresAt: utcText(nowMs + LONGEST_S * 1000),
      browser: keptBrowser(browser),
    })
    .returning({ sessionId: sessions.id })
    .get();
  return { sessionId, refresh: issueRefresh(tx, sessionId, nowMs) };
}

function issueRefresh(tx: Tx, sessionId: number, nowMs: number): string {
  const refresh = newSecret(REFRESH_BITS);
  tx.insert(refreshTokens)
    .values({ sessionId, hash: secretHash(refresh), issuedAt: utcText(nowMs), expiresAt: utcText(nowMs + IDLE_S * 1000) })
    .run();
  return refresh;
}

/** What a refresh token is good for. */
export type Refreshed =
  | { readonly kind: 'renewed'; readonly personId: number; readonly sessionId: number; readonly refresh: string }
  | { readonly kind: 'refused' }
  /** It was used before: one of two holders has stolen it. */
  | { readonly kind: 'used-twice'; readonly sessionId: number };

/** Uses a refresh token up and gives the next one of its family, if its session lives. */
export function rotate(tx: Tx, refresh: string, nowMs: number): Refreshed {
  const now = utcText(nowMs);
  const found = tx
    .select({ token: refreshTokens, session: sessions, disabledAt: people.disabledAt })
    .from(refreshTokens)
    .innerJoin(sessions, eq(sessions.id, refreshTokens.sessionId))
    .innerJoin(people, eq(people.id, sessions.personId))
    .where(eq(refreshTokens.hash, secretHash(refresh)))
    .get();
  if (!found) return { kind: 'refused' };
  const { token, session, disabledAt } = found;
  if (session.endedAt !== null || session.expiresAt <= now || disabledAt !== null) return { kind: 'refused' };
  if (token.usedAt !== null) return { kind: 'used-twice', sessionId: session.id };
  if (token.expiresAt <= now) return { kind: 'refused' };
  tx.update(refreshTokens).set({ usedAt: now }).where(eq(refreshTokens.id, token.id)).run();
  tx.update(sessions).set({ lastUsedAt: now }).where(eq(sessions.id, session.id)).run();
  return { kind: 'renewed', personId: session.personId, sessionId: session.id, refresh: issueRefresh(tx, session.id, nowMs) };
}

/** The session of a refresh token, used or not. */
export function sessionOfRefresh(db: Pick<Db, 'select'>, refresh: string): number | undefined {
  return db
    .select({ sessionId: refreshTokens.sessionId })
    .from(refreshTokens)
    .where(eq(refreshTokens.hash, secretHash(refresh)))
    .get()?.sessionId;
}

/** Ends one session; says whether it was still there to end. */
export function endSession(tx: Tx, sessionId: number, reason: EndReason, nowMs: number): boolean {
  const ended = tx
    .update(sessions)
    .set({ endedAt: utcText(nowMs), endReason: reason })
    .where(and(eq(sessions.id, sessionId), isNull(sessions.endedAt)))
    .run();
  noteRevoked(tx, { kind: 'session', sessionId });
  return ended.changes > 0;
}

/** Ends all sessions of a person, or all but one; says how many there were. */
export function endSessions(tx: Tx, personId: number, reason: EndReason, nowMs: number, except?: number): number {
  noteRevoked(tx, { kind: 'person', personId });
  return tx
    .update(sessions)
    .set({ endedAt: utcText(nowMs), endReason: reason })
    .where(and(eq(sessions.personId, personId), isNull(sessions.endedAt), except === undefined ? undefined : ne(sessions.id, except)))
    .run().changes;
}
