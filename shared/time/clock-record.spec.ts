import { describe, expect, it } from 'vitest';
import { clockVarianceNs2, EXACT_CLOCK, type ClockSegment } from './clock-record';

const segment: ClockSegment = {
  from: { taiS: 0, ps: 0 },
  at: { taiS: 0, ps: 0 },
  offsetNs: 1830.2,
  offsetSigmaNs: 12,
  rateNsPerDay: -35.1,
  rateSigmaNsPerDay: 2.5,
  covarianceNs2PerDay: -3,
};

describe("the variance of a clock's error", () => {
  it.each([
    [0, 144],
    [2, 144 - 12 + 25],
    [-2, 144 + 12 + 25],
  ])('%d days after at', (tauDays, varianceNs2) => {
    expect(clockVarianceNs2(segment, tauDays)).toBe(varianceNs2);
  });

  it('is never below 0, not even where offset and rate are wholly correlated', () => {
    const bound = { ...segment, offsetSigmaNs: 0.1, rateSigmaNsPerDay: 0.3, covarianceNs2PerDay: -0.1 * 0.3 };
    for (let i = -50; i <= 50; i++) expect(clockVarianceNs2(bound, (0.1 / 0.3) * (1 + i * 1e-16))).toBeGreaterThanOrEqual(0);
  });

  it('of an exact clock is 0', () => {
    expect(clockVarianceNs2(EXACT_CLOCK[0]!, 1000)).toBe(0);
  });
});
