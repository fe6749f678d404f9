import { NS_PER_LIGHT_M } from '../constants';
import { type ErrorTables, type EventColumns } from './events';

/** One independent part of an event's time error. */
export interface ErrorTerm {
  readonly name: 'reading' | 'delay' | 'clock' | 'reference';
  readonly sigmaNs: number;
}

/** Variance of what the clock segment says at an event's epoch: offset, rate, and their covariance; 0 for an exact clock. ns^2. */
function clockVarianceNs2(e: EventColumns, t: ErrorTables, i: number): number {
  const segment = e.segment[i] ?? -1;
  if (segment < 0) return 0;
  const offset = t.segmentOffsetSigmaNs[segment] ?? 0;
  const tau = e.sinceEpochDays[i] ?? 0;
  const rate = (t.segmentRateSigmaNsPerDay[segment] ?? 0) * tau;
  // Rounding may carry a perfectly correlated pair just below zero.
  return Math.max(0, offset * offset + 2 * (t.segmentCovarianceNs2PerDay[segment] ?? 0) * tau + rate * rate);
}

function referenceOf(e: EventColumns, t: ErrorTables, i: number): number {
  const segment = e.segment[i] ?? -1;
  return segment < 0 ? -1 : (t.segmentReference[segment] ?? -1);
}

function referenceVarianceNs2(t: ErrorTables, reference: number): number {
  return reference < 0 ? 0 : square(t.referenceSigmaNs[reference] ?? 0);
}

const square = (x: number): number => x * x;

/** Row of the delay and place that an event's site had. */
export const versionOf = (e: EventColumns, i: number): number => (e.version ?? e.site)[i] ?? 0;

/**
 * The independent terms of an event's time error, in the order in which they enter.
 *
 * @param e the events
 * @param t what their errors refer to
 * @param i the row of the event
 * @returns one standard error each, ns; the clock's term holds offset, rate and covariance at the event's epoch
 */
export function errorTerms(e: EventColumns, t: ErrorTables, i: number): readonly ErrorTerm[] {
  return [
    { name: 'reading', sigmaNs: e.readingSigmaNs[i] ?? 0 },
    { name: 'delay', sigmaNs: t.siteDelaySigmaNs[versionOf(e, i)] ?? 0 },
    { name: 'clock', sigmaNs: Math.sqrt(clockVarianceNs2(e, t, i)) },
    { name: 'reference', sigmaNs: Math.sqrt(referenceVarianceNs2(t, referenceOf(e, t, i))) },
  ];
}

/** Variance of an event's time, all terms together, ns^2. */
export function timeVarianceNs2(e: EventColumns, t: ErrorTables, i: number): number {
  return (
    square(e.readingSigmaNs[i] ?? 0) +
    square(t.siteDelaySigmaNs[versionOf(e, i)] ?? 0) +
    clockVarianceNs2(e, t, i) +
    referenceVarianceNs2(t, referenceOf(e, t, i))
  );
}

/**
 * Variance of the time *difference* of two events: what both share cancels.
 *
 * Readings are independent. The delay cancels within a site (and one version of it). Within one clock segment the offset cancels and the rate acts on the time
 * between the two readings (each less its delay). Two segments, of one clock or of two, share only a reference of the same name.
 *
 * @param e the events
 * @param t what their errors refer to
 * @param i the row of one event
 * @param j the row of the other
 * @returns ns^2; symmetric in i and j, and its root obeys the triangle inequality since all of it comes from one sum
 */
export function differenceVarianceNs2(e: EventColumns, t: ErrorTables, i: number, j: number): number {
  let variance = square(e.readingSigmaNs[i] ?? 0) + square(e.readingSigmaNs[j] ?? 0);
  const siteI = versionOf(e, i);
  const siteJ = versionOf(e, j);
  if (siteI !== siteJ) variance += square(t.siteDelaySigmaNs[siteI] ?? 0) + square(t.siteDelaySigmaNs[siteJ] ?? 0);
  const segmentI = e.segment[i] ?? -1;
  if (segmentI >= 0 && segmentI === e.segment[j]) {
    const restDays = (e.sinceEpochRestDays[j] ?? 0) - (e.sinceEpochRestDays[i] ?? 0);
    const apartDays = (e.sinceEpochDays[j] ?? 0) - (e.sinceEpochDays[i] ?? 0) + restDays;
    return variance + square((t.segmentRateSigmaNsPerDay[segmentI] ?? 0) * apartDays);
  }
  variance += clockVarianceNs2(e, t, i) + clockVarianceNs2(e, t, j);
  const referenceI = referenceOf(e, t, i);
  const referenceJ = referenceOf(e, t, j);
  if (referenceI === referenceJ) return variance;
  return variance + (referenceVarianceNs2(t, referenceI) + referenceVarianceNs2(t, referenceJ));
}

/** Variance of the distance of two events from the errors of their sites' positions, m^2; 0 within a site that stands where it stood. */
export function distanceVarianceM2(e: EventColumns, t: ErrorTables, i: number, j: number): number {
  const siteI = versionOf(e, i);
  const siteJ = versionOf(e, j);
  return siteI === siteJ ? 0 : square(t.sitePositionSigmaM[siteI] ?? 0) + square(t.sitePositionSigmaM[siteJ] ?? 0);
}

/** One standard error of time difference and distance together, ns: sqrt(sigma_dt^2 + (sigma_d / c)^2). */
export function gapSigmaNs(e: EventColumns, t: ErrorTables, i: number, j: number): number {
  return Math.sqrt(differenceVarianceNs2(e, t, i, j) + square(NS_PER_LIGHT_M) * distanceVarianceM2(e, t, i, j));
}
