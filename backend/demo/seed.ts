import { count } from 'drizzle-orm';
import { problemOf, valueOf, type Outcome } from '#shared/outcome';
import { networks, people } from '#schema/schema';
import { makeSiteKey } from '../accounts/make-site-key';
import { refuseWeakPassword } from '../accounts/password-rules';
import { change } from '../audit/change';
import { type Config } from '../config';
import { type Db } from '../db';
import { utcText, type Ground } from '../ground';
import { leapSecondsInForce } from '../tables/leap-seconds-in-force';
import { taiOf } from '../tables/present';
import { hasDemoFile, keepDemoFile } from './demo-file';
import { newDemoPassword } from './demo-password';
import { makeDemoNetwork } from './make-network';
import { makePeople } from './make-people';
import { PEOPLE } from './people';
import { HISTORY_S } from './scenario';
import { SLICE_S } from './stream/plan';

const SERVER = { kind: 'server', id: null, requestId: null } as const;

/** Whether a database has neither people nor networks, so that nobody's things are touched. */
const isEmpty = (db: Pick<Db, 'select'>): boolean =>
  [people, networks].every((table) => db.select({ rows: count() }).from(table).get()?.rows === 0);

/**
 * Puts the demo into an empty database, in one transaction: network, sites, clocks, frames, rules, people, keys. Passwords and keys are new
 * ones, and kept in `demo.json` of the data folder. A database that holds anyone or any network is left as it is.
 *
 * @param ground with the writing connection
 * @param config the data folder, and whether there is to be a demo
 * @returns whether it was put in now; or, in production, the problem of a data folder that has been a demo's
 */
export async function seedDemo(ground: Ground, { dataDir, production, demo }: DemoConfig): Promise<Outcome<boolean>> {
  if (production && hasDemoFile(dataDir))
    return problemOf(
      'configuration',
      'DATA_DIR',
      `DATA_DIR=${JSON.stringify(dataDir)} cannot be used: it holds a demo (demo.json), whose accounts production must not have; it must be another folder.`,
    );
  return valueOf(demo && !production && isEmpty(ground.db) && (await seed(ground, dataDir)));
}

type DemoConfig = Pick<Config, 'dataDir' | 'production' | 'demo'>;

async function seed(ground: Ground, dataDir: string): Promise<boolean> {
  const accounts: { person: (typeof PEOPLE)[number]; password: string; passwordHash: string }[] = [];
  for (const person of PEOPLE) {
    const password = newDemoPassword();
    refuseWeakPassword(password, person);
    accounts.push({ person, password, passwordHash: await ground.passwords.hash(password) });
  }
  return change(ground, SERVER, (tx, note) => {
    const nowMs = ground.nowMs();
    const making = { tx, note, actor: SERVER, nowMs };
    const { taiS } = taiOf(nowMs, leapSecondsInForce(tx));
    const firstTaiS = Math.floor(taiS / SLICE_S) * SLICE_S - HISTORY_S;
    const { networkId, siteIds } = makeDemoNetwork(making, firstTaiS);
    const siteId = (code: string): number => siteIds.get(code) ?? NO_SITE;
    makePeople(making, accounts, { networkId, siteId });
    const keys = [...siteIds].map(([code, id]): [string, string] => {
      const { key } = makeSiteKey(tx, note, { siteId: id, label: 'The stream of the demo', createdBy: null }, nowMs);
      return [code, key];
    });
    note({ action: 'demo:made', subjectKind: 'network', subjectId: networkId, networkId });
    // Last of all, so that passwords are kept before the accounts are there for good, and not when anything failed.
    keepDemoFile(dataDir, {
      deploymentId: ground.deploymentId,
      firstTaiS,
      madeAt: utcText(nowMs),
      people: accounts.map(({ person: { role, email }, password }) => ({ role, email, password })),
      keys: Object.fromEntries(keys),
    });
    return true;
  });
}

const NO_SITE = 0; // refused by whatever is asked for it
