import { C_M_S } from '../constants';
import { type Pair } from './pair';
import { rootOfSquares } from './root-of-squares';

/** What can be said of a pair: the order is the same for everyone, depends on the frame, or cannot be told. */
export type IntervalClass = 'timelike' | 'spacelike' | 'undecided';

/** A decision about a pair, with what it rests on. */
export interface Verdict {
  readonly class: IntervalClass;
  /** Signed distance from the light cone, ns: c dt less distance, over c; positive inside. */
  readonly gapNs: number;
  /** One standard error of that distance, ns. */
  readonly sigmaGapNs: number;
  /** The gap in its own standard errors; positive = timelike; infinite where the error is 0 and the gap is not. */
  readonly marginSigma: number;
  /** How surely b did not cause a, in standard errors. */
  readonly reverseMarginSigma: number;
}

/**
 * What double arithmetic may have done to a gap, ns: a few units in the last place of the time, and of the places from which the distance
 * is formed (their rotation adds some 1e-15 rad; 32 units cover it, 0.3 fs on the Earth). Any later term stays within it too.
 */
export function gapRoundingNs(pair: Pair): number {
  return Number.EPSILON * (4 * Math.abs(pair.dtNs) + (32 * pair.radiiM * 1e9) / C_M_S);
}

const inSigmas = (valueNs: number, sigmaNs: number): number => (valueNs === 0 ? 0 : valueNs / sigmaNs);

/**
 * Decides a pair in the manner of a robust predicate: a value, a bound of what measurement and rounding may have done to it, and an answer
 * only where the value lies outside the bound.
 *
 * @param pair the pair, a the earlier
 * @param sigmas how many standard errors make a decision, >= 0
 * @returns timelike when the gap exceeds the bound, spacelike when it falls below minus the bound, else undecided; with an error of 0 the
 *   sign decides, and an exact 0 is undecided
 */
export function verdictOf(pair: Pair, sigmas: number): Verdict {
  const lightNs = (pair.distanceM / C_M_S) * 1e9;
  const sigmaGapNs = rootOfSquares(pair.sigmaDtNs, (pair.sigmaDM / C_M_S) * 1e9);
  const gapNs = pair.dtNs - lightNs;
  const boundNs = sigmas * sigmaGapNs + gapRoundingNs(pair);
  return {
    class: gapNs > boundNs ? 'timelike' : gapNs < -boundNs ? 'spacelike' : 'undecided',
    gapNs,
    sigmaGapNs,
    marginSigma: inSigmas(gapNs, sigmaGapNs),
    reverseMarginSigma: inSigmas(pair.dtNs + lightNs, sigmaGapNs),
  };
}
