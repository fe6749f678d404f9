import { type Site, type SiteVersion } from '#shared/contract/site-routes';
import { type Scale } from '#shared/time/scales';
import { instantText } from '../instants/instant-parts';
import { figureText } from '../ui/figure';
import { type Words } from '../ui/meanwhile';
import { placeText } from './place-text';

/** From when a state of a site holds. */
export const fromWords = ({ from }: SiteVersion, scale: Scale): string =>
  from === null ? 'from ever on' : `from ${instantText(from, scale, 0)} on`;

/** The states of a site that are in force, each as a line. */
export function siteWords({ name, versions }: Pick<Site, 'name' | 'versions'>, scale: Scale): Words {
  const inForce = versions.filter(({ supersededAt }) => supersededAt === null);
  return { Name: name, ...Object.fromEntries(inForce.map((state) => [`state ${state.number}`, stateWords(state, scale)])) };
}

const stateWords = (state: SiteVersion, scale: Scale): string =>
  [
    fromWords(state, scale),
    `at ${placeText(state.position)} \u00b1 ${figureText(state.positionSigmaM)} m`,
    `writes ${state.scale} by ${state.clockId === null ? 'an exact clock' : `clock ${state.clockId}`}`,
    `delay ${figureText(state.delayNs)} \u00b1 ${figureText(state.delaySigmaNs)} ns`,
  ].join(', ');
