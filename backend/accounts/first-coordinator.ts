import { and, eq, isNull } from 'drizzle-orm';
import { people, roles } from '#schema/schema';
import { change } from '../audit/change';
import { utcText, type Ground } from '../ground';
import { invitationLink } from '../mail/letters';
import { invitePerson } from './invite';
import { issueMailedToken } from './mailed-tokens';

const COMMAND = { kind: 'command', id: null, requestId: null } as const;

/**
 * Lets the first coordinator of a deployment in, once: from when a coordinator of the whole deployment has chosen a password, all others are
 * invited by those who are in. Until then it may be run again, for the same person or another, and makes the former link void.
 *
 * @param ground database, clock and origin
 * @param email in lower case
 * @param name how they are called
 * @returns the link at which they choose a password; undefined when there is a coordinator already
 */
export function inviteFirstCoordinator(
  ground: Pick<Ground, 'db' | 'log' | 'nowMs' | 'auditHead' | 'origin'>,
  email: string,
  name: string,
): string | undefined {
  const token = change(ground, COMMAND, (tx, note) => {
    const nowMs = ground.nowMs();
    const coordinators = tx
      .select({ personId: people.id, email: people.email, passwordHash: people.passwordHash, roleId: roles.id })
      .from(roles)
      .innerJoin(people, eq(people.id, roles.personId))
      .where(and(eq(roles.role, 'coordinator'), isNull(roles.networkId), isNull(roles.takenAt)))
      .all();
    if (coordinators.some(({ passwordHash }) => passwordHash !== null)) {
      note({ action: 'first-coordinator:refused', subjectKind: 'deployment', subjectId: 1 });
      return undefined;
    }
    for (const { personId, roleId, email: known } of coordinators) {
      if (known === email) {
        note({ action: 'person:invited-again', subjectKind: 'person', subjectId: personId });
        return issueMailedToken(tx, 'invitation', personId, null, nowMs);
      }
      tx.update(roles)
        .set({ takenAt: utcText(nowMs) })
        .where(eq(roles.id, roleId))
        .run();
      tx.update(people)
        .set({ disabledAt: utcText(nowMs) })
        .where(eq(people.id, personId))
        .run();
      note({ action: 'role:taken', subjectKind: 'person', subjectId: personId, details: { roleId, role: 'coordinator' } });
    }
    const role = { role: 'coordinator', networkId: null, siteId: null, expiresAt: null } as const;
    return invitePerson(tx, note, { email, name, role }, COMMAND, nowMs).token;
  });
  return token === undefined ? undefined : invitationLink(ground.origin, token);
}
