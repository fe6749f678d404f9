import { eq } from 'drizzle-orm';
import { type RoleGiven } from '#shared/contract/people';
import { people } from '#schema/schema';
import { conflict } from '../api/refusal';
import { type Actor, type Note, type Tx } from '../audit/change';
import { utcText } from '../ground';
import { insertRole } from './give-role';
import { issueMailedToken } from './mailed-tokens';

/** Who is invited. */
export interface Invited {
  readonly email: string;
  readonly name: string;
  readonly role: RoleGiven;
}

/** Writes down a new person with a first role and an invitation, whose token comes back. */
export function invitePerson(
  tx: Tx,
  note: (note: Note) => void,
  { email, name, role }: Invited,
  actor: Actor,
  nowMs: number,
): { personId: number; token: string } {
  if (tx.select({ id: people.id }).from(people).where(eq(people.email, email)).get())
    throw conflict('Someone has this e-mail address already: give them a role instead.');
  const givenBy = actor.kind === 'person' ? actor.id : null;
  const { personId } = tx
    .insert(people)
    .values({ email, name, createdAt: utcText(nowMs) })
    .returning({ personId: people.id })
    .get();
  note({ action: 'person:invited', subjectKind: 'person', subjectId: personId, networkId: role.networkId });
  insertRole(tx, note, personId, role, givenBy, nowMs, 'role.');
  return { personId, token: issueMailedToken(tx, 'invitation', personId, givenBy, nowMs) };
}
