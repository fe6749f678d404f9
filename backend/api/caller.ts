import { type RoleHeld } from '#shared/contract/people';
import { type Asker } from '#shared/contract/policies';
import { readAccess } from '../accounts/access-token';
import { ACCESS_COOKIE, cookieOf } from '../accounts/cookies';
import { rolesOf } from '../accounts/roles-of';
import { liveSession } from '../accounts/sessions';
import { useSiteKey, type SiteKeyHolder } from '../accounts/site-key-use';
import { type Ground } from '../ground';
import { type Exchange } from './exchange';

export interface PersonCalling {
  readonly kind: 'person';
  readonly personId: number;
  readonly sessionId: number;
  readonly held: readonly RoleHeld[];
}

/** Who sent a request. */
export type Caller = Extract<Asker, { kind: 'nobody' }> | PersonCalling | (SiteKeyHolder & { readonly kind: 'site-key' });

/** Who shows nothing, or nothing that holds. */
export const NOBODY = { kind: 'nobody' } as const;

/**
 * Who sent a request, as the database has it now: a session that ended, a person who was disabled and a key that was revoked are nobody at
 * once. A site's key comes in Authorization and is never a person; a request with both is by the key.
 */
export function callerOf(exchange: Exchange, ground: Ground): Caller {
  const authorization = exchange.header('authorization');
  if (authorization !== undefined) {
    const holder = useSiteKey(authorization, ground);
    return holder ? { kind: 'site-key', ...holder } : NOBODY;
  }
  const claimed = readAccess(cookieOf(exchange, ACCESS_COOKIE), ground);
  const session = claimed && liveSession(ground, claimed);
  if (!session) return NOBODY;
  return {
    kind: 'person',
    personId: session.personId,
    sessionId: session.sessionId,
    held: rolesOf(ground.db, session.personId, ground.nowMs()),
  };
}
