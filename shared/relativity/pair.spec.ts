import { describe, expect, it } from 'vitest';
import { emptyEvents, type ErrorTables, type EventColumns } from './events';
import { pairOf } from './pair';
import { type Vec3 } from './vector';

type Row = readonly [taiS: number, ps: number, placeM: Vec3, site?: number, readingNs?: number];

function eventsOf(...rows: readonly Row[]): EventColumns {
  const events = { ...emptyEvents(rows.length), count: rows.length };
  for (const [i, [taiS, ps, placeM, site = 0, readingNs = 0]] of rows.entries()) {
    events.taiS[i] = taiS;
    events.ps[i] = ps;
    [events.xM[i], events.yM[i], events.zM[i]] = placeM;
    events.site[i] = site;
    events.readingSigmaNs[i] = readingNs;
  }
  return events;
}

const TABLES: ErrorTables = {
  siteDelaySigmaNs: Float64Array.of(0, 0),
  sitePositionSigmaM: Float64Array.of(3, 4),
  segmentOffsetSigmaNs: new Float64Array(),
  segmentRateSigmaNsPerDay: new Float64Array(),
  segmentCovarianceNs2PerDay: new Float64Array(),
  segmentReference: new Int32Array(),
  referenceSigmaNs: new Float64Array(),
};
const T = 1_772_323_237;
const HERE: Vec3 = [6_378_137, 0, 0];

const pairAt = (a: Row, b: Row) => pairOf(eventsOf(a, b), TABLES, 0, 1);

describe('pairOf', () => {
  it('goes from a to b, in time and in space', () => {
    const pair = pairAt([T, 5, [10, 20, 30], 0, 6], [T, 3005, [11, 22, 28], 1, 8]);
    expect(pair).toEqual({
      dtPs: 3000,
      dtNs: 3,
      dxM: [1, 2, -2],
      distanceM: 3,
      radiiM: Math.sqrt(1400) + Math.sqrt(121 + 484 + 784),
      sigmaDtNs: 10,
      sigmaDM: 5,
    });
  });

  it('subtracts whole picoseconds first, so that one survives between two large seconds', () => {
    expect(pairAt([T, 999_999_999_999, HERE], [T + 1, 0, HERE]).dtPs).toBe(1);
    expect(pairAt([T, 999_999_999_999, HERE], [T + 1, 0, HERE]).dtNs).toBe(0.001);
  });

  it('is at 0, not at -0, for one instant and one place', () => {
    const pair = pairAt([T, 7, HERE], [T, 7, HERE]);
    expect([pair.dtPs, pair.dtNs, pair.distanceM, ...pair.dxM, pair.sigmaDM]).toEqual([0, 0, 0, 0, 0, 0, 0]);
  });

  it('has a distance of 0 between places that differ in the sign of a zero', () => {
    const pair = pairAt([T, 0, [0, 5, 0]], [T, 1, [-0, 5, -0]]);
    expect(pair.distanceM).toBe(0);
  });

  it('has no error of distance within a site that the Earth has carried on', () => {
    const pair = pairAt([T, 0, HERE], [T + 1, 0, [6_378_137, 465, 0]]);
    expect([pair.distanceM, pair.sigmaDM]).toEqual([465, 0]);
  });

  it.each([
    [9006, 999_999_999_999],
    [9007, 199_254_740_991],
  ])('is exact up to 9,007 s (%i s and %i ps)', (apartS, apartPs) => {
    expect(BigInt(pairAt([T, 0, HERE], [T + apartS, apartPs, HERE]).dtPs)).toBe(BigInt(apartS) * 10n ** 12n + BigInt(apartPs));
    // A larger count of whole seconds on the way to a smaller difference does not harm it.
    const borrowed = pairAt([T, 999_999_999_999, HERE], [T + 9008, 0, HERE]);
    expect(borrowed.dtPs).toBe(9_007_000_000_000_001);
  });

  it.each([9008, 86_400, 31_556_952, 3_155_695_200])('keeps nanoseconds to their last place over %i s', (apartS) => {
    const apartPs = 123_456_789_013;
    const { dtNs } = pairAt([T, 0, HERE], [T + apartS, apartPs, HERE]);
    // The double nearest to the exact decimal.
    expect(dtNs).toBe(Number(`${BigInt(apartS) * 10n ** 12n + BigInt(apartPs)}e-3`));
  });
});
