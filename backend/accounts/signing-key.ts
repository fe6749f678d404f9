import { createSecretKey, randomBytes, type KeyObject } from 'node:crypto';
import { chmodSync, existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { problemOf, valueOf, type Outcome } from '#shared/outcome';
import { type Config } from '../config';
import { keepFile } from '../keep-file';

const LEAST_BYTES = 32;
const NEW_BYTES = 48;
const OWNER_ONLY_FILE = 0o600;

/**
 * The key that signs the tokens of sessions: SESSION_SECRET, or the file `session-secret` of the data folder, which is made when it is
 * absent, but not in production: there a lost file must be noticed.
 *
 * @param config where it is looked for
 * @returns the key, or the problem of a secret that is absent or shorter than 32 bytes
 */
export function signingKey(config: Pick<Config, 'dataDir' | 'production' | 'sessionSecret'>): Outcome<KeyObject> {
  if (config.sessionSecret !== undefined) return valueOf(createSecretKey(config.sessionSecret, 'utf8'));
  const file = join(config.dataDir, 'session-secret');
  if (!existsSync(file)) {
    if (config.production)
      return problemOf(
        'configuration',
        'SESSION_SECRET',
        `SESSION_SECRET is absent, and so is ${file}: one of them must hold a secret of at least ${LEAST_BYTES} bytes in production.`,
      );
    keepFile(file, `${randomBytes(NEW_BYTES).toString('base64')}\n`);
  }
  chmodSync(file, OWNER_ONLY_FILE);
  const secret = readFileSync(file, 'utf8').trim();
  const bytes = Buffer.byteLength(secret, 'utf8');
  if (bytes < LEAST_BYTES)
    return problemOf(
      'configuration',
      'session-secret',
      `${file} holds ${bytes} bytes: it must hold a secret of at least ${LEAST_BYTES} bytes.`,
    );
  return valueOf(createSecretKey(secret, 'utf8'));
}
