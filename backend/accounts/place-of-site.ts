import { eq } from 'drizzle-orm';
import { type Place } from '#shared/contract/roles';
import { sites } from '#schema/schema';
import { type Db } from '../db';

/** Where a site lies; undefined when there is none of this id. */
export function placeOfSite(db: Pick<Db, 'select'>, siteId: number): Place | undefined {
  const row = db.select({ networkId: sites.networkId }).from(sites).where(eq(sites.id, siteId)).get();
  return row && { kind: 'site', networkId: row.networkId, siteId };
}
