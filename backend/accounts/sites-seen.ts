import { rolesAt } from '#shared/contract/roles';
import { type Caller } from '../api/caller';

/**
 * Whose events someone sees in a network: an operator those of their own sites, everyone else with a role there all.
 *
 * @returns the ids of the sites, or undefined for all of them
 */
export function sitesSeen(caller: Caller, networkId: number): readonly number[] | undefined {
  if (caller.kind !== 'person') return [];
  const roles = rolesAt(caller.held, { kind: 'network', networkId });
  if (roles.some((role) => role !== 'operator')) return undefined;
  const own = caller.held.flatMap((held) => (held.networkId === networkId && held.siteId !== null ? [held.siteId] : []));
  return [...new Set(own)];
}

/** Those of the sites that are asked for which are seen; undefined for all. */
export function sitesShown(seen: readonly number[] | undefined, asked: readonly number[] | undefined): readonly number[] | undefined {
  if (asked === undefined || seen === undefined) return asked ?? seen;
  return asked.filter((id) => seen.includes(id));
}
