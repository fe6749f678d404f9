import { type HeldRole } from '#shared/contract/roles';
import { ACCESS_S, readAccess, type Claimed } from '../accounts/access-token';
import { ACCESS_COOKIE, cookieOf } from '../accounts/cookies';
import { utcText, type Ground } from '../ground';

/** Who is at the other end of a socket, as the database has it now. */
export interface SessionNow extends Claimed {
  readonly held: readonly HeldRole[];
}

/** Looks up sessions by statements that are prepared once: it is asked at every message, and of every socket twice a second. */
export interface SessionLook {
  /** The session that a request's cookie shows; undefined for none that holds. */
  readonly shown: (cookie: string | undefined) => SessionNow | undefined;
  /**
   * The same session later: ended, expired, of a person who is disabled, or not renewed since its last token expired, it is undefined. A
   * socket shows its token but once, so when the session was last renewed stands for it.
   */
  readonly again: (claimed: Claimed) => SessionNow | undefined;
}

/** Makes the look-up. */
export function sessionLook(ground: Pick<Ground, 'db' | 'nowMs' | 'signingKey' | 'deploymentId'>): SessionLook {
  const { db, nowMs } = ground;
  const live = db.$client
    .prepare<[number, number, string], string>(
      `SELECT s.last_used_at FROM sessions s JOIN people p ON p.id = s.person_id
       WHERE s.id = ? AND s.person_id = ? AND s.ended_at IS NULL AND s.expires_at > ? AND p.disabled_at IS NULL`,
    )
    .pluck();
  const roles = db.$client.prepare<[number, string], HeldRole>(
    `SELECT role, network_id AS networkId, site_id AS siteId FROM roles
     WHERE person_id = ? AND taken_at IS NULL AND (expires_at IS NULL OR expires_at > ?) ORDER BY id`,
  );
  const again = ({ personId, sessionId }: Claimed): SessionNow | undefined => {
    const now = nowMs();
    const renewedAt = live.get(sessionId, personId, utcText(now));
    if (renewedAt === undefined || Date.parse(renewedAt) + ACCESS_S * 1000 <= now) return undefined;
    return { personId, sessionId, held: roles.all(personId, utcText(now)) };
  };
  return {
    shown: (cookie) => {
      const header = (name: string): string | undefined => (name === 'cookie' ? cookie : undefined);
      const claimed = readAccess(cookieOf({ header }, ACCESS_COOKIE), ground);
      return claimed && again(claimed);
    },
    again,
  };
}
