import { inArray } from 'drizzle-orm';
import { people } from '#schema/schema';
import { type Db } from '../db';
import { type DemoFile } from './demo-file';

const ROLE_WIDTH = 12;
const EMAIL_WIDTH = 28;

/**
 * Who can sign in to the demo, for whoever started it: role, e-mail address and password of each account, a line each.
 *
 * @param demo what the data folder holds
 * @param db tells whose password is another by now
 */
export function greeting({ people: accounts, madeAt }: DemoFile, db: Pick<Db, 'select'>): string {
  const emails = accounts.map(({ email }) => email);
  const rows = db.select({ email: people.email, since: people.passwordSetAt }).from(people).where(inArray(people.email, emails)).all();
  const sinceOf = new Map(rows.map(({ email, since }) => [email, since]));
  const lines = accounts.map(({ role, email, password }) => {
    const isOld = sinceOf.get(email) !== madeAt;
    return `  ${role.padEnd(ROLE_WIDTH)}${email.padEnd(EMAIL_WIDTH)}${isOld ? '(has another password by now)' : password}\n`;
  });
  return `The demo's accounts (role, e-mail, password):\n${lines.join('')}`;
}
