import { randomUUID } from 'node:crypto';
import { people, roles } from '#schema/schema';
import { type HeldRole } from '#shared/contract/roles';
import { writeAccess } from '../../backend/accounts/access-token';
import { ACCESS_COOKIE } from '../../backend/accounts/cookies';
import { beginSession } from '../../backend/accounts/sessions';
import { utcText } from '../../backend/ground';
import { type RunningApp } from './app';
import { Client } from './client';

/** A client of a new person with these roles, whose session was begun without a password. */
export function signIn({ ground, url }: Pick<RunningApp, 'ground' | 'url'>, held: readonly HeldRole[]): Client {
  const { db, nowMs } = ground;
  const at = utcText(nowMs());
  const email = `${randomUUID()}@example.org`;
  const { id: personId } = db.insert(people).values({ email, name: 'Someone', createdAt: at }).returning({ id: people.id }).get();
  for (const role of held)
    db.insert(roles)
      .values({ personId, ...role, givenAt: at })
      .run();
  const { sessionId } = db.transaction((tx) => beginSession(tx, personId, 'test', nowMs()));
  const client = new Client(url);
  client.cookies.set(ACCESS_COOKIE, writeAccess({ personId, sessionId }, ground));
  return client;
}
