import { describe, expect, it } from 'vitest';
import { SLICE_S } from '../stream/plan';
import { resume } from './session';

const FIRST = 1_790_000_000;
const HOUR_S = 3_600;

describe('the stream of the demo goes on', () => {
  it('at its first start with the minutes before it, which began when the demo was made', () => {
    const { session, fromSlice, former } = resume(undefined, FIRST, FIRST + 605);
    expect(session).toEqual({ series: '', firstSlice: 0, lastTaiS: FIRST + 605 });
    expect(fromSlice).toBe(0);
    expect(former).toBeUndefined();
  });

  it('after a short pause where it was, sending once more what may have been on its way', () => {
    const known = { series: '', firstSlice: 0, lastTaiS: FIRST + HOUR_S };
    const { session, fromSlice } = resume(known, FIRST, FIRST + HOUR_S + 300);
    expect(session).toBe(known);
    expect(fromSlice * SLICE_S).toBeLessThanOrEqual(HOUR_S - 90);
    expect(fromSlice * SLICE_S).toBeGreaterThan(HOUR_S - 300);
  });

  it('never before the records that its session is numbered from', () => {
    const known = { series: 's100', firstSlice: 100, lastTaiS: FIRST + 100 * SLICE_S + 20 };
    expect(resume(known, FIRST, known.lastTaiS + 5).fromSlice).toBe(100);
  });

  it('after a long one with a numbering of its own, and says until when the former was live', () => {
    const known = { series: '', firstSlice: 0, lastTaiS: FIRST + HOUR_S };
    const { session, fromSlice, former } = resume(known, FIRST, FIRST + 10 * HOUR_S);
    expect(session.series).toMatch(/^s\d+$/);
    expect(session.series).not.toBe(known.series);
    expect(fromSlice).toBe(session.firstSlice);
    expect(fromSlice * SLICE_S).toBe(10 * HOUR_S - 600);
    expect(former).toBe(known);
  });

  it('with another numbering when nobody knows what was sent', () => {
    expect(resume(undefined, FIRST, FIRST + 10 * HOUR_S).session.series).not.toBe('');
  });
});
