import { BehaviorSubject, Subject } from 'rxjs';
import { describe, expect, it } from 'vitest';
import { type NetworkChanges } from '#shared/contract/live-changes';
import { joined, type Joined } from './joined';

const changesOf = (from: number, to: number, isCut = false): NetworkChanges => ({
  kind: 'changes',
  networkId: 1,
  from,
  to,
  atMs: 0,
  events: { items: [], gone: [], isCut },
  coincidences: { items: [], ended: [], final: [], crowded: 0, isCut: false },
  completeTo: null,
  completeness: [],
  setAsides: [],
  decided: [],
  hints: [],
});

/** A list that is read when the test says so, and what a page is told of it, in words. */
function watch({ settled = true } = {}) {
  const changes = new Subject<NetworkChanges>();
  const anew = new Subject<void>();
  const isSettled = new BehaviorSubject(settled);
  const reads: { resolve: (value: { change: number }) => void; reject: (fault: Error) => void }[] = [];
  const told: string[] = [];
  const say = (one: Joined<{ change: number }>): number =>
    told.push(
      one.kind === 'whole' ? `all at ${one.value.change}` : one.kind === 'failed' ? 'failed' : `${one.changes.from}-${one.changes.to}`,
    );
  const subscription = joined(
    { changes, anew, isSettled },
    () => new Promise<{ change: number }>((resolve, reject) => reads.push({ resolve, reject })),
  ).subscribe(say);
  const turn = (): Promise<void> => new Promise((resolve) => setTimeout(resolve));
  return { changes, anew, isSettled, reads, told, subscription, turn };
}

describe('a list and what follows it', () => {
  it('tells the list, and then what came while it was read and is not in it', async () => {
    const { changes, reads, told, turn } = watch();
    await turn();
    changes.next(changesOf(4, 5));
    changes.next(changesOf(6, 7));
    reads[0]?.resolve({ change: 5 });
    await turn();
    changes.next(changesOf(8, 8));
    expect(told).toEqual(['all at 5', '6-7', '8-8']);
  });

  it('takes a message that overlaps the list, since what is there by its id takes the place of what was', async () => {
    const { changes, reads, told, turn } = watch();
    await turn();
    changes.next(changesOf(4, 7));
    reads[0]?.resolve({ change: 5 });
    await turn();
    expect(told).toEqual(['all at 5', '4-7']);
  });

  it('waits with reading until it is known whether there is a link', async () => {
    const { isSettled, reads, turn } = watch({ settled: false });
    await turn();
    expect(reads).toHaveLength(0);
    isSettled.next(true);
    await turn();
    expect(reads).toHaveLength(1);
  });

  it('reads again where a message does not go on from what it has', async () => {
    const { changes, reads, told, turn } = watch();
    await turn();
    reads[0]?.resolve({ change: 5 });
    await turn();
    changes.next(changesOf(9, 9));
    await turn();
    expect(reads).toHaveLength(2);
    reads[1]?.resolve({ change: 10 });
    await turn();
    expect(told).toEqual(['all at 5', 'all at 10']);
  });

  it('tells a message whose rows were left out, and reads again', async () => {
    const { changes, reads, told, turn } = watch();
    await turn();
    reads[0]?.resolve({ change: 5 });
    await turn();
    changes.next(changesOf(6, 6, true));
    await turn();
    reads[1]?.resolve({ change: 6 });
    await turn();
    expect(told).toEqual(['all at 5', '6-6', 'all at 6']);
  });

  it('forgets a reading that was overtaken by another', async () => {
    const { anew, reads, told, turn } = watch();
    await turn();
    anew.next();
    await turn();
    reads[1]?.resolve({ change: 20 });
    reads[0]?.resolve({ change: 5 });
    await turn();
    expect(told).toEqual(['all at 20']);
  });

  it('says that it could not be read, and reads when everything is told anew', async () => {
    const { anew, reads, told, turn } = watch();
    await turn();
    reads[0]?.reject(new Error('no'));
    await turn();
    anew.next();
    await turn();
    reads[1]?.resolve({ change: 3 });
    await turn();
    expect(told).toEqual(['failed', 'all at 3']);
  });

  it('tells nothing more once nobody listens', async () => {
    const { reads, told, subscription, turn } = watch();
    await turn();
    subscription.unsubscribe();
    reads[0]?.resolve({ change: 5 });
    await turn();
    expect(told).toEqual([]);
  });
});
