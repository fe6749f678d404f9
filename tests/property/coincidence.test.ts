import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { identityText } from '#shared/coincidence/event-identity';
import { batchTexts, identityOf, instantAt, Ledger, liveEvent, liveFinderOf } from '../support/live-stream';
import { batchFindings, inOrder, networkAndEvents, plainFindings, type PlainEvent } from '../support/plain-coincidences';

/** A clock that nobody trusts: one second. */
const DOUBTFUL_NS = 1e9;

describe('the batch finder', () => {
  it('finds exactly the maximal sets, and the crowded events, that the plain definition gives', () => {
    fc.assert(
      fc.property(networkAndEvents(), ({ network, events }) => {
        expect(batchFindings(network, events)).toEqual(plainFindings(network, events));
      }),
    );
  });

  it('finds the same with doubtful clocks among good ones, over times that only their errors bridge', () => {
    const sigmas = [...Array<number>(12).fill(1), 1e4, 1e6, DOUBTFUL_NS];
    fc.assert(
      fc.property(networkAndEvents({ windows: [3, 100, 3000], readingSigmaNs: sigmas }), ({ network, events }) => {
        expect(batchFindings(network, events)).toEqual(plainFindings(network, events));
      }),
    );
  });
});

/** One thing that can happen to a stream; numbers point into the events that are drawn. */
const step = fc.oneof(
  { weight: 6, arbitrary: fc.record({ does: fc.constant('put'), which: fc.array(fc.nat(), { minLength: 1, maxLength: 12 }) }) },
  { weight: 2, arbitrary: fc.record({ does: fc.constant('withdraw'), which: fc.array(fc.nat(), { minLength: 1, maxLength: 4 }) }) },
  { weight: 2, arbitrary: fc.record({ does: fc.constant('move'), which: fc.array(fc.nat(), { minLength: 1, maxLength: 3 }) }) },
  { weight: 4, arbitrary: fc.record({ does: fc.constant('flush'), which: fc.constant<number[]>([]) }) },
);

describe('the live finder', () => {
  it('says what the batch finder says after any arrival order, splitting, repetition, move, withdrawal and return', () => {
    fc.assert(
      fc.property(
        networkAndEvents({ readingSigmaNs: [0, 1, 30, 1e5] }),
        fc.array(step, { minLength: 5, maxLength: 40, size: 'max' }),
        ({ network, events }, steps) => {
          const finder = liveFinderOf(network);
          const ledger = new Ledger();
          const held = new Map<string, PlainEvent>();
          const expectSameAsBatch = (): void => {
            ledger.enter(finder.flush());
            expect(ledger.faults).toEqual([]);
            expect({ sets: [...ledger.sets].sort(), crowds: [...ledger.crowds].sort() }).toEqual(batchTexts(network, [...held.values()]));
          };
          const put = (list: readonly PlainEvent[]): void => {
            expect(finder.put(list.map((event) => liveEvent(network, event)))).toEqual({ tooLate: [], noRoom: [] });
            for (const event of list) held.set(identityText(identityOf(event)), event);
          };
          for (const { does, which } of steps) {
            const chosen = which.map((k) => events[k % events.length]!);
            if (does === 'put') put(chosen);
            else if (does === 'withdraw') {
              finder.withdraw(chosen.map(identityOf));
              for (const event of chosen) held.delete(identityText(identityOf(event)));
            } else if (does === 'move') {
              const elsewhere = events[(which[0]! + 1) % events.length]!;
              put(chosen.map((event, k) => (k === 2 ? { ...event, readingSigmaNs: 7 } : { ...event, atPs: elsewhere.atPs })));
            } else expectSameAsBatch();
          }
          expectSameAsBatch();
          put([...events].reverse());
          expectSameAsBatch();
          expect(finder.size().events).toBe(events.length);
        },
      ),
    );
  });

  it('answers the same changes, in the same order, whatever the order within a flush', () => {
    fc.assert(
      fc.property(networkAndEvents(), fc.array(fc.nat(), { minLength: 40, maxLength: 40 }), fc.nat(), ({ network, events }, order, cut) => {
        const shuffled = events.map((event, k) => ({ event, key: order[k] ?? 0 })).sort((a, b) => a.key - b.key);
        const later = cut % events.length;
        const run = (list: readonly PlainEvent[]) => {
          const finder = liveFinderOf(network);
          const early = new Set(events.slice(later));
          finder.put(list.filter((event) => early.has(event)).map((event) => liveEvent(network, event)));
          const first = finder.flush();
          finder.put(list.filter((event) => !early.has(event)).map((event) => liveEvent(network, event)));
          return [first, finder.flush()];
        };
        expect(run(shuffled.map(({ event }) => event))).toEqual(run(events));
      }),
    );
  });
});

/** Arrivals of a stream: each event with how long it is under way, in units of the spread of all. */
const delays = fc.array(
  fc.integer({ min: 0, max: 100 }).map((k) => (k < 60 ? 0 : k / 100)),
  { minLength: 40, maxLength: 40 },
);

describe('finality', () => {
  it('never takes back what was final while later events honour completeness, and at the end everything is final and as in the batch', () => {
    fc.assert(
      fc.property(
        networkAndEvents({ windows: [3, 10, 40], readingSigmaNs: [0, 1, 30, 1e5] }),
        delays,
        fc.integer({ min: 1, max: 6 }),
        ({ network, events }, under, flushEvery) => {
          const most = Math.max(0, ...events.map((event) => network.rule.sigmas * (liveEvent(network, event).sigmaNs + 0.5 * 4)));
          const finder = liveFinderOf(network, { expectedReachNs: most });
          const ledger = new Ledger();
          const arrivals = events
            .map((event, k) => ({ event, arrives: event.atPs + (under[k] ?? 0) * network.spreadPs }))
            .sort((a, b) => a.arrives - b.arrives);
          arrivals.forEach(({ event }, k) => {
            expect(finder.put([liveEvent(network, event)])).toEqual({ tooLate: [], noRoom: [] });
            const awaited = arrivals.slice(k + 1).map((a) => a.event.atPs);
            finder.completeUpTo(instantAt(Math.min(...awaited, network.spreadPs) - 1));
            if (k % flushEvery === 0) ledger.enter(finder.flush());
          });
          finder.completeUpTo(instantAt(1e16));
          ledger.enter(finder.flush());
          expect(ledger.faults).toEqual([]);
          const batch = batchTexts(network, events);
          expect({ sets: [...ledger.sets].sort(), crowds: [...ledger.crowds].sort() }).toEqual(batch);
          expect({ sets: [...ledger.finalSets].sort(), crowds: [...ledger.finalCrowds].sort() }).toEqual(batch);
        },
      ),
    );
  });

  it('answers every event that could change what is final as too late, and stays with the batch result of the others', () => {
    fc.assert(
      fc.property(
        networkAndEvents({ windows: [3, 10, 40], readingSigmaNs: [0, 1, 30, 1e5, DOUBTFUL_NS] }),
        delays,
        fc.array(fc.integer({ min: 0, max: 39 }), { maxLength: 6 }),
        ({ network, events }, under, withdrawn) => {
          const finder = liveFinderOf(network);
          const ledger = new Ledger();
          const held = new Map<string, PlainEvent>();
          const arrivals = events
            .map((event, k) => ({ event, arrives: event.atPs + (under[k] ?? 0) * network.spreadPs }))
            .sort((a, b) => a.arrives - b.arrives);
          arrivals.forEach(({ event, arrives }, k) => {
            const name = identityText(identityOf(event));
            const { tooLate, noRoom } = finder.put([liveEvent(network, event)]);
            expect(noRoom).toEqual([]);
            if (tooLate.length === 0) held.set(name, event);
            else expect(tooLate).toEqual([identityOf(event)]);
            if (withdrawn.includes(k)) {
              const other = arrivals[Math.floor(k / 2)]!.event;
              const answer = finder.withdraw([identityOf(other)]);
              if (answer.tooLate.length + answer.notHeld.length === 0) held.delete(identityText(identityOf(other)));
            }
            finder.completeUpTo(instantAt(arrives));
            ledger.enter(finder.flush());
          });
          finder.completeUpTo(instantAt(1e16));
          ledger.enter(finder.flush());
          expect(ledger.faults).toEqual([]);
          const batch = batchTexts(network, inOrder([...held.values()]));
          expect({ sets: [...ledger.sets].sort(), crowds: [...ledger.crowds].sort() }).toEqual(batch);
          expect({ sets: [...ledger.finalSets].sort(), crowds: [...ledger.finalCrowds].sort() }).toEqual(batch);
        },
      ),
    );
  });
});
