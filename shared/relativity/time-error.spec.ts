import { describe, expect, it } from 'vitest';
import { C_M_S } from '../constants';
import { emptyEvents, type ErrorTables, type EventColumns } from './events';
import { differenceVarianceNs2, distanceVarianceM2, errorTerms, gapSigmaNs, timeVarianceNs2 } from './time-error';

interface Row {
  readonly site?: number;
  readonly readingNs?: number;
  readonly segment?: number;
  readonly days?: number;
}

function eventsOf(...rows: readonly Row[]): EventColumns {
  const events = { ...emptyEvents(rows.length), count: rows.length };
  for (const [i, { site = 0, readingNs = 0, segment = -1, days = 0 }] of rows.entries()) {
    events.site[i] = site;
    events.readingSigmaNs[i] = readingNs;
    events.segment[i] = segment;
    events.sinceEpochDays[i] = days;
  }
  return events;
}

/** Two sites; segments 0 and 1 of one clock and 2 of another share reference 0, segment 3 names reference 1, segment 4 none. */
const TABLES: ErrorTables = {
  siteDelaySigmaNs: Float64Array.of(3, 4),
  sitePositionSigmaM: Float64Array.of(0.6, 0.8),
  segmentOffsetSigmaNs: Float64Array.of(12, 5, 8, 6, 9),
  segmentRateSigmaNsPerDay: Float64Array.of(2, 0, 1, 0, 0),
  segmentCovarianceNs2PerDay: Float64Array.of(7, 0, -8, 0, 0),
  segmentReference: Int32Array.of(0, 0, 0, 1, -1),
  referenceSigmaNs: Float64Array.of(20, 30),
};

const difference = (a: Row, b: Row, tables = TABLES): number => {
  const events = eventsOf(a, b);
  const variance = differenceVarianceNs2(events, tables, 0, 1);
  expect(differenceVarianceNs2(events, tables, 1, 0)).toBe(variance);
  return variance;
};

describe('the error of one time', () => {
  it('is the sum of its named terms', () => {
    const events = eventsOf({ site: 1, readingNs: 2, segment: 0, days: 0.5 });
    const clock = Math.sqrt(144 + 2 * 7 * 0.5 + 1);
    expect(errorTerms(events, TABLES, 0)).toEqual([
      { name: 'reading', sigmaNs: 2 },
      { name: 'delay', sigmaNs: 4 },
      { name: 'clock', sigmaNs: clock },
      { name: 'reference', sigmaNs: 20 },
    ]);
    expect(timeVarianceNs2(events, TABLES, 0)).toBe(4 + 16 + 152 + 400);
  });

  it('is the reading and the delay alone for an exact clock, whatever its epoch', () => {
    expect(timeVarianceNs2(eventsOf({ readingNs: 2, days: 1e6 }), TABLES, 0)).toBe(4 + 9);
  });

  it('has no reference where the segment names none', () => {
    expect(timeVarianceNs2(eventsOf({ segment: 4 }), TABLES, 0)).toBe(9 + 81);
  });

  it('grows with the covariance on one side of the epoch and shrinks on the other', () => {
    expect(timeVarianceNs2(eventsOf({ segment: 0, days: 1 }), TABLES, 0)).toBe(9 + 144 + 14 + 4 + 400);
    expect(timeVarianceNs2(eventsOf({ segment: 0, days: -1 }), TABLES, 0)).toBe(9 + 144 - 14 + 4 + 400);
  });

  it('reaches 0, and not below, where offset and rate are one error', () => {
    // Correlation 1: offset + rate x tau vanishes at tau = -offset / rate. Of the last two, doubles make a little less.
    for (const [offset, rate] of [
      [12, 8],
      [0.3, 1.7],
      [0.9, 0.3],
    ] as const) {
      const tables: ErrorTables = {
        ...TABLES,
        siteDelaySigmaNs: Float64Array.of(0),
        segmentOffsetSigmaNs: Float64Array.of(offset),
        segmentRateSigmaNsPerDay: Float64Array.of(rate),
        segmentCovarianceNs2PerDay: Float64Array.of(offset * rate),
        segmentReference: Int32Array.of(-1),
      };
      const variance = timeVarianceNs2(eventsOf({ segment: 0, days: -offset / rate }), tables, 0);
      expect(variance).toBeGreaterThanOrEqual(0);
      expect(variance).toBeLessThanOrEqual(4 * Number.EPSILON * offset ** 2);
    }
  });

  it('takes an epoch of -0 for 0', () => {
    expect(timeVarianceNs2(eventsOf({ segment: 0, days: -0 }), TABLES, 0)).toBe(9 + 144 + 400);
  });
});

describe('the error of a time difference', () => {
  it.each<[string, Row, Row, number]>([
    ['is that of the readings within one site of an exact clock', { readingNs: 3 }, { readingNs: 4 }, 25],
    ['is 0 where nothing has an error', {}, {}, 0],
    ['has both delays between two sites', { site: 0 }, { site: 1 }, 25],
    ['has no delay within one site', { site: 1 }, { site: 1 }, 0],
    ['loses offset and reference within one segment', { segment: 0, days: 2 }, { segment: 0, days: 2 }, 0],
    ['has the rate between two readings of one segment, not since its epoch', { segment: 0, days: 1000 }, { segment: 0, days: 1003 }, 36],
    ['has the same rate backwards', { segment: 0, days: 1 }, { segment: 0, days: -2 }, 36],
    ['has a rate of two sites that share a clock', { site: 0, segment: 0, days: 0 }, { site: 1, segment: 0, days: 3 }, 25 + 36],
    ['has both segments of one clock, less their common reference', { segment: 0, days: 1 }, { segment: 1, days: 5 }, 144 + 14 + 4 + 25],
    ['has two clocks less their common reference', { segment: 1 }, { segment: 2, days: 2 }, 25 + 64 - 32 + 4],
    ['has the references too where they differ', { segment: 1 }, { segment: 3 }, 25 + 36 + 400 + 900],
    ['has the one reference that only one names', { segment: 1 }, { segment: 4 }, 25 + 81 + 400],
    ['has clock and reference against an exact clock', { segment: 1 }, {}, 25 + 400],
    ['has two segments without a reference in full', { segment: 4 }, {}, 81],
  ])('%s', (_behaviour, a, b, expected) => {
    expect(difference(a, b)).toBe(expected);
  });

  it('is 0 between two segments of no error that share a reference', () => {
    const perfect: ErrorTables = { ...TABLES, segmentOffsetSigmaNs: Float64Array.of(0, 0, 0, 0, 0) };
    expect(difference({ segment: 1 }, { segment: 1, days: 4 }, perfect)).toBe(0);
    expect(difference({ segment: 3 }, { segment: 3 }, perfect)).toBe(0);
  });
});

describe('the error of a distance', () => {
  it('is 0 within a site and has both sites otherwise', () => {
    const events = eventsOf({ site: 0 }, { site: 0 }, { site: 1 });
    expect(distanceVarianceM2(events, TABLES, 0, 1)).toBe(0);
    expect(distanceVarianceM2(events, TABLES, 0, 2)).toBeCloseTo(1, 15);
    expect(distanceVarianceM2(events, TABLES, 2, 0)).toBe(distanceVarianceM2(events, TABLES, 0, 2));
  });

  it('adds to that of the time as light goes', () => {
    const events = eventsOf({ site: 0, readingNs: 3 }, { site: 1, readingNs: 4 });
    expect(gapSigmaNs(events, TABLES, 0, 1)).toBeCloseTo(Math.hypot(5, 5, 1e9 / C_M_S), 12);
    expect(gapSigmaNs(events, TABLES, 0, 0)).toBe(Math.sqrt(18));
  });
});
