import { describe, expect, it } from 'vitest';
import { type Stored } from '../ingest/stored';
import { gathered } from './gathered';

const UP_TO = (taiS: number): Stored['completeUpTo'] => ({ taiS, ps: 0 });

/** A commit that brought so many new events; their number in `triggerId` counts on. */
function commitOf(networkId: number, changeNumber: number, triggerIds: readonly number[]): Stored {
  const arrived = triggerIds.map((triggerId) => ({ triggerId, eventVersion: 1 }) as Stored['arrived'][number]);
  return { networkId, changeNumber, arrived, withdrawn: [], completeUpTo: UP_TO(changeNumber) };
}

const idsOf = ({ arrived }: Stored): number[] => arrived.map(({ triggerId }) => triggerId);

describe('gathered commits', () => {
  it('come out as one of each network, in their order, with the last number and completeness', () => {
    const all = gathered();
    for (const commit of [commitOf(1, 5, [1, 2]), commitOf(2, 9, [3]), commitOf(1, 6, [4])]) all.add(commit);
    const [first, second, ...more] = all.take(Infinity);
    expect([idsOf(first!), first!.changeNumber, first!.completeUpTo]).toEqual([[1, 2, 4], 6, UP_TO(6)]);
    expect([idsOf(second!), second!.changeNumber]).toEqual([[3], 9]);
    expect(more).toEqual([]);
    expect([all.events(), all.isEmpty()]).toEqual([0, true]);
  });

  it('come out in pieces of whole commits, the oldest first, and none twice', () => {
    const all = gathered();
    for (let at = 0; at < 6; at++) all.add(commitOf(1 + (at % 2), 10 + at, [2 * at, 2 * at + 1]));
    expect(all.events()).toBe(12);
    const pieces: number[][] = [];
    while (!all.isEmpty()) {
      const piece = all.take(5).flatMap(idsOf);
      expect(piece.length).toBeLessThanOrEqual(6); // the commit that reaches the number is taken whole
      pieces.push(piece);
      expect(all.events()).toBe(12 - pieces.flat().length);
    }
    expect(pieces.flat().sort((a, b) => a - b)).toEqual(Array.from({ length: 12 }, (_, id) => id));
    for (const network of [0, 1]) {
      const ids = pieces.flat().filter((id) => Math.floor(id / 2) % 2 === network);
      expect(ids).toEqual([...ids].sort((a, b) => a - b));
    }
  });
});
