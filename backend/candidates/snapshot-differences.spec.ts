import { describe, expect, it } from 'vitest';
import { type FrozenResults } from '#shared/contract/certificate';
import { type PairInFull } from '#shared/contract/pair-routes';
import { snapshotDifferences } from './snapshot-differences';

const event = (id: number, name: string, ps = 0) => ({
  ...{
    name,
    site: name.slice(0, 1),
    at: { taiS: 1_800_000_000, ps },
    placeM: [0, 0, 0] as [number, number, number],
    sigmaNs: 10,
    terms: [],
  },
  ...{ id, version: 1 },
});
const pair = (more: Partial<PairInFull> = {}): PairInFull => ({
  ...{ a: 1, b: 2, class: 'timelike', dtNs: 1_000, distanceM: 30, sigmaDtNs: 10, sigmaGapNs: 10, marginSigma: 90, reverseMarginSigma: 110 },
  ...{ intervalM2: 1, properTimeS: 1e-6, properDistanceM: null, turning: null, terms: [] },
  orders: [{ dtNs: 1_000, sigmaNs: 10, order: 'a' }],
  ...more,
});
const EVENTS = [event(1, 'A:1'), event(2, 'B:1', 1_000_000)];
const WAS: FrozenResults = {
  events: EVENTS.map(({ id: _id, version: _version, ...rest }) => rest),
  frames: [{ code: 'geocentric', gamma: 1, gammaBeta: [0, 0, 0] }],
  pairs: [pair()],
};
const BOUND = 0.1;
const now = (pairs: readonly PairInFull[], events = EVENTS) => snapshotDifferences(WAS, { events, pairs: [...pairs] }, BOUND);

describe('what of a snapshot is another now', () => {
  it('is nothing while each number is within the bound of its own standard error', () => {
    expect(now([pair()])).toEqual([]);
    expect(now([pair({ dtNs: 1_001, marginSigma: 90.1, orders: [{ dtNs: 999, sigmaNs: 10, order: 'a' }] })])).toEqual([]);
  });

  it('is each number that moved further, and any class or order', () => {
    const moved = pair({ class: 'undecided', dtNs: 1_001.1, marginSigma: 90.2, orders: [{ dtNs: 998, sigmaNs: 10, order: 'tie' }] });
    expect(now([moved])).toEqual([
      { where: 'A:1 B:1.class', was: 'timelike', is: 'undecided' },
      { where: 'A:1 B:1.dtNs', was: 1_000, is: 1_001.1 },
      { where: 'A:1 B:1.marginSigma', was: 90, is: 90.2 },
      { where: 'A:1 B:1.orders.geocentric.order', was: 'a', is: 'tie' },
      { where: 'A:1 B:1.orders.geocentric.dtNs', was: 1_000, is: 998 },
    ]);
  });

  it('is any change of what is exact, and none of what is infinite and stays so', () => {
    const exact = { ...WAS, pairs: [pair({ sigmaDtNs: 0, marginSigma: 'Infinity' })] };
    const same = { events: EVENTS, pairs: [pair({ sigmaDtNs: 0, marginSigma: 'Infinity' })] };
    expect(snapshotDifferences(exact, same, BOUND)).toEqual([]);
    const other = { events: EVENTS, pairs: [pair({ sigmaDtNs: 0, marginSigma: 50, dtNs: 1_000.000_001 })] };
    expect(snapshotDifferences(exact, other, BOUND).map(({ where }) => where)).toEqual(['A:1 B:1.dtNs', 'A:1 B:1.marginSigma']);
  });

  it('is an event that moved, that came to be the other one’s later, or that stands no more', () => {
    expect(now([pair()], [event(1, 'A:1', 1_001), EVENTS[1]!]).map(({ where }) => where)).toEqual(['A:1.at']);
    expect(now([pair()], [EVENTS[1]!, event(1, 'A:1', 2_000_000)]).map(({ where }) => where)).toEqual(['A:1.at', 'A:1 B:1.first']);
    expect(now([], [EVENTS[0]!])).toEqual([{ where: 'B:1', was: 'stands', is: null }]);
  });
});
