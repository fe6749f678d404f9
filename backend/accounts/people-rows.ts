import { and, asc, eq, gt, inArray, isNotNull, isNull, ne } from 'drizzle-orm';
import { type Me, type Person, type RoleHeld } from '#shared/contract/people';
import { people, roles } from '#schema/schema';
import { absent } from '../api/refusal';
import { type Db } from '../db';
import { holdsAt, ROLE_COLUMNS, rolesOf } from './roles-of';

type PersonRow = typeof people.$inferSelect;
type Rows = Pick<Db, 'select'>;

/** Someone as they see themselves. */
export function meOf(db: Rows, personId: number, nowMs: number): Me {
  const { id, email, name, version } = rowOf(db, personId);
  return { id, email, name, version, roles: rolesOf(db, personId, nowMs) };
}

/** Whether there is anyone who has chosen a password. */
export const hasPeople = (db: Rows): boolean =>
  db.select({ id: people.id }).from(people).where(isNotNull(people.passwordHash)).limit(1).get() !== undefined;

/** The row of a person; refused as absent when there is none. */
export function rowOf(db: Rows, personId: number): PersonRow {
  const row = db.select().from(people).where(eq(people.id, personId)).get();
  if (!row) throw absent();
  return row;
}

/** Someone as coordinators see them. */
export const personOfId = (db: Rows, personId: number, nowMs: number): Person => shown(rowOf(db, personId), rolesOf(db, personId, nowMs));

/** People in the order in which they came, from behind an id on. */
export function peopleAfter(db: Rows, afterId: number, most: number, nowMs: number): Person[] {
  const rows = db.select().from(people).where(gt(people.id, afterId)).orderBy(asc(people.id)).limit(most).all();
  const held = db
    .select({ personId: roles.personId, ...ROLE_COLUMNS })
    .from(roles)
    .where(
      and(
        inArray(
          roles.personId,
          rows.map(({ id }) => id),
        ),
        holdsAt(nowMs),
      ),
    )
    .orderBy(roles.id)
    .all();
  return rows.map((row) =>
    shown(
      row,
      held.filter(({ personId }) => personId === row.id).map(({ personId: _of, ...role }) => role),
    ),
  );
}

function shown(row: PersonRow, held: RoleHeld[]): Person {
  const { id, email, name, version, createdAt, disabledAt, passwordHash } = row;
  const state = disabledAt !== null ? 'disabled' : passwordHash === null ? 'invited' : 'active';
  return { id, email, name, version, createdAt, state, roles: held };
}

/**
 * Whether someone but this person coordinates the whole deployment for good: is not disabled, has a password, and holds the role without an
 * end. Without such a one nobody could give roles any more.
 */
export function othersCoordinate(db: Rows, personId: number): boolean {
  const found = db
    .select({ id: people.id })
    .from(roles)
    .innerJoin(people, eq(people.id, roles.personId))
    .where(
      and(
        eq(roles.role, 'coordinator'),
        isNull(roles.networkId),
        isNull(roles.takenAt),
        isNull(roles.expiresAt),
        ne(people.id, personId),
        isNull(people.disabledAt),
        isNotNull(people.passwordHash),
      ),
    )
    .limit(1)
    .get();
  return found !== undefined;
}
