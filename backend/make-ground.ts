import { type Logger } from 'pino';
import { problemOf, valueOf, type Outcome } from '#shared/outcome';
import { passwordHasher } from './accounts/password-hash';
import { newSecret } from './accounts/secret-token';
import { signingKey } from './accounts/signing-key';
import { keepKeyUse } from './accounts/site-key-use';
import { auditHeadIn } from './audit/audit-head';
import { type Config } from './config';
import { type Db } from './db';
import { ensureDeployment } from './deployment';
import { type Ground } from './ground';
import { startDemoMailServer } from './mail/demo-mail-server';
import { postOffice } from './mail/post-office';
import { makeSearcher } from './search/searcher';
import { onCommitted } from './writer/commit';

const NOBODYS_BITS = 256;

/** What the ground is made from. */
export interface Sources {
  readonly config: Config;
  readonly db: Db;
  readonly log: Logger;
  readonly version: string;
  /** The port that is listened on, for the origin where none is configured. */
  readonly port: number;
  readonly nowMs: () => number;
}

/** The ground, and how to leave it: mails on their way are sent or given up. */
export interface Standing {
  readonly ground: Ground;
  readonly leave: () => Promise<void>;
}

/** The origin of a server that was told none. */
export const originOf = ({ publicOrigin }: Pick<Config, 'publicOrigin'>, port: number): string =>
  publicOrigin ?? `http://localhost:${port}`;

/**
 * Makes what the writer stands on: the key of sessions, the hasher, the way to the mail server (the demo's own where none is configured).
 *
 * @returns the ground, or the problem of a secret that cannot be used
 */
export async function makeGround({ config, db, log, version, port, nowMs }: Sources): Promise<Outcome<Standing>> {
  const key = signingKey(config);
  if (!key.ok) return problemOf(key.problem.code, key.problem.where, key.problem.text);
  const auditHead = auditHeadIn(config.dataDir);
  const demoMail = config.smtpUrl === undefined ? await startDemoMailServer(db, log, nowMs) : undefined;
  const origin = originOf(config, port);
  const from = config.mailFrom ?? `Skewline <skewline@${new URL(origin).hostname}>`;
  const office = postOffice(config.smtpUrl ?? demoMail?.smtpUrl ?? '', from, log);
  const searcher = makeSearcher(db.$client.name);
  const ground: Ground = {
    db,
    log,
    nowMs,
    version,
    production: config.production,
    deploymentId: ensureDeployment(db, version).id,
    origin,
    trustedProxies: config.trustedProxies,
    signingKey: key.value,
    noteKeyUse: (keyId) => keepKeyUse({ db, nowMs, log }, keyId),
    passwords: await passwordHasher(newSecret(NOBODYS_BITS)),
    auditHead,
    onCommitted: (listener) => onCommitted(db, listener),
    searcher,
    post: office.post,
    keepsMails: demoMail !== undefined,
  };
  const leave = async (): Promise<void> => {
    await searcher.close();
    await office.close();
    await demoMail?.close();
  };
  return valueOf({ ground, leave });
}
