import { NS_PER_LIGHT_M } from '../constants';
import { type ErrorTables, type EventColumns } from './events';
import { distanceVarianceM2, errorTerms, versionOf } from './time-error';

/** One independent part of a pair's error, ns: of its time difference, or (`distance`) of its distance over c. */
export interface PairTerm {
  readonly name:
    'reading-a' | 'reading-b' | 'delay-a' | 'delay-b' | 'clock-a' | 'clock-b' | 'rate' | 'reference-a' | 'reference-b' | 'distance';
  readonly sigmaNs: number;
}

/**
 * The independent terms of a pair's error, those left out that the two events share and that cancel.
 *
 * @param e the events
 * @param t what their errors refer to
 * @param a the row of the earlier event
 * @param b the row of the later one
 * @returns one standard error each, ns; the squares of all but `distance` add up to the variance of the time difference
 *   (`differenceVarianceNs2`), and with it to that of the gap, to some roundings
 */
export function pairTerms(e: EventColumns, t: ErrorTables, a: number, b: number): readonly PairTerm[] {
  const [readingA, delayA, clockA, referenceA] = errorTerms(e, t, a).map(({ sigmaNs }) => sigmaNs);
  const [readingB, delayB, clockB, referenceB] = errorTerms(e, t, b).map(({ sigmaNs }) => sigmaNs);
  const terms: PairTerm[] = [
    { name: 'reading-a', sigmaNs: readingA ?? 0 },
    { name: 'reading-b', sigmaNs: readingB ?? 0 },
  ];
  if (versionOf(e, a) !== versionOf(e, b)) terms.push({ name: 'delay-a', sigmaNs: delayA ?? 0 }, { name: 'delay-b', sigmaNs: delayB ?? 0 });
  const segment = e.segment[a] ?? -1;
  if (segment >= 0 && segment === e.segment[b]) {
    const apartDays =
      (e.sinceEpochDays[b] ?? 0) - (e.sinceEpochDays[a] ?? 0) + ((e.sinceEpochRestDays[b] ?? 0) - (e.sinceEpochRestDays[a] ?? 0));
    terms.push({ name: 'rate', sigmaNs: (t.segmentRateSigmaNsPerDay[segment] ?? 0) * Math.abs(apartDays) });
  } else {
    terms.push({ name: 'clock-a', sigmaNs: clockA ?? 0 }, { name: 'clock-b', sigmaNs: clockB ?? 0 });
    if (referenceOf(e, t, a) !== referenceOf(e, t, b))
      terms.push({ name: 'reference-a', sigmaNs: referenceA ?? 0 }, { name: 'reference-b', sigmaNs: referenceB ?? 0 });
  }
  terms.push({ name: 'distance', sigmaNs: Math.sqrt(distanceVarianceM2(e, t, a, b)) * NS_PER_LIGHT_M });
  return terms;
}

const referenceOf = (e: EventColumns, t: ErrorTables, i: number): number => t.segmentReference[e.segment[i] ?? -1] ?? -1;
