import { type PolicyName } from '#shared/contract/policies';
import { type IconName } from '../ui/icons/icons';

/** A place of the application, as the rail, the bottom bar and the palette have it. */
export interface Place {
  readonly path: string;
  readonly name: string;
  readonly icon: IconName;
  /** Two keys that lead there. */
  readonly key: string;
  /** Who sees it; everyone who is signed in where nothing is said. */
  readonly policy?: PolicyName;
  /** Whether it belongs to the work itself, or to running the deployment. */
  readonly group: 'work' | 'run';
}

/** All places, in the order of the rail. */
export const PLACES: readonly Place[] = [
  { path: '/desk', name: 'Desk', icon: 'radar', key: 'g d', group: 'work' },
  { path: '/people', name: 'People', icon: 'group', key: 'g p', policy: 'person:list', group: 'run' },
  { path: '/audit', name: 'Audit trail', icon: 'history', key: 'g h', policy: 'audit:read', group: 'run' },
  { path: '/mails', name: 'Mails', icon: 'mail', key: 'g m', policy: 'kept-mail:read', group: 'run' },
];
