import { and, eq, isNull } from 'drizzle-orm';
import { siteKeys, sites } from '#schema/schema';
import { absent, conflict } from '../api/refusal';
import { type Note, type Tx } from '../audit/change';
import { utcText } from '../ground';
import { openNetwork } from '../networks/network-rows';
import { newSiteKey } from './site-key-use';

const MOST_LIVE_KEYS = 20;

/** What is shown of a key. */
export const SITE_KEY_COLUMNS = {
  id: siteKeys.id,
  label: siteKeys.label,
  prefix: siteKeys.prefix,
  createdAt: siteKeys.createdAt,
  lastUsedAt: siteKeys.lastUsedAt,
  revokedAt: siteKeys.revokedAt,
};

/** Which site a key is for, what its maker calls it, and who makes it; null for the program itself. */
export interface KeyValues {
  readonly siteId: number;
  readonly label: string;
  readonly createdBy: number | null;
}

/**
 * Makes a key of a site.
 *
 * @returns what is shown of it, and the key itself, which is kept nowhere
 * @throws Refusal for a site that does not exist, is closed, or has as many keys as it may
 */
export function makeSiteKey(tx: Tx, note: (note: Note) => void, { siteId, label, createdBy }: KeyValues, nowMs: number) {
  const site = tx.select({ networkId: sites.networkId, closedAt: sites.closedAt }).from(sites).where(eq(sites.id, siteId)).get();
  if (!site) throw absent();
  openNetwork(tx, site.networkId);
  if (site.closedAt !== null) throw conflict('The site is closed: it takes no more records, and no keys.');
  const live = tx
    .select({ id: siteKeys.id })
    .from(siteKeys)
    .where(and(eq(siteKeys.siteId, siteId), isNull(siteKeys.revokedAt)))
    .all();
  if (live.length >= MOST_LIVE_KEYS) throw conflict(`The site has ${MOST_LIVE_KEYS} keys: revoke one first.`);
  const { key, prefix, hash } = newSiteKey();
  const made = tx
    .insert(siteKeys)
    .values({ siteId, label, prefix, hash, createdAt: utcText(nowMs), createdBy })
    .returning(SITE_KEY_COLUMNS)
    .get();
  const { networkId } = site;
  note({ action: 'site-key:made', subjectKind: 'site', subjectId: siteId, networkId, details: { keyId: made.id, prefix } });
  return { ...made, key };
}
