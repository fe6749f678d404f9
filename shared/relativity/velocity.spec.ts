import { describe, expect, it } from 'vitest';
import { speedFromC, speedFromKmS, speedFromRapidity } from './speed';
import { AT_REST, betaC, fourVelocity, gammaLessOne, rapidity, shortOfLightC, speedC, velocityFromBeta, velocityToward } from './velocity';

const WHERE = 'frames[2].velocity.beta';
const X = [1, 0, 0] as const;

/** A few units in the last place. */
const ROUNDING = 1e-15;

describe('velocityFromBeta', () => {
  it.each([
    [[1, 0, 0]],
    [[0.6, 0.6, 0.6]],
    [[0.8, 0.6, 1e-8]],
    [[-2, 0, 0]],
    [[0, Number.NaN, 0]],
    [[0, 0, Number.POSITIVE_INFINITY]],
    [[1e300, 0, 0]],
  ] as const)('refuses the velocity %j, at or above the speed of light or not finite', (beta) => {
    const outcome = velocityFromBeta(beta, WHERE);
    if (outcome.ok) throw new Error('accepted');
    expect(outcome.problem).toMatchObject({ code: 'frame-speed', where: WHERE });
    expect(outcome.problem.text).toContain(beta.join(', '));
  });
  it('keeps the gamma of the very doubles along a diagonal, where 1 - beta^2 in doubles has lost nine digits', () => {
    const component = 0.577350268; // 1 - 3 * 0.577350268^2 = 4.1155...e-9
    const outcome = velocityFromBeta([component, component, component], WHERE);
    if (!outcome.ok) throw new Error(outcome.problem.text);
    // The double nearest to 0.577350268 as a fraction of 2^53, squared in whole numbers.
    const whole = BigInt(component * 2 ** 53);
    const rest = Number(2n ** 106n - 3n * whole * whole) / 2 ** 106;
    expect(Math.abs(outcome.value.gamma * Math.sqrt(rest) - 1)).toBeLessThan(ROUNDING);
  });
  it('accepts rest', () => {
    expect(velocityFromBeta([0, 0, 0], WHERE)).toEqual({ ok: true, value: AT_REST, warnings: [] });
  });
});

describe('speeds', () => {
  it.each([
    [speedFromC, 1],
    [speedFromC, -1],
    [speedFromC, Number.NaN],
    [speedFromKmS, 299_792.458],
    [speedFromKmS, Number.NEGATIVE_INFINITY],
    [speedFromRapidity, 300.1],
    [speedFromRapidity, Number.NaN],
  ] as const)('refuses what is at or above the speed of light, not finite or too fast for a double (%o, %d)', (read, value) => {
    const outcome = read(value, 'velocity');
    if (outcome.ok) throw new Error('accepted');
    expect(outcome.problem).toMatchObject({ code: 'frame-speed', where: 'velocity' });
    expect(outcome.problem.text).toContain(String(value));
  });
  it('says the same speed in c, in km/s and as a rapidity, also against the direction', () => {
    for (const c of [0.6, -0.6]) {
      const speeds = [speedFromC(c, ''), speedFromKmS(c * 299_792.458, ''), speedFromRapidity(Math.atanh(c), '')];
      for (const outcome of speeds) {
        if (!outcome.ok) throw new Error(outcome.problem.text);
        expect(outcome.value.gamma).toBeCloseTo(1.25, 14);
        expect(outcome.value.gammaBeta).toBeCloseTo(c * 1.25, 14);
        expect(betaC(velocityToward(outcome.value, X))[0]).toBeCloseTo(c, 14);
      }
    }
  });
});

describe('readers', () => {
  it('never say that a frame moves at c, whatever its gamma', () => {
    for (const size of [1e8, 1e20, 1e130]) {
      const velocity = fourVelocity([0, -size, 0]);
      expect(speedC(velocity)).toBeLessThan(1);
      expect(shortOfLightC(velocity) * 2 * size * size).toBeCloseTo(1, 12);
      expect(rapidity(velocity)).toBeCloseTo(Math.log(2 * size), 10);
    }
  });
  it('keep gamma - 1 and the distance from c where neither shows in a double of gamma or beta', () => {
    expect(gammaLessOne(fourVelocity([1e-9, 0, 0])) / 0.5e-18).toBeCloseTo(1, 14);
    expect(shortOfLightC(fourVelocity([1e9, 0, 0])) / 0.5e-18).toBeCloseTo(1, 14);
    expect(shortOfLightC(AT_REST)).toBe(1);
  });
});
