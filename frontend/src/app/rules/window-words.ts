import { type RuleState } from '#shared/contract/rule-routes';
import { plain } from '../desk/figures';

/** When a rule takes two triggers of different sites as near, in words. */
export function windowWords({ window }: Pick<RuleState, 'window'>): string {
  if (window.kind === 'fixed') {
    const frame = window.frameId === null ? 'the geocentric frame' : 'a frame of the network';
    return `within ${ns(window.widthNs)} in ${frame}`;
  }
  const speed = window.speedC === 1 ? 'light-time' : `the time at ${window.speedC} c`;
  return window.marginNs === 0 ? `${speed} and timing error` : `${speed}, timing error and ${ns(window.marginNs)}`;
}

/** Every digit that was stated, whole ones in threes. */
const ns = (value: number): string => `${Number.isInteger(value) ? plain(value, 0) : String(value)} ns`;
