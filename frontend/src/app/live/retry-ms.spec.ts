import { describe, expect, it } from 'vitest';
import { retryMs } from './retry-ms';

describe('the wait before the next link', () => {
  it.each([
    [0, 0, 2_000],
    [0, 1, 3_000],
    [1, 1, 4_000],
    [2, 0.5, 5_000],
    [100, 1, 30_000],
    [100, 0, 2_000],
  ])('after %i tries with dice at %d is %i ms', (tries, dice, expected) => {
    expect(retryMs(tries, undefined, dice)).toBe(expected);
  });

  it('is not shorter than the server asked for', () => {
    expect(retryMs(0, 12_000, 0.5)).toBe(12_000);
    expect(retryMs(5, 1, 0)).toBe(2_000);
  });
});
