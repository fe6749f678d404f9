import { C_M_S } from '../constants';
import { type Outcome, problemOf, valueOf } from '../outcome';

/** A speed along some direction, as gamma and gamma times beta; gamma beta is negative for motion against the direction. */
export interface Speed {
  readonly gamma: number;
  readonly gammaBeta: number;
}

/**
 * No rapidity, of one frame or added up along a chain, may exceed this: gamma would be 1e130, its square near the end of the doubles. A
 * frame of a speed that a double below 1 can state has 18.7 at most.
 */
export const MOST_RAPIDITY = 300;

/**
 * A speed given in c.
 *
 * @param speedC signed, |speed| below 1
 * @param where path of the field that it comes from, for the problem
 * @returns the speed, to 1e-15 relative for the double given; or the problem `frame-speed`
 */
export function speedFromC(speedC: number, where: string): Outcome<Speed> {
  return speedFromRatio(speedC, 1, where, `a speed of ${speedC} c; a finite speed below 1 is allowed`);
}

/**
 * A speed given in kilometres per second.
 *
 * @param speedKmS signed, |speed| below 299,792.458
 * @param where path of the field that it comes from, for the problem
 * @returns the speed, to 1e-15 relative for the double given; or the problem `frame-speed`
 */
export function speedFromKmS(speedKmS: number, where: string): Outcome<Speed> {
  return speedFromRatio(speedKmS, C_M_S / 1000, where, `a speed of ${speedKmS} km/s; a finite speed below 299792.458 km/s is allowed`);
}

/**
 * A speed given by its rapidity.
 *
 * @param rapidity signed, |rapidity| at most 300
 * @param where path of the field that it comes from, for the problem
 * @returns gamma = cosh, gamma beta = sinh, to 1e-15 relative (times the rapidity, where that exceeds 1); or the problem `frame-speed`
 */
export function speedFromRapidity(rapidity: number, where: string): Outcome<Speed> {
  if (!(Math.abs(rapidity) <= MOST_RAPIDITY)) {
    return problemOf('frame-speed', where, `a rapidity of ${rapidity}; a finite rapidity of at most ${MOST_RAPIDITY} is allowed`);
  }
  return valueOf({ gamma: Math.cosh(rapidity), gammaBeta: Math.sinh(rapidity) });
}

/** The speed v / c of two numbers in one unit: (c - v) is exact where v is near c, 1 - v/c would not be. */
function speedFromRatio(v: number, c: number, where: string, text: string): Outcome<Speed> {
  if (!(Math.abs(v) < c)) return problemOf('frame-speed', where, text);
  const root = Math.sqrt((c - v) * (c + v));
  return valueOf({ gamma: c / root, gammaBeta: v / root });
}
