import { describe, expect, it } from 'vitest';
import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { foldSets } from './fold-sets';

/** A coincidence of which only what folds it matters. */
const set = (id: number, ...eventIds: readonly number[]) =>
  ({ id, fold: eventIds.length, members: eventIds.map((eventId) => ({ eventId, site: '', name: '', offsetNs: 0 })) }) as unknown as CoincidenceBrief; // prettier-ignore

const folded = (...sets: readonly CoincidenceBrief[]) =>
  foldSets(sets).map(({ first, others }) => [first.id, ...others.map(({ id }) => id)]);

describe('coincidences that share events', () => {
  it('are folded behind the one of most sites, where the first stood', () => {
    expect(folded(set(1, 10, 11), set(2, 20, 21), set(3, 11, 12, 13))).toEqual([[3, 1], [2]]);
  });

  it('are one row also where a third joins them', () => {
    expect(folded(set(1, 10, 11), set(2, 20, 21), set(3, 11, 21))).toEqual([[1, 2, 3]]);
    expect(folded(set(1, 10, 11), set(2, 12, 13), set(3, 13, 14), set(4, 14, 10))).toEqual([[1, 2, 3, 4]]);
  });

  it('stay apart otherwise, in their order', () => expect(folded(set(2, 1, 2), set(1, 3, 4))).toEqual([[2], [1]]));
});
