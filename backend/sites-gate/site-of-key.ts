import { and, desc, eq, isNull, sql } from 'drizzle-orm';
import { networks, siteKeys, sites, siteVersions } from '#schema/schema';
import { secretHash } from '../accounts/secret-token';
import { type Ground } from '../ground';

const MOST_KEY_CHARACTERS = 100;

/** The site that a key stands for, as the database has it now. */
export interface SiteOfKey {
  readonly keyId: number;
  readonly siteId: number;
  readonly networkId: number;
  readonly site: string;
  readonly network: string;
  /** As it was noted last, UTC; null for never. */
  readonly lastUsedAt: string | null;
}

/** Looks up a key, with the site and network that it is for; or says in words why it may not stream. */
export type KeyReader = (key: string) => SiteOfKey | string;

/** Makes a reader of keys, whose query is prepared once: it is asked at every message. */
export function keyReader(db: Ground['db']): KeyReader {
  const find = db
    .select({
      keyId: siteKeys.id,
      siteId: sites.id,
      networkId: networks.id,
      site: sites.code,
      network: networks.code,
      lastUsedAt: siteKeys.lastUsedAt,
      revokedAt: siteKeys.revokedAt,
      siteClosedAt: sites.closedAt,
      networkClosedAt: networks.closedAt,
    })
    .from(siteKeys)
    .innerJoin(sites, eq(sites.id, siteKeys.siteId))
    .innerJoin(networks, eq(networks.id, sites.networkId))
    .where(eq(siteKeys.hash, sql.placeholder('hash')))
    .prepare();
  return (key) => {
    const found = key.length <= MOST_KEY_CHARACTERS ? find.get({ hash: secretHash(key) }) : undefined;
    // A key that never was and one that was revoked look alike.
    if (found?.revokedAt !== null) return 'The key is unknown here, or was revoked: ask a coordinator or the operator of the site for one.';
    const { keyId, siteId, networkId, site, network, lastUsedAt, siteClosedAt, networkClosedAt } = found;
    if (siteClosedAt !== null) return `The site ${found.site} is closed: it takes no more records.`;
    if (networkClosedAt !== null) return `The network ${found.network} is closed: it takes no more records.`;
    return { keyId, siteId, networkId, site, network, lastUsedAt };
  };
}

/** The scale of a site's readings by its latest version in force; UTC where it has none yet. */
export const scaleOfSite = (db: Ground['db'], siteId: number): string =>
  db
    .select({ scale: siteVersions.scale })
    .from(siteVersions)
    .where(and(eq(siteVersions.siteId, siteId), isNull(siteVersions.supersededAt)))
    .orderBy(desc(siteVersions.fromTaiS), desc(siteVersions.fromPs))
    .limit(1)
    .get()?.scale ?? 'UTC';
