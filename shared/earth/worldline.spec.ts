import { describe, expect, it } from 'vitest';
import { constantOrientation } from './earth-orientation';
import { earthRotation } from './rotation';
import { fixedSiteWorldline, isFixedSite, separationBounds } from './worldline';
import { type Worldline } from '../relativity/worldline';
import { norm, subtract } from '../relativity/vector';
import { instantOf } from '../time/instant';

const rotation = earthRotation(constantOrientation(-37));
const equator = fixedSiteWorldline([6_378_137, 0, 0], rotation);
const pole = fixedSiteWorldline([0, 0, 6_356_752.3142], rotation);
const flying: Worldline = { placeAt: () => [7e6, 0, 0], mostSpeedMS: 8000, mostRadiusM: 7.1e6 };

describe('fixedSiteWorldline', () => {
  it('lets a pole move only as its axis may', () => {
    // 2 arcseconds on each axis, twice, turned once a day: 0.01 m/s.
    expect(pole.mostSpeedMS).toBeLessThan(0.02);
    const instant = instantOf(1_700_000_000, 0);
    expect(norm(subtract(pole.placeAt(instantOf(1_700_086_400, 0)), pole.placeAt(instant)))).toBeLessThan(pole.mostSpeedMS * 86_400);
  });

  it('returns places of its own, which a later one leaves alone', () => {
    const first = equator.placeAt(instantOf(0, 0));
    const kept = [...first];
    equator.placeAt(instantOf(43_200, 0));
    expect([...first]).toEqual(kept);
  });
});

describe('separationBounds', () => {
  it('are the chord, within rounding, for two sites on one Earth', () => {
    const { leastM, mostM } = separationBounds(equator, pole);
    const chordM = Math.hypot(6_378_137, 6_356_752.3142);
    expect(leastM).toBeLessThan(chordM);
    expect(mostM).toBeGreaterThan(chordM);
    expect(mostM - leastM).toBeLessThan(1e-7);
  });

  it('begin at 0 for one site twice', () => {
    expect(separationBounds(equator, equator).leastM).toBe(0);
    expect(separationBounds(equator, equator).mostM).toBeLessThan(1e-7);
  });

  it('know nothing but the radii where one of the two flies, or each has its own Earth', () => {
    const elsewhere = fixedSiteWorldline([0, 6_378_137, 0], earthRotation(constantOrientation(-36)));
    expect(isFixedSite(flying)).toBe(false);
    for (const other of [flying, elsewhere]) {
      expect(separationBounds(equator, other)).toEqual({ leastM: 0, mostM: equator.mostRadiusM + other.mostRadiusM });
    }
  });
});
