import { describe, expect, it } from 'vitest';
import { numberTyped } from './number-typed';

describe('a typed number', () => {
  it.each([
    ['1043.2', 1043.2],
    [' 1 043,2 ', 1043.2],
    ['\u22124.7', -4.7],
    ['1e-3', 0.001],
    ['', undefined],
    ['12 ns', '12 ns'],
    ['Infinity', 'Infinity'],
    ['1.2.3', '1.2.3'],
  ])('%j is %j', (typed, value) => {
    expect(numberTyped(typed)).toBe(value);
  });
});
