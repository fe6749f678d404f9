import { describe, expect, it } from 'vitest';
import { C_M_S } from '../constants';
import { frameDtNs, frameSigmaNs, orderFrom, turningOf } from './order';
import { type Pair } from './pair';
import { norm } from './vector';
import { AT_REST, fourVelocity } from './velocity';

const LIGHT_NS_M = C_M_S / 1e9;
/** gamma 1.25, beta 0.6 along x. */
const FAST = fourVelocity([0.75, 0, 0]);

function pairAlongX(dtNs: number, xLightNs: number, errors: { dtNs?: number; lightNs?: number } = {}): Pair {
  return {
    dtPs: dtNs * 1000,
    dtNs,
    dxM: [xLightNs * LIGHT_NS_M, 0, 0],
    distanceM: Math.abs(xLightNs) * LIGHT_NS_M,
    radiiM: 1.3e7,
    sigmaDtNs: errors.dtNs ?? 0,
    sigmaDM: (errors.lightNs ?? 0) * LIGHT_NS_M,
  };
}

describe('turningOf', () => {
  it('is the share of light-time, towards b', () => {
    const turning = turningOf(pairAlongX(300, -1000, { dtNs: 40, lightNs: 100 }));
    expect(turning.speedC).toBeCloseTo(0.3, 14);
    expect(turning.sigmaC).toBeCloseTo(Math.hypot(0.04, 0.3 * 0.1), 14);
    expect(turning.toward[0]).toBeCloseTo(-1, 15);
    expect(norm(turning.toward)).toBeCloseTo(1, 15);
  });

  it('is 0 for one instant, with the error of the time alone', () => {
    expect(turningOf(pairAlongX(0, 1000, { dtNs: 40, lightNs: 100 })).speedC).toBe(0);
    expect(turningOf(pairAlongX(0, 1000, { dtNs: 40, lightNs: 100 })).sigmaC).toBeCloseTo(0.04, 15);
  });

  it('has no error where nothing has', () => {
    expect(turningOf(pairAlongX(300, 1000)).sigmaC).toBe(0);
  });
});

describe('the time in a frame', () => {
  it('is the geocentric one at rest', () => {
    expect(frameDtNs(pairAlongX(300, 1000), AT_REST)).toBe(300);
    expect(frameSigmaNs(pairAlongX(300, 1000, { dtNs: 40, lightNs: 100 }), AT_REST)).toBe(40);
  });

  it('falls along the way to b and rises against it', () => {
    expect(frameDtNs(pairAlongX(300, 1000), FAST)).toBeCloseTo(1.25 * (300 - 600), 10);
    expect(frameDtNs(pairAlongX(300, -1000), FAST)).toBeCloseTo(1.25 * (300 + 600), 10);
  });

  it('has the error of time and place by gamma', () => {
    expect(frameSigmaNs(pairAlongX(0, 1000, { dtNs: 40 }), FAST)).toBeCloseTo(50, 12);
    expect(frameSigmaNs(pairAlongX(0, 1000, { dtNs: 40, lightNs: 50 }), FAST)).toBeCloseTo(1.25 * Math.hypot(40, 30), 12);
  });

  it('is 0 at no separation, in any frame', () => {
    expect(frameDtNs(pairAlongX(0, 0), FAST)).toBe(0);
    expect(frameSigmaNs(pairAlongX(0, 0), FAST)).toBe(0);
  });

  it('keeps a time of days', () => {
    const dtNs = 864e11 + 0.25;
    expect(frameDtNs(pairAlongX(dtNs, 0), FAST)).toBe(1.25 * dtNs);
  });
});

describe('orderFrom', () => {
  it.each([
    [31, 10, 3, 'a'],
    [30, 10, 3, 'tie'],
    [0, 10, 3, 'tie'],
    [-30, 10, 3, 'tie'],
    [-31, 10, 3, 'b'],
    [0.001, 0, 3, 'a'],
    [-0.001, 0, 3, 'b'],
    [0, 0, 3, 'tie'],
    [-0, 0, 0, 'tie'],
    [0.001, 10, 0, 'a'],
    [-0.001, 10, 0, 'b'],
  ])('dt %d ns with an error of %d ns at %d standard errors is %s', (dtNs, sigmaNs, sigmas, expected) => {
    expect(orderFrom(dtNs, sigmaNs, sigmas)).toBe(expected);
  });
});
