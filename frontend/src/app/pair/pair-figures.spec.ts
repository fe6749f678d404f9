import { describe, expect, it } from 'vitest';
import { intervalSigmaM2, intervalText, lengthText, lightText, paceText, smallTimeText, speedText, unitFor } from './pair-figures';

const LIGHT_MS_M = 299_792.458; // SI: by definition of the metre

describe('figures of a pair', () => {
  it('are in the largest unit of which there is at least one', () => {
    expect(unitFor(2e9).name).toBe('s');
    expect(unitFor(-999_999).name).toBe('\u00b5s');
    expect(unitFor(1e6).name).toBe('ms');
    expect(unitFor(1.5e6, 2).name).toBe('\u00b5s');
    expect(unitFor(0).name).toBe('ps');
  });

  it('give lengths as lengths and as light-time', () => {
    expect(lengthText(10_031_934)).toBe('10\u202f032\u00a0km');
    expect(lengthText(0.4321)).toBe('432.10\u00a0mm');
    expect(lightText(33.463 * LIGHT_MS_M)).toBe('33.463\u00a0light-ms');
  });

  it('give the interval in squares with its error to the digits that the error leaves', () => {
    // 14.207^2 - 36.354^2 = -1119.7745 by hand.
    const m2 = (14.207 ** 2 - 36.354 ** 2) * LIGHT_MS_M ** 2;
    expect(intervalText(m2, 15 * LIGHT_MS_M ** 2)).toBe('\u22121120\u00a0\u00b1\u00a015\u00a0light-ms\u00b2');
  });

  it('carry both lengths into the error of the interval', () => {
    expect(intervalSigmaM2(3, 4, 1, 0)).toBe(6);
    expect(intervalSigmaM2(3, 4, 4, 4)).toBe(40);
  });

  it('never write a slow frame as none, nor a short time as 0', () => {
    expect(speedText(0)).toBe('0');
    expect(speedText(-0.00042)).toBe('\u22120.00042');
    expect(speedText(0.45)).toBe('+0.450');
    expect(paceText(1e-4)).toBe('30.0\u00a0km/s');
    expect(paceText(0.6)).toBe('0.600\u00a0c');
    expect(smallTimeText(1e-9)).toBe('<\u00a00.1\u00a0ns');
    expect(smallTimeText(0)).toBe('0.0\u00a0ns');
  });
});
