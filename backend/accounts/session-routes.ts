import { eq } from 'drizzle-orm';
import { browserWords } from '#shared/contract/browser-words';
import { SESSION_ROUTES } from '#shared/contract/people-routes';
import { people } from '#schema/schema';
import { callerOf } from '../api/caller';
import { Refusal } from '../api/refusal';
import { serve, type Asked, type Served } from '../api/serve';
import { change, type Tx } from '../audit/change';
import { utcText, type Ground } from '../ground';
import { reset, resetLink } from '../mail/letters';
import { enteredFromNewBrowser, passwordChanged } from '../mail/notices';
import { ACCESS_S, writeAccess, type Claimed } from './access-token';
import { personAsActor, serverAsActor } from './actor';
import { ACCESS_COOKIE, clearCookies, cookieOf, REFRESH_COOKIE, setCookie } from './cookies';
import { isNewBrowser } from './known-browser';
import { holderOfMailedToken, issueMailedToken, voidMailedTokens, type Purpose } from './mailed-tokens';
import { isWeak } from './password-hash';
import { refuseWeakPassword } from './password-rules';
import { meOf } from './people-rows';
import { beginSession, endSession, endSessions, IDLE_S, keptBrowser, rotate, sessionOfRefresh } from './sessions';
import { tell } from './tell';
import { countAttempt, forgive } from './throttle';

type AnyAsked = Asked<unknown, unknown, unknown>;

/** Signing in and out, and the links that are mailed. */
export const sessionRoutes = (): Served[] => [
  serve(SESSION_ROUTES.signIn, { handle: signIn }),
  serve(SESSION_ROUTES.refresh, { handle: refresh }),
  serve(SESSION_ROUTES.signOut, { handle: signOut }),
  serve(SESSION_ROUTES.askReset, { handle: askReset }),
  serve(SESSION_ROUTES.acceptInvitation, { handle: (asked, ground) => choosePassword('invitation', asked, ground) }),
  serve(SESSION_ROUTES.useReset, { handle: (asked, ground) => choosePassword('reset', asked, ground) }),
];

/** One answer for an account that does not exist, has no password yet or is disabled, and for a wrong password. */
const notSignedIn = (): Refusal => new Refusal(401, 'Not signed in', 'No account has this e-mail address and password.');

async function signIn(asked: AnyAsked & { body: { email: string; password: string } }, ground: Ground) {
  const { db, nowMs, log, passwords } = ground;
  const { email, password } = asked.body;
  const account = { kind: 'account', of: email } as const;
  const giveBack = countAttempt(ground, account, { kind: 'address', of: asked.exchange.ip });
  const known = db.select().from(people).where(eq(people.email, email)).get();
  const stored = known?.disabledAt === null ? known.passwordHash : null;
  let matches: boolean;
  try {
    matches = await passwords.matches(stored, password);
  } catch (fault) {
    giveBack();
    throw fault;
  }
  if (!matches || !known || stored === null) {
    log.info({ event: 'session:refused', personId: known?.id ?? null, requestId: asked.exchange.requestId }, 'sign-in refused');
    throw notSignedIn();
  }
  giveBack();
  forgive(ground, account);
  const stronger = isWeak(stored) ? await passwords.hash(password) : undefined;
  const personId = known.id;
  const userAgent = asked.exchange.header('user-agent') ?? '';
  const {
    sessionId,
    refresh: token,
    isNew,
  } = change(ground, personAsActor(personId, asked), (tx, note) => {
    // What was true before the hash was computed must still be: neither a disabled person nor an old password gets in.
    const now = tx.select().from(people).where(eq(people.id, personId)).get();
    if (now?.passwordHash !== stored || now.disabledAt !== null) throw notSignedIn();
    if (stronger !== undefined) tx.update(people).set({ passwordHash: stronger }).where(eq(people.id, personId)).run();
    const isNew = isNewBrowser(tx, now, userAgent, nowMs());
    const begun = beginSession(tx, personId, userAgent, nowMs());
    note({ action: 'session:begun', subjectKind: 'session', subjectId: begun.sessionId });
    return { ...begun, isNew };
  });
  giveCookies(asked, ground, { personId, sessionId }, token);
  if (isNew) tell(ground, personId, (noticed) => enteredFromNewBrowser(noticed, browserWords(keptBrowser(userAgent))));
  return meOf(db, personId, nowMs());
}

function giveCookies({ exchange }: AnyAsked, ground: Ground, claimed: Claimed, refreshToken: string): void {
  setCookie(exchange, ACCESS_COOKIE, writeAccess(claimed, ground), ACCESS_S);
  setCookie(exchange, REFRESH_COOKIE, refreshToken, IDLE_S);
}

function refresh(asked: AnyAsked, ground: Ground) {
  const { db, nowMs } = ground;
  const token = cookieOf(asked.exchange, REFRESH_COOKIE);
  const refreshed =
    token === undefined ? ({ kind: 'refused' } as const) : db.transaction((tx) => rotate(tx, token, nowMs()), { behavior: 'immediate' });
  if (refreshed.kind === 'renewed') {
    giveCookies(asked, ground, refreshed, refreshed.refresh);
    return meOf(db, refreshed.personId, nowMs());
  }
  if (refreshed.kind === 'used-twice')
    change(ground, serverAsActor(asked), (tx, note) => {
      endSession(tx, refreshed.sessionId, 'token-used-twice', nowMs());
      note({ action: 'session:revoked', subjectKind: 'session', subjectId: refreshed.sessionId, details: { reason: 'token-used-twice' } });
    });
  clearCookies(asked.exchange);
  throw new Refusal(401, 'Not signed in', 'The session has ended: sign in again.');
}

function signOut(asked: AnyAsked, ground: Ground): undefined {
  const { exchange } = asked;
  const caller = callerOf(exchange, ground);
  const token = cookieOf(exchange, REFRESH_COOKIE);
  const sessionId = caller.kind === 'person' ? caller.sessionId : token === undefined ? undefined : sessionOfRefresh(ground.db, token);
  if (sessionId !== undefined)
    change(ground, caller.kind === 'person' ? personAsActor(caller.personId, asked) : serverAsActor(asked), (tx, note) => {
      const ended = endSession(tx, sessionId, 'signed-out', ground.nowMs());
      note({ action: 'session:ended', subjectKind: 'session', subjectId: sessionId, details: { reason: 'signed-out', ended } });
    });
  clearCookies(exchange);
  return undefined;
}

/** Answers before it looks whether there is such an account: neither the answer nor its time tells. */
function askReset(asked: AnyAsked & { body: { email: string } }, ground: Ground): undefined {
  const { email } = asked.body;
  countAttempt(ground, { kind: 'reset-account', of: email }, { kind: 'reset-address', of: asked.exchange.ip });
  const actor = serverAsActor(asked);
  const { db, log, nowMs, origin, post } = ground;
  setImmediate(() => {
    try {
      const known = db.select().from(people).where(eq(people.email, email)).get();
      if (known?.disabledAt !== null || known.passwordHash === null) return;
      const token = change(ground, actor, (tx, note) => {
        note({ action: 'reset:asked', subjectKind: 'person', subjectId: known.id });
        return issueMailedToken(tx, 'reset', known.id, null, nowMs());
      });
      post(reset({ personId: known.id, email, name: known.name }, resetLink(origin, token)));
    } catch (fault) {
      log.error({ err: fault, requestId: actor.requestId }, 'no link for a new password was made');
    }
  });
  return undefined;
}

const linkVoid = (): Refusal =>
  new Refusal(400, 'Link not usable', 'The link was used, has expired or was replaced by a newer one: ask for another.', {
    where: 'token',
  });

async function choosePassword(
  purpose: Purpose,
  asked: AnyAsked & { body: { token: string; password: string } },
  ground: Ground,
): Promise<undefined> {
  const { db, nowMs, passwords } = ground;
  const { token, password } = asked.body;
  const giveBack = countAttempt(ground, { kind: 'token-address', of: asked.exchange.ip });
  const holder = holderOfMailedToken(db, purpose, token, nowMs());
  if (!holder) throw linkVoid();
  giveBack();
  refuseWeakPassword(password, holder);
  const passwordHash = await passwords.hash(password);
  const { personId, email } = holder;
  change(ground, personAsActor(personId, asked), (tx, note) => {
    if (!holderOfMailedToken(tx, purpose, token, nowMs())) throw linkVoid();
    setPassword(tx, personId, passwordHash, nowMs());
    const sessionsEnded = endSessions(tx, personId, 'new-password', nowMs());
    note({
      action: purpose === 'invitation' ? 'invitation:accepted' : 'my-password:changed',
      subjectKind: 'person',
      subjectId: personId,
      details: { by: purpose, sessionsEnded },
    });
  });
  forgive(ground, { kind: 'account', of: email });
  if (purpose === 'reset') tell(ground, personId, (noticed) => passwordChanged(noticed, 'reset'));
  return undefined;
}

/** Sets a password, and makes every link void that could set another. */
export function setPassword(tx: Tx, personId: number, passwordHash: string, nowMs: number): void {
  voidMailedTokens(tx, personId, nowMs);
  tx.update(people)
    .set({ passwordHash, passwordSetAt: utcText(nowMs) })
    .where(eq(people.id, personId))
    .run();
}
