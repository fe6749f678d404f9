import { type RuleState } from '#shared/contract/rule-routes';
import { figureText } from '../ui/figure';

/** When a rule takes two triggers of different sites as near, in words. */
export function windowWords({ window }: Pick<RuleState, 'window'>): string {
  if (window.kind === 'fixed') {
    const frame = window.frameId === null ? 'the geocentric frame' : 'a frame of the network';
    return `within ${figureText(window.widthNs)} ns in ${frame}`;
  }
  const speed = window.speedC === 1 ? 'light-time' : `the time at ${window.speedC} c`;
  return window.marginNs === 0 ? `${speed} and timing error` : `${speed}, timing error and ${figureText(window.marginNs)} ns`;
}
