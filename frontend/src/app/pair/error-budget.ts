import { type PairInFull } from '#shared/contract/pair-routes';
import { type PairSeen } from './pair-seen';

/** One independent part of a margin's error. */
export interface BudgetLine {
  readonly label: string;
  readonly sigmaNs: number;
  /** Of the whole error, 0 to 1: a length of a bar. */
  readonly share: number;
}

/**
 * What limits a margin, term by term in the order of a reading's way.
 *
 * @param pair whose squares of terms add up to that of `sigmaGapNs`
 * @param a what the earlier event is called
 * @param b what the later one is called
 */
export function errorBudget({ terms, sigmaGapNs }: PairInFull, a: string, b: string): readonly BudgetLine[] {
  return terms.map(({ name, sigmaNs }) => ({
    label: WORDS[name].replace('{a}', a).replace('{b}', b),
    sigmaNs,
    share: sigmaGapNs > 0 ? Math.min(1, sigmaNs / sigmaGapNs) : 0,
  }));
}

const WORDS: Readonly<Record<PairInFull['terms'][number]['name'], string>> = {
  'reading-a': 'Reading, {a}',
  'reading-b': 'Reading, {b}',
  'delay-a': 'Cable delay, {a}',
  'delay-b': 'Cable delay, {b}',
  'clock-a': 'Clock record, {a}',
  'clock-b': 'Clock record, {b}',
  rate: 'Rate of their clock',
  'reference-a': 'Reference, {a}',
  'reference-b': 'Reference, {b}',
  distance: 'Site positions',
};

/** What both events share and what therefore cancels in their difference, in words; empty where they share nothing. */
export function sharedWords({ pair: { terms }, a }: PairSeen): string {
  const has = (name: PairInFull['terms'][number]['name']): boolean => terms.some((term) => term.name === name);
  const hasReference = a.terms.some(({ name, sigmaNs }) => name === 'reference' && sigmaNs > 0);
  const shared = [
    ...(has('delay-a') ? [] : ['the cable delay of their site']),
    ...(has('rate') ? ['the offset of their one clock segment'] : []),
    ...(has('reference-a') || !hasReference ? [] : ['the time reference of their clocks']),
  ];
  const last = shared.pop();
  if (last === undefined) return '';
  return `Both share ${shared.length > 0 ? `${shared.join(', ')} and ` : ''}${last}: that error cancels.`;
}
