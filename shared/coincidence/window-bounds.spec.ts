import { describe, expect, it } from 'vitest';
import { C_M_S } from '../constants';
import { windowBounds } from './window-bounds';

const LIGHT_SECOND_M = C_M_S;
/** What the bounds are moved outward: a picosecond, and a nanometre a metre. */
const OUTWARD_NS = 2;

const line = (mostRadiusM: number, mostSpeedMS = 0) => ({ placeAt: () => [0, 0, 0] as const, mostRadiusM, mostSpeedMS });
const lightTime = (speedC: number, marginNs: number) => ({ kind: 'light-time', speedC, marginNs }) as const;

describe('windowBounds', () => {
  it('has nothing for no sites, and never lets two triggers of one site be near', () => {
    expect(windowBounds(lightTime(1, 0), [], () => ({ leastM: 0, mostM: 0 })).possibleNs).toHaveLength(0);
    const one = windowBounds(lightTime(1, 0), [line(0)], () => ({ leastM: 0, mostM: 0 }));
    expect([...one.certainNs, ...one.possibleNs]).toEqual([-1, -1]);
  });

  it('encloses the light time of sites that rest, closely and from both sides', () => {
    const { certainNs, possibleNs, reachFactor } = windowBounds(lightTime(0.5, 100), [line(LIGHT_SECOND_M), line(LIGHT_SECOND_M)], () => ({
      leastM: LIGHT_SECOND_M,
      mostM: LIGHT_SECOND_M,
    }));
    const exactNs = 2e9 + 100;
    expect(certainNs[1]).toBeLessThan(exactNs);
    expect(certainNs[1]).toBeGreaterThan(exactNs - OUTWARD_NS - exactNs * 1e-9);
    expect(possibleNs[1]).toBeGreaterThan(exactNs);
    expect(possibleNs[1]).toBeLessThan(exactNs + OUTWARD_NS + exactNs * 1e-9);
    expect(certainNs[2]).toBe(certainNs[1]);
    expect(reachFactor).toBeGreaterThanOrEqual(1);
    expect(reachFactor).toBeLessThan(1.01);
  });

  it('widens the window by the motion of the slower site, and the reach as much', () => {
    const speedMS = 0.2 * C_M_S;
    const { certainNs, possibleNs, reachFactor } = windowBounds(lightTime(1, 0), [line(1e12, speedMS), line(1e12, 0.9 * C_M_S)], () => ({
      leastM: LIGHT_SECOND_M,
      mostM: LIGHT_SECOND_M,
    }));
    // dt <= L / c + (v / c) dt and dt <= L / c - (v / c) dt at their limits.
    expect(possibleNs[1]! / (1e9 / 0.8)).toBeCloseTo(1, 6);
    expect(certainNs[1]! / (1e9 / 1.2)).toBeCloseTo(1, 6);
    expect(reachFactor).toBeGreaterThanOrEqual(1 / 0.8);
  });

  it('falls back to the sum of the radii where a platform is nearly as fast as the signal', () => {
    const bounds = windowBounds(lightTime(1e-5, 0), [line(1e6, 2_900), line(2e6, 2_900)], () => ({ leastM: 0, mostM: 1e6 }));
    expect(bounds.possibleNs[1]! / ((3e6 / (1e-5 * C_M_S)) * 1e9)).toBeCloseTo(1, 6);
    expect(bounds.reachFactor).toBeLessThan(1.01);
  });

  it('takes a fixed window as it is in the geocentric frame, and adds the light time of the radii in any other', () => {
    const fixed = (frame: string) => ({ kind: 'fixed', widthNs: 1_000, frame }) as const;
    const apart = () => ({ leastM: 0, mostM: 0 });
    const sites = [line(LIGHT_SECOND_M), line(LIGHT_SECOND_M)];
    expect(windowBounds(fixed('geocentric'), sites, apart).possibleNs[1]).toBeCloseTo(1_000, 1);
    expect(windowBounds(fixed('cmb'), sites, apart).possibleNs[1]! / (2e9 + 1_000)).toBeCloseTo(1, 6);
    expect(windowBounds(fixed('cmb'), sites, apart).certainNs[1]).toBe(-1);
  });
});
