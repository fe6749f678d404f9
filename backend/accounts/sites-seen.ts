import { type HeldRole, rolesAt } from '#shared/contract/roles';
import { type Caller } from '../api/caller';

/**
 * Whose events someone sees in a network: an operator those of their own sites, everyone else with a role there all.
 *
 * @returns the ids of the sites, or undefined for all of them
 */
export function sitesSeen(caller: Caller, networkId: number): readonly number[] | undefined {
  return caller.kind === 'person' ? ownSites(caller.held, networkId) : [];
}

/** The same for the roles that someone holds. */
export function ownSites(held: readonly HeldRole[], networkId: number): readonly number[] | undefined {
  const roles = rolesAt(held, { kind: 'network', networkId });
  if (roles.some((role) => role !== 'operator')) return undefined;
  const own = held.flatMap((one) => (one.networkId === networkId && one.siteId !== null ? [one.siteId] : []));
  return [...new Set(own)];
}

/** Those of the sites that are asked for which are seen; undefined for all. */
export function sitesShown(seen: readonly number[] | undefined, asked: readonly number[] | undefined): readonly number[] | undefined {
  if (asked === undefined || seen === undefined) return asked ?? seen;
  return asked.filter((id) => seen.includes(id));
}
