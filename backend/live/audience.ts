import { judge, policyOf } from '#shared/contract/policies';
import { type HeldRole } from '#shared/contract/roles';
import { type NetworkChanges } from '#shared/contract/live-changes';
import { type SiteStates } from '#shared/contract/site-state';
import { ownSites } from '../accounts/sites-seen';
import { type ChangesRead } from './changes-read';

/** What a person sees of a network's changes. All who see the same are told the same message. */
export interface Audience {
  /** Alike for those who see the same. */
  readonly key: string;
  /** Those whose events are seen; undefined for all. */
  readonly siteIds: ReadonlySet<number> | undefined;
  readonly seesCoincidences: boolean;
  readonly seesWork: boolean;
}

/**
 * What someone sees of a network by the roles that they hold now.
 *
 * @returns undefined for who has nothing to do there
 */
export function audienceOf(held: readonly HeldRole[], networkId: number): Audience | undefined {
  const may = (name: string): boolean => {
    const policy = policyOf(name);
    return policy !== undefined && judge(policy, { kind: 'person', held }, { kind: 'network', networkId }) === 'allowed';
  };
  if (!may('network:follow')) return undefined;
  const own = ownSites(held, networkId);
  const seesCoincidences = may('coincidence:list');
  const seesWork = may('change:list');
  const key = `${networkId} ${own ? [...own].sort((a, b) => a - b).join(',') : 'all'} ${seesCoincidences ? 'c' : ''}${seesWork ? 'w' : ''}`;
  return { key, siteIds: own && new Set(own), seesCoincidences, seesWork };
}

/** What an audience is told of changes. */
export function changesFor(
  { siteIds, seesCoincidences, seesWork }: Audience,
  { changes, siteOfGone, siteOfDecided }: ChangesRead,
): NetworkChanges {
  const sees = (siteId: number | undefined): boolean => siteIds === undefined || (siteId !== undefined && siteIds.has(siteId));
  const { events, coincidences } = changes;
  return {
    ...changes,
    events: {
      ...events,
      items: siteIds ? events.items.filter(({ siteId }) => sees(siteId)) : events.items,
      gone: siteIds ? events.gone.filter((id) => sees(siteOfGone.get(id))) : events.gone,
    },
    coincidences: seesCoincidences ? coincidences : { items: [], ended: [], final: [], crowded: 0, isCut: false },
    completeness: changes.completeness.filter(({ siteId }) => sees(siteId)),
    setAsides: changes.setAsides.filter(({ siteId }) => sees(siteId)),
    decided: siteIds ? changes.decided.filter((id) => sees(siteOfDecided.get(id))) : changes.decided,
    hints: seesWork ? changes.hints : changes.hints.filter(({ kind }) => kind !== 'candidate' && kind !== 'job'),
  };
}

/** What an audience is told of the sites. */
export const statesFor = ({ siteIds }: Pick<Audience, 'siteIds'>, states: SiteStates): SiteStates =>
  siteIds ? { ...states, sites: states.sites.filter(({ siteId }) => siteIds.has(siteId)) } : states;
