import { describe, expect, it } from 'vitest';
import { constantOrientation } from './earth-orientation';
import { type OrientationRow, orientationTable } from './orientation-table';

const DAY_S = 86_400;
const row = (day: number, ut1MinusTaiS: number, kind: OrientationRow['kind'] = 'measured'): OrientationRow => ({
  mjd: 50_000 + day,
  taiS: day * DAY_S,
  values: { ut1MinusTaiS, poleXRad: day * 1e-7, poleYRad: -day * 2e-7 },
  kind,
});

function tableOf(rows: readonly OrientationRow[]) {
  const outcome = orientationTable(rows);
  if (!outcome.ok) throw new Error(outcome.problem.text);
  return outcome.value;
}

describe('orientationTable', () => {
  const table = tableOf([row(1, -37), row(2, -37.001), row(3, -37.003), row(4, -37.004, 'predicted')]);

  it('gives the values of a row at its time', () => {
    for (const { taiS, values } of table.rows) expect(table.valuesAt(taiS)).toEqual(values);
  });

  it('is linear in between', () => {
    expect(table.valuesAt(2.25 * DAY_S).ut1MinusTaiS).toBeCloseTo(-37.0015, 12);
    expect(table.valuesAt(2.25 * DAY_S).poleXRad).toBeCloseTo(2.25e-7, 20);
    expect(table.valuesAt(2.25 * DAY_S).poleYRad).toBeCloseTo(-4.5e-7, 20);
  });

  it('holds the end values outside and says so', () => {
    expect(table.valuesAt(DAY_S - 1)).toEqual(table.valuesAt(DAY_S));
    expect(table.valuesAt(99 * DAY_S)).toEqual(table.valuesAt(4 * DAY_S));
    expect(table.warningAt(DAY_S - 1)?.code).toBe('orientation-before');
    expect(table.warningAt(4 * DAY_S + 1)?.code).toBe('orientation-after');
  });

  it('warns of nothing between measured days, ends included', () => {
    for (const day of [1, 1.5, 2, 2.999]) expect(table.warningAt(day * DAY_S)).toBeUndefined();
  });

  it('says where a prediction takes part', () => {
    for (const day of [3.001, 4]) expect(table.warningAt(day * DAY_S)?.code).toBe('orientation-predicted');
  });

  it('finds its place in days that a leap second has moved', () => {
    const shifted = [1, 2, 3, 4, 5].map((day) => ({
      ...row(day, -37 - day / 1e3),
      taiS: day * DAY_S + (day > 2 ? 1 : 0) + (day > 4 ? 1 : 0),
    }));
    const { valuesAt } = tableOf(shifted);
    for (const { taiS, values } of shifted) {
      expect(valuesAt(taiS)).toEqual(values);
      // A second of a day is 1e-3 s / 86400 of change: before and after a row lie on both sides of it.
      expect(valuesAt(taiS - 0.5).ut1MinusTaiS).toBeGreaterThanOrEqual(values.ut1MinusTaiS);
      expect(valuesAt(taiS + 0.5).ut1MinusTaiS).toBeLessThanOrEqual(values.ut1MinusTaiS);
    }
  });

  it('holds the values of a single day everywhere', () => {
    const single = tableOf([row(1, -37)]);
    for (const day of [0, 1, 2]) expect(single.valuesAt(day * DAY_S)).toEqual(single.rows[0]!.values);
  });
});

describe('constantOrientation', () => {
  it('is the same at every time, with the pole at the origin, and warns always', () => {
    const orientation = constantOrientation(-37);
    expect(orientation.valuesAt(-1e9)).toEqual({ ut1MinusTaiS: -37, poleXRad: 0, poleYRad: 0 });
    expect(orientation.valuesAt(2e9)).toEqual(orientation.valuesAt(0));
    expect(orientation.warningAt(0)?.code).toBe('orientation-none');
  });
});
