import { type PairInFull } from './pair-routes';
import { toUnbounded } from './unbounded';
import { type ErrorTables, type EventColumns } from '../relativity/events';
import { intervalM2, properDistanceM, properTimeS } from '../relativity/interval';
import { frameDtNs, frameSigmaNs, orderFrom, turningOf } from '../relativity/order';
import { pairOf } from '../relativity/pair';
import { pairTerms } from '../relativity/pair-terms';
import { type FourVelocity } from '../relativity/velocity';
import { verdictOf } from '../relativity/verdict';

/** A set of events in their order, with what decides of their pairs. */
export interface PairedSet {
  readonly events: EventColumns;
  readonly errors: ErrorTables;
  readonly sigmas: number;
  /** Of the frames in which the orders are asked for, at the set's first event. */
  readonly velocities: readonly FourVelocity[];
}

/** One pair of a set with all its numbers, those of the batch command; `a` and `b` are rows, told as places from 1 on. */
function pairInFull({ events, errors, sigmas, velocities }: PairedSet, a: number, b: number): PairInFull {
  const pair = pairOf(events, errors, a, b);
  const verdict = verdictOf(pair, sigmas);
  const interval = intervalM2(pair.dtNs, pair.distanceM);
  return {
    a: a + 1,
    b: b + 1,
    class: verdict.class,
    dtNs: pair.dtNs,
    distanceM: pair.distanceM,
    sigmaDtNs: pair.sigmaDtNs,
    sigmaGapNs: verdict.sigmaGapNs,
    marginSigma: toUnbounded(verdict.marginSigma),
    reverseMarginSigma: toUnbounded(verdict.reverseMarginSigma),
    intervalM2: interval,
    properTimeS: verdict.class === 'timelike' ? properTimeS(interval) : null,
    properDistanceM: verdict.class === 'spacelike' ? properDistanceM(interval) : null,
    turning: verdict.class === 'spacelike' ? turningOnWire(turningOf(pair)) : null,
    terms: [...pairTerms(events, errors, a, b)],
    orders: velocities.map((velocity) => {
      const dtNs = frameDtNs(pair, velocity);
      const sigmaNs = frameSigmaNs(pair, velocity);
      return { dtNs, sigmaNs, order: orderFrom(dtNs, sigmaNs, sigmas) };
    }),
  };
}

const turningOnWire = ({ speedC, sigmaC, toward: [x, y, z] }: ReturnType<typeof turningOf>): PairInFull['turning'] => ({
  speedC,
  sigmaC,
  toward: [x, y, z],
});

/** Every pair of a set, in the order (1,2), (1,3), ..., (2,3). */
export function pairsOfSet(set: PairedSet): PairInFull[] {
  const pairs: PairInFull[] = [];
  for (let a = 0; a < set.events.count; a++) for (let b = a + 1; b < set.events.count; b++) pairs.push(pairInFull(set, a, b));
  return pairs;
}
