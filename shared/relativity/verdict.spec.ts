import { describe, expect, it } from 'vitest';
import { C_M_S } from '../constants';
import { type Pair } from './pair';
import { gapRoundingNs, verdictOf } from './verdict';

/** Light goes this far in a nanosecond. */
const LIGHT_NS_M = C_M_S / 1e9;

function pairOfLight(dtNs: number, lightNs: number, errors: { dtNs?: number; lightNs?: number } = {}): Pair {
  const distanceM = lightNs * LIGHT_NS_M;
  return {
    dtPs: dtNs * 1000,
    dtNs,
    dxM: [0, distanceM, 0],
    distanceM,
    radiiM: distanceM,
    sigmaDtNs: errors.dtNs ?? 0,
    sigmaDM: (errors.lightNs ?? 0) * LIGHT_NS_M,
  };
}

describe('verdictOf', () => {
  it('says where the pair lies, in nanoseconds and in standard errors', () => {
    const verdict = verdictOf(pairOfLight(1000, 400, { dtNs: 30, lightNs: 40 }), 3);
    expect(verdict.class).toBe('timelike');
    expect(verdict.gapNs).toBeCloseTo(600, 10);
    expect(verdict.sigmaGapNs).toBeCloseTo(50, 10);
    expect(verdict.marginSigma).toBeCloseTo(12, 10);
    expect(verdict.reverseMarginSigma).toBeCloseTo(28, 10);
  });

  it.each([
    [1000, 849, 'timelike'],
    [1000, 851, 'undecided'],
    [1000, 1000, 'undecided'],
    [1000, 1149, 'undecided'],
    [1000, 1151, 'spacelike'],
  ])('needs more than three standard errors of 50 ns: dt %i ns and light-time %i ns are %s', (dtNs, lightNs, expected) => {
    expect(verdictOf(pairOfLight(dtNs, lightNs, { dtNs: 30, lightNs: 40 }), 3).class).toBe(expected);
  });

  it('is undecided where the gap is exactly the bound, on either side', () => {
    expect(verdictOf({ ...pairOfLight(300, 0, { dtNs: 100 }), radiiM: 0 }, 3).class).toBe('undecided');
    expect(verdictOf({ ...pairOfLight(300.000_001, 0, { dtNs: 100 }), radiiM: 0 }, 3).class).toBe('timelike');
  });

  it('can be certain that b did not cause a where the class is undecided', () => {
    const verdict = verdictOf(pairOfLight(1000, 1000, { dtNs: 50 }), 3);
    expect(verdict.class).toBe('undecided');
    expect(verdict.reverseMarginSigma).toBeCloseTo(40, 10);
  });

  it('lets the sign decide, with infinite margins, when nothing has an error', () => {
    const inside = verdictOf(pairOfLight(1000, 999), 3);
    expect(inside).toMatchObject({ class: 'timelike', sigmaGapNs: 0, marginSigma: Infinity, reverseMarginSigma: Infinity });
    const outside = verdictOf(pairOfLight(1000, 1001), 3);
    expect(outside).toMatchObject({ class: 'spacelike', sigmaGapNs: 0, marginSigma: -Infinity, reverseMarginSigma: Infinity });
    // One picosecond at one place on the Earth is far above rounding.
    expect(verdictOf({ ...pairOfLight(0.001, 0), radiiM: 1.3e7 }, 3).class).toBe('timelike');
  });

  it('is undecided with margins of 0 at one place and one instant, with and without errors', () => {
    for (const errors of [{}, { dtNs: 10 }, { dtNs: 10, lightNs: 10 }]) {
      for (const radiiM of [0, 1.3e7]) {
        const verdict = verdictOf({ ...pairOfLight(0, 0, errors), radiiM }, 3);
        expect(verdict).toMatchObject({ class: 'undecided', gapNs: 0, marginSigma: 0, reverseMarginSigma: 0 });
      }
    }
  });

  it('is undecided on the light cone itself, where an error of 0 leaves rounding alone to decide', () => {
    // Many of these gaps are not 0 in doubles.
    for (let lightNs = 1; lightNs <= 1000; lightNs++) expect(verdictOf(pairOfLight(lightNs, lightNs), 3).class).toBe('undecided');
    const rounding = gapRoundingNs(pairOfLight(1000, 1000));
    expect(verdictOf(pairOfLight(1000 + 2 * rounding, 1000), 0).class).toBe('timelike');
    expect(verdictOf(pairOfLight(1000 - 2 * rounding, 1000), 0).class).toBe('spacelike');
  });

  it('is spacelike for two places at one instant', () => {
    expect(verdictOf(pairOfLight(0, 1000, { dtNs: 100 }), 3)).toMatchObject({ class: 'spacelike' });
    expect(verdictOf(pairOfLight(0, 1000, { dtNs: 100 }), 3).reverseMarginSigma).toBeCloseTo(10, 10);
    expect(verdictOf(pairOfLight(0, 1000, { dtNs: 400 }), 3).class).toBe('undecided');
  });

  it('asks for no more than the sign at 0 standard errors', () => {
    expect(verdictOf(pairOfLight(1000, 999, { dtNs: 500 }), 0).class).toBe('timelike');
    expect(verdictOf(pairOfLight(1000, 1001, { dtNs: 500 }), 0).class).toBe('spacelike');
  });
});

describe('gapRoundingNs', () => {
  it('is below a femtosecond between sites on the Earth within a second', () => {
    const pair = { ...pairOfLight(4e7, 4e7), radiiM: 1.3e7 };
    expect(gapRoundingNs(pair)).toBeLessThan(1e-6);
    expect(gapRoundingNs(pair)).toBeGreaterThan(0);
  });

  it('grows with a time difference that doubles hold less well', () => {
    expect(gapRoundingNs(pairOfLight(1e15, 0))).toBeGreaterThan(0.8);
    expect(gapRoundingNs(pairOfLight(-1e15, 0))).toBe(gapRoundingNs(pairOfLight(1e15, 0)));
  });
});
