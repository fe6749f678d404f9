import { describe, expect, it } from 'vitest';
import { C_M_S } from '../constants';
import { emptyEvents } from '../relativity/events';
import { eventReachNs, reachBands, type ReachInput } from './reach-bands';

/** One site whose position is good to so many metres, and events of it with so many nanoseconds. */
function inputOf(sigmasNs: readonly number[], positionSigmaM = 0): ReachInput {
  const events = { ...emptyEvents(Math.max(1, sigmasNs.length)), count: sigmasNs.length };
  events.sigmaNs.set(sigmasNs);
  return {
    events,
    rule: { sigmas: 3 },
    errors: {
      siteDelaySigmaNs: new Float64Array(1),
      sitePositionSigmaM: Float64Array.of(positionSigmaM),
      segmentOffsetSigmaNs: new Float64Array(0),
      segmentRateSigmaNsPerDay: new Float64Array(0),
      segmentCovarianceNs2PerDay: new Float64Array(0),
      segmentReference: new Int32Array(0),
      referenceSigmaNs: new Float64Array(0),
    },
  };
}

describe('eventReachNs', () => {
  it('is so many standard errors of the time and of the position over c', () => {
    expect(eventReachNs(inputOf([10]), 0)).toBe(30);
    expect(eventReachNs(inputOf([10], C_M_S / 1e9), 0)).toBeCloseTo(33, 9);
  });
});

describe('reachBands', () => {
  it('is one band of all rows while no reach exceeds the window that the geometry has anyway', () => {
    expect(reachBands(inputOf([10, 20, 30]), 1e6)).toEqual([{ rows: undefined, mostReachNs: 90 }]);
    expect(reachBands(inputOf([]), 1e6)).toEqual([{ rows: undefined, mostReachNs: 0 }]);
  });

  it('keeps a reach of just the geometry in the one band, and opens another for the least beyond', () => {
    expect(reachBands(inputOf([1, 1_000]), 3_000)).toHaveLength(1);
    const bands = reachBands(inputOf([1, 1_000.1]), 3_000);
    expect(bands.map(({ rows }) => Array.from(rows ?? []))).toEqual([[0], [1]]);
  });

  it('sorts rows into doublings, each with its own farthest reach and ascending rows', () => {
    const bands = reachBands(inputOf([1e9, 5, 2_000, 1_500, 7, 1e9]), 1_000);
    expect(bands.map(({ rows, mostReachNs }) => [Array.from(rows ?? []), mostReachNs])).toEqual([
      [[1, 4], 21],
      [[2, 3], 6_000],
      [[0, 5], 3e9],
    ]);
  });

  it('opens no band for errors below a microsecond, however near the sites are', () => {
    expect(reachBands(inputOf([1, 333]), 0)).toHaveLength(1);
  });

  it('counts the position error as well', () => {
    const bands = reachBands(inputOf([0], C_M_S / 1e3), 1_000);
    expect(bands).toHaveLength(1);
    expect(bands[0]!.mostReachNs).toBeCloseTo(3e6, 3);
    expect(Array.from(bands[0]!.rows!)).toEqual([0]);
  });
});
