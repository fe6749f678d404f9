/** What a person may be: a coordinator runs it, an analyst builds candidates, a reviewer confirms them, an operator feeds one site. */
export const ROLES = ['coordinator', 'analyst', 'reviewer', 'operator'] as const;

export type Role = (typeof ROLES)[number];

/**
 * A role and where it is held: a coordinator in a network, or in the whole deployment (no network); an operator at one site of a network;
 * every other in a network.
 */
export interface HeldRole {
  readonly role: Role;
  readonly networkId: number | null;
  readonly siteId: number | null;
}

/** Where something lies that a person asks for: the deployment itself, one of its networks, or a site of a network. */
export type Place =
  | { readonly kind: 'deployment' }
  | { readonly kind: 'network'; readonly networkId: number }
  | { readonly kind: 'site'; readonly networkId: number; readonly siteId: number };

/** The place of what belongs to no network. */
export const DEPLOYMENT: Place = { kind: 'deployment' };

/** Whether someone coordinates the whole deployment, and with it every network. */
export const coordinatesAll = (held: readonly HeldRole[]): boolean =>
  held.some(({ role, networkId }) => role === 'coordinator' && networkId === null);

/**
 * The roles that someone has in a place: a deployment's coordinator is one everywhere, a network's roles hold at its sites, and an operator
 * is one at their own sites, and in the network of such a site.
 *
 * @param held all that the person holds now
 * @param place where
 * @returns each role once; empty for who has nothing to do there
 */
export function rolesAt(held: readonly HeldRole[], place: Place): readonly Role[] {
  const found = held.filter((one) => one.networkId === null || reaches(one, place)).map(({ role }) => role);
  return ROLES.filter((role) => found.includes(role));
}

function reaches({ role, networkId, siteId }: HeldRole, place: Place): boolean {
  if (place.kind === 'deployment' || networkId !== place.networkId) return false;
  return role !== 'operator' || place.kind === 'network' || siteId === place.siteId;
}
