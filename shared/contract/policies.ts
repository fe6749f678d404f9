import { ROLES, rolesAt, type HeldRole, type Place, type Role } from './roles';

/** Who may do one thing. Where `in` is 'place', the request says which: the role must be held there. */
export type Policy =
  | { readonly who: 'anyone' }
  | { readonly who: 'signed-in' }
  | { readonly who: 'site-key' }
  | { readonly who: 'roles'; readonly roles: readonly Role[]; readonly in: 'place' | 'anywhere' };

const anyone: Policy = { who: 'anyone' };
const signedIn: Policy = { who: 'signed-in' };
const bySiteKey: Policy = { who: 'site-key' };
const at = (...roles: readonly Role[]): Policy => ({ who: 'roles', roles, in: 'place' });
const anywhere = (...roles: readonly Role[]): Policy => ({ who: 'roles', roles, in: 'anywhere' });

/**
 * Who may do what, for HTTP routes and socket events alike. A route names its line, an event is one by its own name; what has no line here
 * is not served.
 */
export const POLICIES = {
  'health:read': anyone,

  'session:begin': anyone,
  'session:refresh': anyone, // the refresh token says who it is
  'session:end': anyone, // signing out works whatever the session has come to
  'invitation:accept': anyone, // the token says who it is
  'reset:ask': anyone,
  'reset:use': anyone, // the token says who it is

  'me:read': signedIn,
  'me:change': signedIn,
  'my-password:change': signedIn,
  'my-sessions:read': signedIn,
  'my-sessions:end': signedIn,
  'my-preferences:read': signedIn,
  'my-preferences:change': signedIn,

  'person:list': anywhere('coordinator'),
  'person:read': anywhere('coordinator'),
  'person:invite': at('coordinator'), // where the person's first role is
  'person:invite-again': anywhere('coordinator'),
  'person:disable': at('coordinator'), // of the deployment
  'person:enable': at('coordinator'), // of the deployment
  'role:give': at('coordinator'),
  'role:change': at('coordinator'),
  'role:take': at('coordinator'),

  'site-key:list': at('coordinator', 'operator'),
  'site-key:make': at('coordinator', 'operator'),
  'site-key:revoke': at('coordinator', 'operator'),
  'site-key:read-own': bySiteKey,

  'stream:hello': bySiteKey,
  'stream:batch': bySiteKey,
  'stream:state': bySiteKey,

  'network:list': signedIn, // those in which they have a role
  'network:read': at(...ROLES),
  'network:make': at('coordinator'), // of the deployment
  'network:change': at('coordinator'),
  'network:close': at('coordinator'), // of the deployment
  'run:list': at(...ROLES),
  'run:make': at('coordinator'),
  'run:change': at('coordinator'),
  'site:list': at(...ROLES), // an operator has their own
  'site:read': at(...ROLES),
  'site:make': at('coordinator'),
  'site:change': at('coordinator', 'operator'),
  'site:add-version': at('coordinator', 'operator'),
  'site:close': at('coordinator'),
  'clock:list': at(...ROLES), // an operator has the clocks of their sites, and those that they made for one
  'clock:read': at(...ROLES),
  'clock:read-history': at(...ROLES),
  'clock:make': at('coordinator', 'operator'),
  'clock:change': at('coordinator', 'operator'),
  'clock-segment:add': at('coordinator', 'operator'),
  'clock-segment:edit': at('coordinator', 'operator'),
  'clock-segment:end': at('coordinator', 'operator'),
  'time-reference:list': at(...ROLES),
  'time-reference:make': at('coordinator'),
  'time-reference:change': at('coordinator'),
  'frame:list': at(...ROLES),
  'frame:read': at(...ROLES),
  'frame:make': at('coordinator', 'analyst'),
  'frame:change': at('coordinator', 'analyst'),
  'frame:close': at('coordinator', 'analyst'),
  'rule:list': at(...ROLES),
  'rule:read': at(...ROLES),
  'rule:read-history': at(...ROLES),
  'rule:make': at('coordinator', 'analyst'),
  'rule:change': at('coordinator', 'analyst'),
  'rule:activate': at('coordinator', 'analyst'),
  'rule:deactivate': at('coordinator', 'analyst'),
  'time-tables:read': signedIn,
  'leap-second-table:upload': at('coordinator'), // of the deployment
  'leap-second-table:put-in-force': at('coordinator'),
  'orientation-table:upload': at('coordinator'),
  'orientation-table:put-in-force': at('coordinator'),

  'event:list': at(...ROLES), // an operator has those of their sites
  'event:read': at(...ROLES),
  'coincidence:list': at('coordinator', 'analyst', 'reviewer'), // it shows events of several sites
  'coincidence:read': at('coordinator', 'analyst', 'reviewer'),
  'pair:read': at(...ROLES), // an operator pairs events of their sites
  'set-aside:list': at(...ROLES), // an operator has those of their sites
  'set-aside:read': at(...ROLES),
  'set-aside:decide': at('coordinator', 'operator'),
  'series:list': at(...ROLES),
  'live-span:list': at(...ROLES),
  'completeness:read': at(...ROLES), // an operator has their sites, and how far the network is
  'change:list': at('coordinator', 'analyst', 'reviewer'),

  'candidate:list': at('coordinator', 'analyst', 'reviewer'),
  'candidate:read': at('coordinator', 'analyst', 'reviewer'),
  'candidate:make': at('analyst'),
  'candidate:change': at('analyst'), // who of them, and when, says candidate-moves.ts
  'claim:edit': at('analyst'),
  'candidate:submit': at('analyst'),
  'reviewer:name': at('coordinator', 'analyst'),
  'candidate:sign': at('reviewer'), // who is asked to, and neither wrote nor edited it
  'comment:write': at('coordinator', 'analyst', 'reviewer'), // its author alone changes one
  'my-reviews:read': signedIn,
  'candidate:withdraw': at('coordinator', 'analyst'),

  'network:follow': at(...ROLES), // of what follows an operator has their sites', and no coincidences
  'network:missed': at(...ROLES),
  'network:leave': signedIn,

  'audit:read': at('coordinator'),
  'audit:verify': at('coordinator'), // of the deployment
  'kept-mail:read': at('coordinator'), // of the deployment: a kept mail may hold anyone's link
} as const satisfies Readonly<Record<string, Policy>>;

export type PolicyName = keyof typeof POLICIES;

/** The policy of a route or event by its name in the table; absent for what may not be served. */
export function policyOf(name: string): Policy | undefined {
  const table: Readonly<Record<string, Policy>> = POLICIES;
  return Object.hasOwn(table, name) ? table[name] : undefined;
}

/** Who asks: nobody that is known, a person with the roles that they hold now, or a site by its key. */
export type Asker =
  { readonly kind: 'nobody' } | { readonly kind: 'person'; readonly held: readonly HeldRole[] } | { readonly kind: 'site-key' };

/**
 * What becomes of a request: 'sign-in' when who asks is not known, 'forbidden' when they may see the place but not do this there, 'hidden'
 * when the place must look to them as if it were not.
 */
export type Verdict = 'allowed' | 'sign-in' | 'forbidden' | 'hidden';

/**
 * Judges whether someone may do something.
 *
 * @param policy who may
 * @param asker who asks
 * @param place where; needed when the policy's roles are those of a place, and never otherwise
 */
export function judge(policy: Policy, asker: Asker, place?: Place): Verdict {
  switch (policy.who) {
    case 'anyone':
      return 'allowed';
    case 'site-key':
      return asker.kind === 'site-key' ? 'allowed' : 'sign-in';
    case 'signed-in':
      return asker.kind === 'person' ? 'allowed' : 'sign-in';
    case 'roles': {
      if (asker.kind !== 'person') return 'sign-in';
      if (policy.in === 'anywhere') return asker.held.some(({ role }) => policy.roles.includes(role)) ? 'allowed' : 'forbidden';
      if (!place) throw new Error('a policy of a place was judged without one');
      const roles = rolesAt(asker.held, place);
      if (roles.some((role) => policy.roles.includes(role))) return 'allowed';
      return roles.length > 0 || place.kind === 'deployment' ? 'forbidden' : 'hidden';
    }
  }
}
