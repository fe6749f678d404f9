import { type Rule } from '#shared/contract/rule-routes';
import { type Scale } from '#shared/time/scales';
import { instantText } from '../instants/instant-parts';
import { figureText } from '../ui/figure';
import { type Words } from '../ui/meanwhile';
import { windowWords } from './window-words';

/** What a rule says, word by word. */
export function ruleWords({ name, isActive, now }: Rule, scale: Scale, codeOf: (siteId: number) => string): Words {
  const span = (one: (typeof now.exclusions)[number]) =>
    `${one.siteId === null ? 'all sites' : codeOf(one.siteId)}, ${instantText(one.from, scale, 0)} to ${instantText(one.to, scale, 0)}`;
  return {
    Name: name,
    State: isActive ? 'active' : 'not active',
    'Near when within': windowWords(now),
    'Least number of sites': String(now.minimumFold),
    'Decides at': `${now.sigmas} sigma`,
    'Least amplitude': now.leastAmplitude === null ? 'none' : String(now.leastAmplitude),
    'Dead time': `${figureText(now.deadTimeNs)} ns`,
    'Crowded beyond': `${now.crowdLimit} sets`,
    Sites: now.siteIds.length === 0 ? 'all' : now.siteIds.map(codeOf).join(', '),
    'Left out': now.exclusions.length === 0 ? 'nothing' : now.exclusions.map(span).join('; '),
  };
}
