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

/** Where an empty deployment leads its coordinator, until two sites stand. */
export const FIRST_STEPS: Place = { path: '/first-steps', name: 'First steps', icon: 'checklist', key: 'g 1', group: 'work' };

/** All places, in the order of the rail. */
export const PLACES: readonly Place[] = [
  { path: '/desk', name: 'Desk', icon: 'radar', key: 'g d', group: 'work' },
  { path: '/rules', name: 'Rules', icon: 'rule', key: 'g r', policy: 'rule:list', group: 'work' },
  { path: '/frames', name: 'Frames', icon: 'timeline', key: 'g f', policy: 'frame:list', group: 'work' },
  { path: '/sites', name: 'Sites', icon: 'cell-tower', key: 'g s', policy: 'site:list', group: 'work' },
  { path: '/set-asides', name: 'Set-asides', icon: 'fact-check', key: 'g e', policy: 'set-aside:decide', group: 'work' },
  { path: '/network', name: 'Network', icon: 'hub', key: 'g n', policy: 'network:read', group: 'run' },
  { path: '/people', name: 'People', icon: 'group', key: 'g p', policy: 'person:list', group: 'run' },
  { path: '/tables', name: 'Time, Earth', icon: 'schedule', key: 'g t', policy: 'leap-second-table:upload', group: 'run' },
  { path: '/audit', name: 'Audit trail', icon: 'history', key: 'g h', policy: 'audit:read', group: 'run' },
  { path: '/mails', name: 'Mails', icon: 'mail', key: 'g m', policy: 'kept-mail:read', group: 'run' },
];
