import { and, eq, gt, isNull, or } from 'drizzle-orm';
import { type RoleHeld } from '#shared/contract/people';
import { roles } from '#schema/schema';
import { type Db } from '../db';
import { utcText } from '../ground';

/** The columns of a role as its holder and coordinators see it. */
export const ROLE_COLUMNS = {
  id: roles.id,
  role: roles.role,
  networkId: roles.networkId,
  siteId: roles.siteId,
  givenAt: roles.givenAt,
  expiresAt: roles.expiresAt,
  version: roles.version,
};

/** The condition of a role that holds at an instant of the server's clock. */
export const holdsAt = (nowMs: number) => and(isNull(roles.takenAt), or(isNull(roles.expiresAt), gt(roles.expiresAt, utcText(nowMs))));

/** The roles that a person holds now: given, not taken, not expired. */
export function rolesOf(db: Pick<Db, 'select'>, personId: number, nowMs: number): RoleHeld[] {
  return db
    .select(ROLE_COLUMNS)
    .from(roles)
    .where(and(eq(roles.personId, personId), holdsAt(nowMs)))
    .orderBy(roles.id)
    .all();
}
