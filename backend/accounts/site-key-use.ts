import { and, eq, isNull } from 'drizzle-orm';
import { siteKeys, sites } from '#schema/schema';
import { utcText, type Ground } from '../ground';
import { newSecret, secretHash } from './secret-token';

const KEY = /^Bearer (swk_[A-Za-z0-9_-]{43})$/;
const KEY_BITS = 256;
const PREFIX_CHARACTERS = 12;
const LAST_USED_EXACT_MS = 60_000;

/** Who holds a key: one site. */
export interface SiteKeyHolder {
  readonly keyId: number;
  readonly siteId: number;
  readonly networkId: number;
}

/** A new key of a site, with what is kept of it: its hash, and its first characters to know it by. */
export function newSiteKey(): { readonly key: string; readonly prefix: string; readonly hash: Buffer } {
  const key = `swk_${newSecret(KEY_BITS)}`;
  return { key, prefix: key.slice(0, PREFIX_CHARACTERS), hash: secretHash(key) };
}

/** Whether a use of a key is to be noted: its last one was noted more than a minute ago, or never was. */
export const isUseDue = (lastUsedAt: string | null, nowMs: number): boolean =>
  lastUsedAt === null || lastUsedAt < utcText(nowMs - LAST_USED_EXACT_MS);

/**
 * The site whose key an Authorization header holds, and notes that the key was used, exact to a minute.
 *
 * @returns undefined when it is no key, an unknown one, or one that was revoked
 */
export function useSiteKey(
  authorization: string,
  { db, nowMs, noteKeyUse }: Pick<Ground, 'db' | 'nowMs' | 'noteKeyUse'>,
): SiteKeyHolder | undefined {
  const key = KEY.exec(authorization)?.[1];
  if (key === undefined) return undefined;
  const found = db
    .select({ keyId: siteKeys.id, siteId: sites.id, networkId: sites.networkId, lastUsedAt: siteKeys.lastUsedAt })
    .from(siteKeys)
    .innerJoin(sites, eq(sites.id, siteKeys.siteId))
    .where(and(eq(siteKeys.hash, secretHash(key)), isNull(siteKeys.revokedAt)))
    .get();
  if (!found) return undefined;
  const { lastUsedAt, ...holder } = found;
  if (isUseDue(lastUsedAt, nowMs())) noteKeyUse(holder.keyId);
  return holder;
}

/** Writes down that a key was used now, in the database and the log. */
export function keepKeyUse({ db, nowMs, log }: Pick<Ground, 'db' | 'nowMs' | 'log'>, keyId: number): undefined {
  db.update(siteKeys)
    .set({ lastUsedAt: utcText(nowMs()) })
    .where(eq(siteKeys.id, keyId))
    .run();
  log.info({ event: 'site-key:used', keyId }, 'a key is in use');
}
