import { and, asc, eq, isNull } from 'drizzle-orm';
import { rolesAt, type HeldRole, type Place } from '#shared/contract/roles';
import { clocks, sites, siteVersions } from '#schema/schema';
import { type Caller } from '../api/caller';
import { type Db } from '../db';

type Rows = Pick<Db, 'select' | 'selectDistinct'>;

/** No site has this id: what lies there belongs to no operator. */
const NO_SITE = 0;

/** The sites that keep time by a clock, by a state that is in force. */
export const sitesByClock = (db: Rows, clockId: number): number[] =>
  db
    .selectDistinct({ id: siteVersions.siteId })
    .from(siteVersions)
    .innerJoin(sites, eq(sites.id, siteVersions.siteId))
    .where(and(eq(siteVersions.clockId, clockId), isNull(siteVersions.supersededAt)))
    .orderBy(asc(siteVersions.siteId))
    .all()
    .map(({ id }) => id);

/**
 * Where a clock lies: at the sites that keep time by it, so that an operator of any of them has it and no other operator does.
 *
 * @returns undefined when there is none of this id
 */
export function placeOfClock(db: Rows, clockId: number, caller: Caller): Place | undefined {
  const row = db.select({ networkId: clocks.networkId }).from(clocks).where(eq(clocks.id, clockId)).get();
  if (!row) return undefined;
  const { networkId } = row;
  const held = caller.kind === 'person' ? caller.held : [];
  const at = sitesByClock(db, clockId);
  const own = at.find((siteId) => operates(held, networkId, siteId));
  return { kind: 'site', networkId, siteId: own ?? at[0] ?? NO_SITE };
}

/**
 * Whether someone may have a site keep time by a clock: an operator by one of their own sites' or one that no site keeps, since whose site
 * keeps time by a clock edits its record; whoever coordinates the network by any.
 */
export function mayKeepTimeBy(db: Rows, held: readonly HeldRole[], networkId: number, clockId: number): boolean {
  if (rolesAt(held, { kind: 'site', networkId, siteId: NO_SITE }).includes('coordinator')) return true;
  const at = sitesByClock(db, clockId);
  return at.length === 0 || at.some((siteId) => operates(held, networkId, siteId));
}

const operates = (held: readonly HeldRole[], networkId: number, siteId: number): boolean =>
  rolesAt(held, { kind: 'site', networkId, siteId }).includes('operator');
