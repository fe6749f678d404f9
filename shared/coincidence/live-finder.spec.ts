import { describe, expect, it } from 'vitest';
import { C_M_S } from '../constants';
import { type ErrorTables } from '../relativity/events';
import { type Instant, instantOf } from '../time/instant';
import { type EventIdentity, identityText } from './event-identity';
import { type LiveEvent } from './held-events';
import { type LiveChanges, type LiveFindings } from './live-answers';
import { createLiveFinder, type LiveFinder, type LiveSetup } from './live-finder';
import { windowBounds } from './window-bounds';

/** Three sites, one light microsecond from each other along a line. */
const SITE_X_M = [0, 1, 2].map((k) => (k * C_M_S) / 1e6);
const BASE_S = 2_000_000;

const TABLES: ErrorTables = {
  siteDelaySigmaNs: new Float64Array(3),
  sitePositionSigmaM: new Float64Array(3),
  segmentOffsetSigmaNs: new Float64Array(0),
  segmentRateSigmaNsPerDay: new Float64Array(0),
  segmentCovarianceNs2PerDay: new Float64Array(0),
  segmentReference: new Int32Array(0),
  referenceSigmaNs: new Float64Array(0),
};

const at = (ns: number): Instant => instantOf(BASE_S, Math.round(ns * 1e3));

/** A trigger at a time in nanoseconds: `[site, sequence]`. */
function trigger([site, sequence]: readonly [number, number], atNs: number, more: Partial<LiveEvent> = {}): LiveEvent {
  const { taiS, ps } = at(atNs);
  const errors = { readingSigmaNs: 0, sigmaNs: 0, segment: -1, sinceEpochDays: 0, sinceEpochRestDays: 0 };
  return { site, series: '', sequence: `${sequence}`, taiS, ps, xM: SITE_X_M[site]!, yM: 0, zM: 0, ...errors, ...more };
}
const unsure = (sigmaNs: number): Partial<LiveEvent> => ({ readingSigmaNs: sigmaNs, sigmaNs });

function finderOf(more: Partial<LiveSetup> = {}): LiveFinder {
  const window = { kind: 'light-time', speedC: 1, marginNs: 0 } as const;
  const lines = SITE_X_M.map((x) => ({ x, placeAt: () => [x, 0, 0] as const, mostSpeedMS: 0, mostRadiusM: 2 * C_M_S }));
  const bounds = windowBounds(window, lines, (a, b) => {
    const apartM = Math.abs((lines.find((l) => l === a)?.x ?? 0) - (lines.find((l) => l === b)?.x ?? 0));
    return { leastM: apartM, mostM: apartM };
  });
  return createLiveFinder({ errors: TABLES, rule: { code: 'rule', minimumFold: 2, sigmas: 3, window }, bounds, limit: 3, ...more });
}

const names = (events: readonly EventIdentity[]): string => events.map(identityText).join(' ');
const told = ({ sets, crowded }: LiveFindings): string[] => [
  ...sets.map(({ events }) => names(events)),
  ...crowded.map((c) => `${identityText(c.event)} of ${c.events} events, ${c.sites} sites, ${c.setsAtLeast} sets`),
];
const changes = ({ appeared, vanished, final }: LiveChanges) => ({
  appeared: told(appeared),
  vanished: told(vanished),
  final: told(final),
});
const NOTHING = { appeared: [], vanished: [], final: [] };

describe('the live finder', () => {
  it('says nothing when nothing, or one trigger, came', () => {
    const finder = finderOf();
    expect(changes(finder.flush())).toEqual(NOTHING);
    finder.put([trigger([0, 1], 0)]);
    expect(changes(finder.flush())).toEqual(NOTHING);
  });

  it('replaces a set by the larger one that a late trigger makes, and restores it when the trigger is withdrawn', () => {
    const finder = finderOf();
    finder.put([trigger([0, 1], 0), trigger([2, 1], 1_500)]);
    expect(changes(finder.flush())).toEqual({ ...NOTHING, appeared: ['0::1 2::1'] });
    finder.put([trigger([1, 1], 700)]);
    expect(changes(finder.flush())).toEqual({ ...NOTHING, appeared: ['0::1 1::1 2::1'], vanished: ['0::1 2::1'] });
    finder.withdraw([{ site: 1, series: '', sequence: '1' }]);
    expect(changes(finder.flush())).toEqual({ ...NOTHING, appeared: ['0::1 2::1'], vanished: ['0::1 1::1 2::1'] });
  });

  it('says nothing of a trigger that comes again as it was, nor of one that went and came back between two flushes', () => {
    const finder = finderOf();
    const both = [trigger([0, 1], 0), trigger([1, 1], 500)];
    finder.put([...both, ...both]);
    expect(changes(finder.flush()).appeared).toEqual(['0::1 1::1']);
    finder.put(both);
    expect(changes(finder.flush())).toEqual(NOTHING);
    finder.withdraw(both);
    finder.put(both);
    finder.put([trigger([0, 1], 5)]);
    finder.put(both);
    expect(changes(finder.flush())).toEqual(NOTHING);
    expect(finder.size().events).toBe(2);
  });

  it('tells a set anew whose member moved or became less sure, though its members have the same names', () => {
    const finder = finderOf();
    finder.put([trigger([0, 1], 0), trigger([1, 1], 500)]);
    finder.flush();
    finder.put([trigger([1, 1], 500, unsure(4))]);
    expect(changes(finder.flush())).toEqual({ ...NOTHING, appeared: ['0::1 1::1'], vanished: ['0::1 1::1'] });
    finder.put([trigger([1, 1], -100)]);
    expect(changes(finder.flush())).toEqual({ ...NOTHING, appeared: ['1::1 0::1'], vanished: ['0::1 1::1'] });
  });

  it('takes back what a trigger reached before it became sure, however far that was', () => {
    const finder = finderOf();
    finder.put([trigger([0, 1], 0), trigger([1, 1], 5e6, unsure(1e7)), trigger([0, 2], 5e6)]);
    expect(changes(finder.flush()).appeared).toEqual(['0::1 1::1', '0::2 1::1']);
    // The other change comes first and reaches a microsecond.
    finder.put([trigger([2, 9], 4.999_9e6 - 5_000), trigger([1, 1], 5e6)]);
    expect(changes(finder.flush())).toEqual({ ...NOTHING, appeared: ['0::2 1::1'], vanished: ['0::1 1::1', '0::2 1::1'] });
  });

  it('tells a crowd anew when it grows, and its sets when it shrinks to the limit', () => {
    const finder = finderOf();
    finder.put([trigger([0, 1], 0), ...[1, 2, 3, 4].map((k) => trigger([1, k], k))]);
    expect(changes(finder.flush()).appeared).toEqual(['0::1 of 5 events, 2 sites, 4 sets']);
    finder.put([trigger([1, 5], 5)]);
    expect(changes(finder.flush())).toEqual({
      ...NOTHING,
      appeared: ['0::1 of 6 events, 2 sites, 4 sets'],
      vanished: ['0::1 of 5 events, 2 sites, 4 sets'],
    });
    finder.withdraw([trigger([1, 1], 1), trigger([1, 4], 4)]);
    expect(changes(finder.flush())).toEqual({
      ...NOTHING,
      appeared: ['0::1 1::2', '0::1 1::3', '0::1 1::5'],
      vanished: ['0::1 of 6 events, 2 sites, 4 sets'],
    });
  });

  it('orders triggers of one instant by site, series and sequence as a number', () => {
    const finder = finderOf();
    finder.put([trigger([1, 10], 0), trigger([1, 9], 0), trigger([0, 1], 0), trigger([1, 2], 0, { series: 'b' })]);
    expect(changes(finder.flush()).appeared).toEqual(['0::1 1::9', '0::1 1::10', '0::1 1:b:2']);
  });

  it('takes triggers of a clock segment that was added to the tables', () => {
    const finder = finderOf();
    finder.put([trigger([0, 1], 0), trigger([1, 1], 1_200)]);
    expect(changes(finder.flush())).toEqual(NOTHING);
    finder.extendErrors({
      ...TABLES,
      segmentOffsetSigmaNs: Float64Array.of(100),
      segmentRateSigmaNsPerDay: Float64Array.of(0),
      segmentCovarianceNs2PerDay: Float64Array.of(0),
      segmentReference: Int32Array.of(-1),
    });
    finder.put([trigger([1, 1], 1_200, { segment: 0, sigmaNs: 100 })]);
    expect(changes(finder.flush()).appeared).toEqual(['0::1 1::1']);
  });

  it('refuses triggers past its limit by name, and takes them when there is room again', () => {
    const finder = finderOf({ heldLimit: 2 });
    const third = trigger([2, 7], 20);
    expect(finder.put([trigger([0, 1], 0), trigger([1, 1], 10), third, trigger([1, 1], 11)])).toEqual({
      tooLate: [],
      noRoom: [{ site: 2, series: '', sequence: '7' }],
    });
    expect(changes(finder.flush()).appeared).toEqual(['0::1 1::1']);
    finder.withdraw([trigger([0, 1], 0)]);
    expect(finder.put([third]).noRoom).toEqual([]);
    expect(changes(finder.flush()).appeared).toEqual(['1::1 2::7']);
  });

  it('answers a withdrawal of what is not held', () => {
    const finder = finderOf();
    const { site, series, sequence } = trigger([0, 1], 0);
    expect(finder.withdraw([{ site, series, sequence }])).toEqual({ tooLate: [], notHeld: [{ site, series, sequence }] });
  });
});

describe('finality', () => {
  // The widest window is 2,000 ns and a hair.
  const pair = [trigger([0, 1], 0), trigger([1, 1], 500)];

  it('comes when completeness has passed the earliest trigger by the widest window, once', () => {
    const finder = finderOf();
    finder.put(pair);
    finder.completeUpTo(at(1_999));
    expect(changes(finder.flush())).toEqual({ ...NOTHING, appeared: ['0::1 1::1'] });
    finder.completeUpTo(at(2_001));
    expect(changes(finder.flush())).toEqual({ ...NOTHING, final: ['0::1 1::1'] });
    finder.completeUpTo(at(9_000));
    expect(changes(finder.flush())).toEqual(NOTHING);
  });

  it('waits for the reach that is held or expected', () => {
    for (const finder of [finderOf({ expectedReachNs: 3_000 }), finderOf()]) {
      finder.put([...pair, trigger([2, 1], 90_000, unsure(1_000))]);
      finder.completeUpTo(at(7_990));
      expect(changes(finder.flush()).final).toEqual([]);
      finder.completeUpTo(at(8_100));
      expect(changes(finder.flush()).final).toEqual(['0::1 1::1']);
    }
  });

  it('never goes back', () => {
    const finder = finderOf();
    finder.completeUpTo(at(5_000));
    finder.completeUpTo(at(0));
    finder.put(pair);
    expect(changes(finder.flush()).final).toEqual(['0::1 1::1']);
  });

  it('refuses a trigger, a move and a withdrawal that could change it, by name, and leaves all as it was', () => {
    const finder = finderOf();
    const late = trigger([2, 1], 600);
    const away = trigger([0, 2], 3_500);
    finder.put([...pair, away]);
    finder.completeUpTo(at(2_001));
    finder.flush();
    const identity = { site: 2, series: '', sequence: '1' };
    expect(finder.put([late]).tooLate).toEqual([identity]);
    expect(finder.put([trigger([1, 1], 90_000)]).tooLate).toEqual([{ site: 1, series: '', sequence: '1' }]);
    expect(finder.put([trigger([0, 2], 1_000)]).tooLate).toEqual([{ site: 0, series: '', sequence: '2' }]);
    expect(finder.withdraw([pair[1]!]).tooLate).toHaveLength(1);
    expect(changes(finder.flush())).toEqual(NOTHING);
    // What is beyond its window may still move.
    expect(finder.put([trigger([0, 2], 3_600)]).tooLate).toEqual([]);
    expect(finder.withdraw([away])).toEqual({ tooLate: [], notHeld: [] });
  });

  it('refuses one trigger of a clock that became doubtful, and then waits for the others', () => {
    const finder = finderOf();
    const doubtful = (sequence: number, atNs: number): LiveEvent => trigger([2, sequence], atNs, unsure(1e5));
    finder.put(pair);
    finder.completeUpTo(at(3_000));
    finder.flush();
    expect(finder.put([doubtful(1, 4_000)]).tooLate).toHaveLength(1);
    finder.put([trigger([0, 5], 150_000)]);
    finder.completeUpTo(at(200_000));
    expect(changes(finder.flush()).final).toEqual([]);
    expect(finder.put([doubtful(2, 310_000)]).tooLate).toEqual([]);
    expect(changes(finder.flush()).appeared).toEqual(['0::5 2::2']);
  });
});

describe('memory', () => {
  it('is bounded by what is open, over a long stream', () => {
    const finder = finderOf();
    let most = 0;
    let final = 0;
    for (let k = 0; k < 20_000; k++) {
      // A pair each 10 us; the second comes late by five pairs.
      finder.put([trigger([0, k], 10_000 * k), trigger([1, k], 10_000 * (k - 5) + 300)]);
      finder.completeUpTo(at(10_000 * (k - 5)));
      if (k % 4 === 0) final += finder.flush().final.sets.length;
      most = Math.max(most, finder.size().events);
    }
    expect(final).toBeGreaterThan(19_980);
    expect(most).toBeLessThan(40);
    expect(finder.size().capacity).toBe(256);
  });

  it('grows with a silent site, and is released when it speaks', () => {
    const finder = finderOf();
    for (let k = 0; k < 2_000; k++) finder.put([trigger([0, k], 10_000 * k)]);
    finder.flush();
    expect(finder.size().events).toBe(2_000);
    finder.completeUpTo(at(2e7));
    finder.flush();
    expect(finder.size().events).toBeLessThan(3);
  });
});
