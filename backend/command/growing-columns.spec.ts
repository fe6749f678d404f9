import { describe, expect, it } from 'vitest';
import { GrowingColumns } from './growing-columns';

const MANY = 10_000;

const made = () => new GrowingColumns((rows) => ({ timeS: new Float64Array(rows), kind: new Uint8Array(rows) }));

describe('columns that grow', () => {
  it('have no row at first and number them from 0', () => {
    const growing = made();
    expect(growing.count).toBe(0);
    expect([growing.add(), growing.add()]).toEqual([0, 1]);
    expect(growing.count).toBe(2);
  });

  it('keep every cell while they grow', () => {
    const growing = made();
    for (let n = 0; n < MANY; n++) {
      const row = growing.add();
      growing.columns.timeS[row] = n + 0.5;
      growing.columns.kind[row] = n % 3;
    }
    expect(growing.count).toBe(MANY);
    expect(growing.columns.timeS.length).toBeGreaterThanOrEqual(MANY);
    expect(Array.from(growing.columns.timeS.subarray(0, MANY))).toEqual(Array.from({ length: MANY }, (_, n) => n + 0.5));
    expect(Array.from(growing.columns.kind.subarray(0, MANY))).toEqual(Array.from({ length: MANY }, (_, n) => n % 3));
  });

  it('leave less than half of their room empty', () => {
    const growing = made();
    for (let n = 0; n < MANY; n++) growing.add();
    expect(growing.columns.timeS.length).toBeLessThan(2 * MANY);
  });
});
