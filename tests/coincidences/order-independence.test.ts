import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type PlainEvent, networkAndEvents } from '../support/plain-coincidences';
import { batchInForce, inForce, states, StoredNetwork } from '../support/stored-network';

/** A clock that nobody trusts: one second. */
const DOUBTFUL_NS = 1e9;

/** Each case has a database of its own, with every commit on disk. */
const CASES = process.env['LONG'] ? 1_000 : 30;

const which = fc.array(fc.nat(), { minLength: 1, maxLength: 10 });

/** One thing that can happen to a network; numbers point into the events that are drawn. `dies` is whether the process dies before it was searched. */
const step = fc.record({
  does: fc.oneof(
    { weight: 8, arbitrary: fc.constant('put') },
    { weight: 2, arbitrary: fc.constant('withdraw') },
    { weight: 2, arbitrary: fc.constant('move') },
    { weight: 1, arbitrary: fc.constant('conflict') },
    { weight: 3, arbitrary: fc.constant('complete') },
    { weight: 1, arbitrary: fc.constant('kill') },
    { weight: 2, arbitrary: fc.constant('check') },
  ),
  which,
  dies: fc.nat({ max: 9 }).map((k) => k === 0),
});

type Step = typeof step extends fc.Arbitrary<infer T> ? T : never;

function apply(stored: StoredNetwork, events: readonly PlainEvent[], { does, which: drawn, dies }: Step): void {
  const chosen = drawn.map((k) => events[k % events.length]!);
  const search = stored.opened;
  const elsewhere = events[(drawn[0]! + 1) % events.length]!;
  const tell = (change: ReturnType<StoredNetwork['put']>): void => {
    if (dies) stored.kill();
    else search.take(change);
  };
  if (does === 'put') tell(stored.put(chosen));
  else if (does === 'withdraw') tell(stored.withdraw(chosen));
  else if (does === 'move')
    tell(stored.put(chosen.map((event, k) => (k === 2 ? { ...event, readingSigmaNs: 7 } : { ...event, atPs: elsewhere.atPs }))));
  else if (does === 'conflict') {
    tell(stored.withdraw(chosen));
    stored.opened.take(stored.put(chosen));
  } else if (does === 'complete') tell(stored.completeUpTo(elsewhere.atPs));
  else if (does === 'kill') stored.kill();
  else {
    stored.finish();
    expect(inForce(stored.db)).toEqual(batchInForce(stored.network, stored.standing.values()));
  }
}

describe('coincidences of stored events', () => {
  it('are those of the batch finder after any order, split, repetition, move, conflict, withdrawal, completeness and death', () => {
    fc.assert(
      fc.property(
        networkAndEvents({ readingSigmaNs: [0, 1, 30, 1e5, DOUBTFUL_NS], windows: [1, 3, 10, 40] }),
        fc.array(step, { minLength: 5, maxLength: 25, size: 'max' }),
        ({ network, events }, steps) => {
          const stored = new StoredNetwork(network);
          try {
            for (const one of steps) apply(stored, events, one);
            stored.opened.take(stored.put([...events].reverse()));
            stored.finish();
            expect(inForce(stored.db)).toEqual(batchInForce(network, stored.standing.values()));
            stored.opened.take(stored.completeUpTo(1e18));
            stored.finish();
            expect(states(stored.db)['open'] ?? 0).toBe(0);
            expect(inForce(stored.db)).toEqual(batchInForce(network, stored.standing.values()));
          } finally {
            stored.close();
          }
        },
      ),
      { numRuns: CASES },
    );
  }, 600_000);
});
