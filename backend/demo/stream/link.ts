import { randomFrom } from './random';
import { type World } from './world';

const UNSTABLE_SITE = 'GIL';
const EVERY_S = 240;
const LEAST_DOWN_S = 20;
const MOST_DOWN_S = 45;

/**
 * Whether a site's link to the server is up: Gillora Downs' fails once in four minutes, for less than one.
 *
 * @param code of the site
 * @param taiS TAI seconds
 */
export function isLinkUp({ seed, firstTaiS }: Pick<World, 'seed' | 'firstTaiS'>, code: string, taiS: number): boolean {
  if (code !== UNSTABLE_SITE) return true;
  const block = Math.floor((taiS - firstTaiS) / EVERY_S);
  const random = randomFrom(seed, 3, block);
  const downFromS = random.between(0, EVERY_S - MOST_DOWN_S);
  const intoS = taiS - firstTaiS - block * EVERY_S;
  return intoS < downFromS || intoS >= downFromS + random.between(LEAST_DOWN_S, MOST_DOWN_S);
}
