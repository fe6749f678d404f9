import { type KeyObject } from 'node:crypto';
import { type Logger } from 'pino';
import { type PasswordHasher } from './accounts/password-hash';
import { type AuditHead } from './audit/audit-head';
import { type Db } from './db';
import { type Letter } from './mail/letters';
import { type Searcher } from './search/searcher';
import { type CommitListener } from './writer/commit';

/**
 * What the server's parts stand on: made once at the start of a thread, handed down, never looked up. The writer thread's has everything; in
 * the HTTP thread the database can only be read, and what is the writer's throws.
 */
export interface Ground {
  readonly db: Db;
  readonly log: Logger;
  /** The server's own clock, in milliseconds since 1970 (UTC). */
  readonly nowMs: () => number;
  readonly version: string;
  readonly production: boolean;
  /** The random id of the database, which is the issuer of its tokens. */
  readonly deploymentId: string;
  /** Where browsers find the server: scheme, host and port. */
  readonly origin: string;
  readonly trustedProxies: readonly string[];
  /** Signs the tokens of sessions. */
  readonly signingKey: KeyObject;
  /** Keeps when a site's key was last used, exact to a minute. */
  readonly noteKeyUse: (keyId: number) => void;
  readonly passwords: PasswordHasher;
  readonly auditHead: AuditHead;
  /** Hears, in the writer thread, of each commit that noted a change of a network or a revocation; what comes back ends it. */
  readonly onCommitted: (listener: CommitListener) => () => void;
  /** Runs what no index answers by itself, in threads of its own. */
  readonly searcher: Searcher;
  /** Sends a letter in its own time; what becomes of it is in the log. */
  readonly post: (letter: Letter) => void;
  /** Whether mails stay here, in the demo's own mail server. */
  readonly keepsMails: boolean;
}

/** An instant of the server's clock as it stands in the database and in answers: UTC, ISO 8601 with milliseconds. */
export const utcText = (ms: number): string => new Date(ms).toISOString();
