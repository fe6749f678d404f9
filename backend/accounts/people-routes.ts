import { and, eq, isNull, sql } from 'drizzle-orm';
import { PEOPLE_ROUTES } from '#shared/contract/people-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { DEPLOYMENT, type Place } from '#shared/contract/roles';
import { people, roles } from '#schema/schema';
import { pageFrom } from '../api/page';
import { absent, conflict, stale } from '../api/refusal';
import { personOf, serve, type Asked, type Served } from '../api/serve';
import { change } from '../audit/change';
import { type Db } from '../db';
import { utcText, type Ground } from '../ground';
import { invitation, invitationLink } from '../mail/letters';
import { noteRevoked } from '../writer/commit';
import { actorOf } from './actor';
import { insertRole, refusePast } from './give-role';
import { invitePerson } from './invite';
import { issueMailedToken, voidMailedTokens } from './mailed-tokens';
import { othersCoordinate, peopleAfter, personOfId, rowOf } from './people-rows';
import { ROLE_COLUMNS } from './roles-of';
import { endSessions } from './sessions';
import { tellOfRole } from './tell';

/** What coordinators do with people and their roles. */
export const peopleRoutes = (): Served[] => [
  serve(PEOPLE_ROUTES.listPeople, {
    handle: ({ query: { cursor = 0, limit = USUAL_ITEMS } }, { db, nowMs }) =>
      pageFrom(peopleAfter(db, cursor, limit + 1, nowMs()), limit, ({ id }) => id),
  }),
  serve(PEOPLE_ROUTES.readPerson, { handle: ({ params: { personId } }, { db, nowMs }) => personOfId(db, personId, nowMs()) }),
  serve(PEOPLE_ROUTES.invite, {
    placeIn: ({ body: { role } }) => placeOfRole(role.networkId),
    handle: (asked, ground) => {
      const { db, nowMs, origin, post } = ground;
      const actor = actorOf(asked);
      const { email, name } = asked.body;
      const { personId, token } = change(ground, actor, (tx, note) => invitePerson(tx, note, asked.body, actor, nowMs()));
      post(invitation({ personId, email, name }, invitationLink(origin, token)));
      return personOfId(db, personId, nowMs());
    },
  }),
  serve(PEOPLE_ROUTES.inviteAgain, {
    handle: (asked, ground) => {
      const { nowMs, origin, post } = ground;
      const { personId } = asked.params;
      const { token, email, name } = change(ground, actorOf(asked), (tx, note) => {
        const row = rowOf(tx, personId);
        if (row.passwordHash !== null || row.disabledAt !== null)
          throw conflict('Only someone who has not accepted yet can be invited again.');
        note({ action: 'person:invited-again', subjectKind: 'person', subjectId: personId });
        return { ...row, token: issueMailedToken(tx, 'invitation', personId, personOf(asked).personId, nowMs()) };
      });
      post(invitation({ personId, email, name }, invitationLink(origin, token)));
      return undefined;
    },
  }),
  serve(PEOPLE_ROUTES.disablePerson, { placeOf: () => DEPLOYMENT, handle: (asked, ground) => setDisabled(asked, ground, true) }),
  serve(PEOPLE_ROUTES.enablePerson, { placeOf: () => DEPLOYMENT, handle: (asked, ground) => setDisabled(asked, ground, false) }),
  serve(PEOPLE_ROUTES.giveRole, {
    placeIn: ({ body: { networkId } }) => placeOfRole(networkId),
    handle: (asked, ground) => {
      const { personId: by } = personOf(asked);
      const { personId } = asked.params;
      const given = change(ground, actorOf(asked), (tx, note) => {
        rowOf(tx, personId);
        return insertRole(tx, note, personId, asked.body, by, ground.nowMs());
      });
      tellOfRole(ground, { personId, by }, 'given', given);
      return given;
    },
  }),
  serve(PEOPLE_ROUTES.changeRole, {
    placeOf: ({ params: { roleId } }, { db }) => placeOfHeld(db, roleId),
    handle: (asked, ground) => {
      const { personId: by } = personOf(asked);
      const { before, changed } = change(ground, actorOf(asked), (tx, note) => {
        const { expiresAt, version } = asked.body;
        refusePast(expiresAt, ground.nowMs());
        const before = heldRow(tx, asked.params.roleId);
        const { personId, networkId, role, id } = before;
        if (expiresAt !== null && networkId === null) refuseLast(tx, personId);
        const [changed] = tx
          .update(roles)
          .set({ expiresAt, version: sql`${roles.version} + 1` })
          .where(and(eq(roles.id, id), eq(roles.version, version)))
          .returning(ROLE_COLUMNS)
          .all();
        if (!changed) throw stale();
        noteRevoked(tx, { kind: 'role', personId });
        note({ action: 'role:changed', subjectKind: 'person', subjectId: personId, networkId, details: { roleId: id, role, expiresAt } });
        return { before, changed };
      });
      if (changed.expiresAt !== before.expiresAt) tellOfRole(ground, { personId: before.personId, by }, 'changed', changed);
      return changed;
    },
  }),
  serve(PEOPLE_ROUTES.takeRole, {
    placeOf: ({ params: { roleId } }, { db }) => placeOfHeld(db, roleId),
    handle: (asked, ground) => {
      const { personId: by } = personOf(asked);
      const ended = change(ground, actorOf(asked), (tx, note) => {
        const held = heldRow(tx, asked.params.roleId);
        const { personId, networkId, siteId, role, id } = held;
        if (networkId === null) refuseLast(tx, personId);
        const taken = tx
          .update(roles)
          .set({ takenAt: utcText(ground.nowMs()), takenBy: by, version: sql`${roles.version} + 1` })
          .where(and(eq(roles.id, id), eq(roles.version, asked.body.version)))
          .run();
        if (taken.changes === 0) throw stale();
        noteRevoked(tx, { kind: 'role', personId });
        note({ action: 'role:taken', subjectKind: 'person', subjectId: personId, networkId, details: { roleId: id, role, siteId } });
        return held;
      });
      tellOfRole(ground, { personId: ended.personId, by }, 'ended', ended);
      return undefined;
    },
  }),
];

/** A role at a site is given by who coordinates its network. */
const placeOfRole = (networkId: number | null): Place => (networkId === null ? DEPLOYMENT : { kind: 'network', networkId });

const findHeld = (db: Pick<Db, 'select'>, roleId: number) =>
  db
    .select()
    .from(roles)
    .where(and(eq(roles.id, roleId), isNull(roles.takenAt)))
    .get();

function placeOfHeld(db: Db, roleId: number): Place | undefined {
  const row = findHeld(db, roleId);
  return row && placeOfRole(row.networkId);
}

function heldRow(db: Pick<Db, 'select'>, roleId: number) {
  const row = findHeld(db, roleId);
  if (!row) throw absent();
  return row;
}

function refuseLast(db: Pick<Db, 'select'>, personId: number): void {
  if (!othersCoordinate(db, personId))
    throw conflict('Nobody else coordinates the deployment for good: give someone that role first, and let them accept it.');
}

type VersionAsked = Asked<{ readonly personId: number }, unknown, { readonly version: number }>;

/** Disabling ends every session and link of the person at once; what they did, and their roles, stay on record. */
function setDisabled(asked: VersionAsked, ground: Ground, disabled: boolean) {
  const { personId } = asked.params;
  const nowMs = ground.nowMs();
  change(ground, actorOf(asked), (tx, note) => {
    const row = rowOf(tx, personId);
    if (row.version !== asked.body.version) throw stale();
    if ((row.disabledAt !== null) === disabled) throw conflict(disabled ? 'They are disabled already.' : 'They are not disabled.');
    if (disabled) refuseLast(tx, personId);
    tx.update(people)
      .set({ disabledAt: disabled ? utcText(nowMs) : null, version: row.version + 1 })
      .where(eq(people.id, personId))
      .run();
    if (disabled) {
      endSessions(tx, personId, 'disabled', nowMs);
      voidMailedTokens(tx, personId, nowMs);
    }
    note({ action: disabled ? 'person:disabled' : 'person:enabled', subjectKind: 'person', subjectId: personId });
  });
  return personOfId(ground.db, personId, nowMs);
}
