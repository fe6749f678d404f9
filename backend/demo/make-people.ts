import { type RoleGiven } from '#shared/contract/people';
import { insertRole } from '../accounts/give-role';
import { invitePerson } from '../accounts/invite';
import { setPassword } from '../accounts/session-routes';
import { type Making } from '../networks/note-setup';
import { type DemoPerson } from './people';

/** Someone with the hash of their password. */
export interface HashedPerson {
  readonly person: DemoPerson;
  readonly passwordHash: string;
}

/** Where the people of the demo work. */
export interface Workplace {
  readonly networkId: number;
  /** The id of a site of a code. */
  readonly siteId: (code: string) => number;
}

/** Lets the demo's people in as everyone is let in, by an invitation, which each has accepted at once. */
export function makePeople({ tx, note, actor, nowMs }: Making, people: readonly HashedPerson[], place: Workplace): void {
  for (const { person, passwordHash } of people) {
    const { email, name } = person;
    const [first, ...others] = rolesOf(person, place);
    if (!first) throw new Error(`${email} of the demo has no role`);
    const { personId } = invitePerson(tx, note, { email, name, role: first }, actor, nowMs);
    setPassword(tx, personId, passwordHash, nowMs);
    note({ action: 'invitation:accepted', subjectKind: 'person', subjectId: personId, details: { by: 'demo' } });
    for (const role of others) insertRole(tx, note, personId, role, null, nowMs);
  }
}

function rolesOf({ role, sites }: DemoPerson, { networkId, siteId }: Workplace): readonly RoleGiven[] {
  if (role === 'operator') return (sites ?? []).map((code) => ({ role, networkId, siteId: siteId(code), expiresAt: null }));
  return [{ role, networkId: role === 'coordinator' ? null : networkId, siteId: null, expiresAt: null }];
}
