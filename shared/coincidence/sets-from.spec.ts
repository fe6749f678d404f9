import { describe, expect, it } from 'vitest';
import { emptyEvents } from '../relativity/events';
import { coincidenceKernel } from './kernel';
import { compareRows, type Crowd, setsFrom } from './sets-from';
import { windowBounds } from './window-bounds';

const WIDTH_NS = 10;

/** What begins with each trigger: `[site, ns]` in order of time, a fixed window of 10 ns. */
function findings(
  triggers: readonly (readonly [site: number, atNs: number])[],
  more: { minimumFold?: number; limit?: number; siteCount?: number } = {},
) {
  const { minimumFold = 2, limit = 100, siteCount = 4 } = more;
  const events = { ...emptyEvents(Math.max(1, triggers.length)), count: triggers.length };
  triggers.forEach(([site, atNs], row) => {
    events.site[row] = site;
    events.ps[row] = atNs * 1e3;
  });
  const window = { kind: 'fixed', widthNs: WIDTH_NS, frame: 'geocentric' } as const;
  const lines = Array.from({ length: siteCount }, () => ({ placeAt: () => [0, 0, 0] as const, mostSpeedMS: 0, mostRadiusM: 0 }));
  const none = new Float64Array(siteCount);
  const kernel = coincidenceKernel({
    events,
    errors: {
      siteDelaySigmaNs: none,
      sitePositionSigmaM: none,
      segmentOffsetSigmaNs: none,
      segmentRateSigmaNsPerDay: none,
      segmentCovarianceNs2PerDay: none,
      segmentReference: new Int32Array(0),
      referenceSigmaNs: none,
    },
    rule: { code: 'rule', minimumFold, sigmas: 3, window },
    bounds: windowBounds(window, lines, () => ({ leastM: 0, mostM: 0 })),
  });
  const sets: string[] = [];
  const crowds: Crowd[] = [];
  const find = setsFrom(kernel, events, { minimumFold, limit });
  for (let event = 0; event < triggers.length; event++) {
    find(event, { set: (rows, fold) => void sets.push(rows.subarray(0, fold).join()), crowd: (crowd) => void crowds.push(crowd) });
  }
  return { sets, crowds };
}

describe('setsFrom', () => {
  it('finds nothing among no triggers, one, and two that are too far apart', () => {
    expect(findings([]).sets).toEqual([]);
    expect(findings([[0, 0]]).sets).toEqual([]);
    expect(findings([[0, 0], [1, 11]]).sets).toEqual([]); // prettier-ignore
  });

  it('takes triggers at one instant as one set, begun by the first of them', () => {
    expect(findings([[0, 5], [1, 5], [2, 5]]).sets).toEqual(['0,1,2']); // prettier-ignore
  });

  it('tells each maximal set once: a set within a larger one is none, neither from its own earliest trigger', () => {
    expect(findings([[0, 0], [1, 4], [2, 8], [3, 12]]).sets).toEqual(['0,1,2', '1,2,3']); // prettier-ignore
    expect(findings([[0, 0], [1, 4], [2, 8]]).sets).toEqual(['0,1,2']); // prettier-ignore
  });

  it('leaves out a pair that an earlier trigger is near, and keeps it where the earlier one is of one of its sites', () => {
    expect(findings([[2, 0], [0, 4], [1, 8]]).sets).toEqual(['0,1,2']); // prettier-ignore
    expect(findings([[1, 0], [0, 4], [1, 8]]).sets).toEqual(['0,1', '1,2']); // prettier-ignore
  });

  it('counts folds from the least asked for', () => {
    const triggers = [[0, 0], [1, 4], [2, 8], [3, 15]] as const; // prettier-ignore
    expect(findings(triggers, { minimumFold: 3 }).sets).toEqual(['0,1,2']);
    expect(findings(triggers, { minimumFold: 4 }).sets).toEqual([]);
    expect(findings(triggers, { minimumFold: 2 }).sets).toEqual(['0,1,2', '2,3']);
  });

  it('lists sets in the order of their rows', () => {
    expect(findings([[0, 0], [1, 1], [1, 2], [2, 3], [2, 4]]).sets).toEqual(['0,1,3', '0,1,4', '0,2,3', '0,2,4']); // prettier-ignore
  });

  it('lists just as many sets as the limit, and none but the crowd one past it', () => {
    const triggers = [[0, 0], [1, 1], [1, 2], [2, 3], [2, 4], [2, 5]] as const; // prettier-ignore
    expect(findings(triggers, { limit: 6 })).toMatchObject({ crowds: [], sets: { length: 6 } });
    expect(findings(triggers, { limit: 5 })).toEqual({ sets: [], crowds: [{ event: 0, sites: 3, events: 6, setsAtLeast: 6 }] });
  });

  it('counts in a crowd what is near and not before the event, itself included', () => {
    const triggers = [[3, 0], [0, 1], [1, 9], [1, 10], [2, 11], [2, 12]] as const; // prettier-ignore
    expect(findings(triggers, { limit: 1, siteCount: 5 }).crowds).toEqual([
      { event: 0, sites: 3, events: 4, setsAtLeast: 2 },
      { event: 1, sites: 3, events: 4, setsAtLeast: 2 },
    ]);
  });

  it('does not count sets that an earlier trigger could join, however many they are', () => {
    const after = Array.from({ length: 8 }, (_, k) => [1 + (k % 2), 2 + k / 8] as const);
    expect(findings([[3, 0], [0, 1], ...after], { limit: 5 }).crowds.map(({ event }) => event)).toEqual([0]); // prettier-ignore
  });
});

describe('compareRows', () => {
  it('goes by the first row that differs', () => {
    expect(compareRows(Int32Array.of(1, 2), Int32Array.of(1, 3))).toBeLessThan(0);
    expect(compareRows(Int32Array.of(2), Int32Array.of(1, 3))).toBeGreaterThan(0);
    expect(compareRows(Int32Array.of(1, 2), Int32Array.of(1, 2))).toBe(0);
    expect(compareRows(Int32Array.of(1), Int32Array.of(1, 2))).toBeLessThan(0);
  });
});
