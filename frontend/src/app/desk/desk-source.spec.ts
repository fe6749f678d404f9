import { Subject } from 'rxjs';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { type DeskNews, gathered, newsAfter, withRows } from './desk-source';

const row = (id: number, text = '') => ({ id, text });

describe('news put over rows', () => {
  it('adds what came, replaces what is otherwise, takes out what went', () => {
    expect(withRows([row(1), row(2), row(3)], { items: [row(4), row(2, 'new')], gone: [3] })).toEqual([row(1), row(2, 'new'), row(4)]);
  });
  it('doubles nothing when it comes twice', () => {
    const news = { items: [row(4), row(2, 'new')], gone: [3] };
    const once = withRows([row(1), row(2), row(3)], news);
    expect(withRows(once, news)).toEqual(once);
  });
});

/** News of events alone; only their ids matter here. */
const news = (items: readonly number[], gone: readonly number[] = []): DeskNews => ({
  events: { items: items.map((id) => row(id) as never), gone },
  coincidences: { items: [], gone: [], final: [] },
  hasRecords: true,
  hasSetup: false,
});
const idsAfter = (rows: readonly { id: number }[], { events }: DeskNews): number[] => withRows(rows, events as never).map(({ id }) => id);

describe('news of which one follows the other', () => {
  it('come to the same as one after the other', () => {
    const [first, second] = [news([3, 4], [1, 2]), news([1, 5], [3])];
    const held = [row(1), row(2)];
    const inTurn = idsAfter(idsAfter(held, first).map((id) => row(id)), second); // prettier-ignore
    expect(idsAfter(held, newsAfter(first, second)).sort()).toEqual(inTurn.sort());
    expect(inTurn).toEqual([1, 4, 5]);
  });
  it('tell no rows when either told none, and setup when either has it', () => {
    const cut = { ...news([1]), events: undefined, hasSetup: true };
    expect(newsAfter(cut, news([2]))).toMatchObject({ events: undefined, hasSetup: true });
    expect(newsAfter(news([2]), cut).events).toBeUndefined();
  });
  it('let a coincidence that is told anew say itself whether it is final', () => {
    const sets = (items: readonly number[], final: readonly number[]): DeskNews => ({
      ...news([]),
      coincidences: { items: items.map((id) => row(id) as never), gone: [], final },
    });
    expect(newsAfter(sets([], [7, 8]), sets([7], [9])).coincidences?.final).toEqual([8, 9]);
  });
});

describe('news that are gathered', () => {
  beforeEach(() => void vi.useFakeTimers());
  afterEach(() => void vi.useRealTimers());

  it('come at once the first time, then together at most once in the time', () => {
    const source = new Subject<DeskNews>();
    const told: DeskNews[] = [];
    source.pipe(gathered(100)).subscribe((one) => told.push(one));
    source.next(news([1]));
    source.next(news([2]));
    source.next(news([3], [2]));
    expect(told).toEqual([news([1])]);
    vi.advanceTimersByTime(100);
    expect(told).toHaveLength(2);
    expect(idsAfter([], told[1]!)).toEqual([3]);
    vi.advanceTimersByTime(1_000);
    expect(told).toHaveLength(2);
    source.next(news([4]));
    expect(told).toHaveLength(3);
  });
  it('are not told to who no longer listens', () => {
    const source = new Subject<DeskNews>();
    const told: DeskNews[] = [];
    const listening = source.pipe(gathered(100)).subscribe((one) => told.push(one));
    source.next(news([1]));
    source.next(news([2]));
    listening.unsubscribe();
    vi.advanceTimersByTime(1_000);
    expect(told).toHaveLength(1);
    expect(source.observed).toBe(false);
  });
});
