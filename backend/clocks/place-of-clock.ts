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

/** Who looks at a clock: the person and what they hold. */
export interface Looker {
  readonly personId: number;
  readonly held: readonly HeldRole[];
}

/**
 * Where a clock lies: at the sites that keep time by it, so that an operator of any of them has it and no other operator does. One that no
 * site keeps time by lies with the operator who made it, at a site of theirs.
 *
 * @returns undefined when there is none of this id
 */
export function placeOfClock(db: Rows, clockId: number, caller: Caller): Place | undefined {
  const row = db.select({ networkId: clocks.networkId, createdBy: clocks.createdBy }).from(clocks).where(eq(clocks.id, clockId)).get();
  if (!row) return undefined;
  const { networkId } = row;
  const at = sitesByClock(db, clockId);
  const own = caller.kind === 'person' ? ownSiteOf(caller, row, at) : undefined;
  return { kind: 'site', networkId, siteId: own ?? at[0] ?? NO_SITE };
}

/** Whether someone sees a clock of which it is known who made it and which sites keep time by it. */
export const seesClock = (
  looker: Looker,
  clock: Pick<typeof clocks.$inferSelect, 'networkId' | 'createdBy'>,
  at: readonly number[],
): boolean =>
  rolesAt(looker.held, { kind: 'site', networkId: clock.networkId, siteId: ownSiteOf(looker, clock, at) ?? NO_SITE }).length > 0;

/**
 * Whether someone may have a site keep time by a clock: an operator by one of their own sites', or by one that they made and no site keeps
 * time by, since whose site keeps time by a clock edits its record; whoever coordinates the network by any.
 */
export function mayKeepTimeBy(db: Rows, looker: Looker, networkId: number, clockId: number): boolean {
  if (rolesAt(looker.held, { kind: 'site', networkId, siteId: NO_SITE }).includes('coordinator')) return true;
  const row = db.select({ networkId: clocks.networkId, createdBy: clocks.createdBy }).from(clocks).where(eq(clocks.id, clockId)).get();
  return row?.networkId === networkId && ownSiteOf(looker, row, sitesByClock(db, clockId)) !== undefined;
}

/** A site that someone operates and through which they have a clock. */
function ownSiteOf(
  { personId, held }: Looker,
  { networkId, createdBy }: Pick<typeof clocks.$inferSelect, 'networkId' | 'createdBy'>,
  at: readonly number[],
): number | undefined {
  const operated = held.flatMap((one) =>
    one.role === 'operator' && one.networkId === networkId && one.siteId !== null ? [one.siteId] : [],
  );
  if (at.length > 0) return at.find((siteId) => operated.includes(siteId));
  return createdBy === personId ? operated[0] : undefined;
}
