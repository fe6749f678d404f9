import { and, eq, isNotNull, isNull, lte } from 'drizzle-orm';
import { type RoleGiven, type RoleHeld } from '#shared/contract/people';
import { networks, roles, sites } from '#schema/schema';
import { absent, conflict, unusable } from '../api/refusal';
import { type Note, type Tx } from '../audit/change';
import { utcText } from '../ground';
import { ROLE_COLUMNS } from './roles-of';

/**
 * Gives a person a role at a place that exists; one that they hold already, or an end that is past, is refused.
 *
 * @param path of the role in the request, with its dot, for what goes wrong
 */
export function insertRole(
  tx: Tx,
  note: (note: Note) => void,
  personId: number,
  given: RoleGiven,
  givenBy: number | null,
  nowMs: number,
  path = '',
): RoleHeld {
  refusePlace(tx, given, path);
  refusePast(given.expiresAt, nowMs, path);
  const { role, networkId, siteId, expiresAt } = given;
  // One that has run out is in nobody's way: it is dated as taken, so that it can be given anew.
  tx.update(roles)
    .set({ takenAt: utcText(nowMs) })
    .where(and(eq(roles.personId, personId), isNull(roles.takenAt), isNotNull(roles.expiresAt), lte(roles.expiresAt, utcText(nowMs))))
    .run();
  const same = tx
    .select({ id: roles.id })
    .from(roles)
    .where(
      and(
        eq(roles.personId, personId),
        eq(roles.role, role),
        networkId === null ? isNull(roles.networkId) : eq(roles.networkId, networkId),
        siteId === null ? isNull(roles.siteId) : eq(roles.siteId, siteId),
        isNull(roles.takenAt),
      ),
    )
    .get();
  if (same) throw conflict('They hold this role there already.');
  const held = tx
    .insert(roles)
    .values({ personId, role, networkId, siteId, expiresAt, givenAt: utcText(nowMs), givenBy })
    .returning(ROLE_COLUMNS)
    .get();
  note({
    action: 'role:given',
    subjectKind: 'person',
    subjectId: personId,
    networkId,
    details: { roleId: held.id, role, siteId, expiresAt },
  });
  return held;
}

/** Refuses an end that is not ahead. */
export function refusePast(expiresAt: string | null, nowMs: number, path = ''): void {
  if (expiresAt !== null && expiresAt <= utcText(nowMs))
    throw unusable({ where: `${path}expiresAt`, text: `is "${expiresAt}"; it must be an instant ahead, or null` });
}

function refusePlace(tx: Tx, { networkId, siteId }: RoleGiven, path: string): void {
  if (networkId === null) return;
  if (!tx.select({ id: networks.id }).from(networks).where(eq(networks.id, networkId)).get()) throw absent();
  if (siteId === null) return;
  const site = tx
    .select({ id: sites.id })
    .from(sites)
    .where(and(eq(sites.id, siteId), eq(sites.networkId, networkId)))
    .get();
  if (!site) throw unusable({ where: `${path}siteId`, text: `is ${siteId}; it must be the id of a site of this network` });
}
