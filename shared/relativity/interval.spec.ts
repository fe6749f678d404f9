import { describe, expect, it } from 'vitest';
import { C_M_S } from '../constants';
import { intervalM2, properDistanceM, properTimeS } from './interval';

describe('intervalM2', () => {
  it('is positive for timelike and negative for spacelike separations', () => {
    expect(intervalM2(1e9, 0)).toBe(C_M_S ** 2);
    expect(intervalM2(0, 3)).toBe(-9);
  });

  it('is 0, not -0, at no separation', () => {
    expect(intervalM2(0, 0)).toBe(0);
  });

  it('does not depend on the sign of the time', () => {
    expect(intervalM2(-5000, 1000)).toBe(intervalM2(5000, 1000));
  });

  it('keeps the digits of what two nearly equal lengths differ by', () => {
    // c x 1 s is 299,792,458 m; 0.5 m less: (0.5)(599,584,915.5) in whole halves. The difference of two squares would be off by up to 16.
    expect(intervalM2(1e9, 299_792_457.5)).toBe(299_792_457.75);
    expect(intervalM2(1e9, 299_792_458.5)).toBe(-299_792_458.25);
  });

  it('holds over a year', () => {
    const ns = 31_556_952e9;
    expect(intervalM2(ns, 0) / ((ns / 1e9) * C_M_S) ** 2).toBeCloseTo(1, 15);
  });
});

describe('proper time and proper distance', () => {
  it('are those of the frame in which the other part is 0', () => {
    expect(properTimeS(intervalM2(2e9, 0))).toBe(2);
    expect(properDistanceM(intervalM2(0, 1234.5))).toBe(1234.5);
  });

  it('shorten by 1 / gamma: 3 light-seconds apart in 5 s is 4 s', () => {
    expect(properTimeS(intervalM2(5e9, 3 * C_M_S))).toBeCloseTo(4, 14);
    expect(properDistanceM(intervalM2(3e9, 5 * C_M_S))).toBeCloseTo(4 * C_M_S, 6);
  });

  it('are 0 on the light cone', () => {
    expect(Math.abs(properTimeS(0))).toBe(0);
    expect(Math.abs(properDistanceM(0))).toBe(0);
  });
});
