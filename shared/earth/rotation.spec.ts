import { describe, expect, it } from 'vitest';
import { constantOrientation, type EarthOrientation } from './earth-orientation';
import { EARTH_ROTATION_RAD_S, earthRotationAngleRad } from './earth-rotation-angle';
import { orientationTable } from './orientation-table';
import { earthRotation } from './rotation';
import { fixedSiteWorldline } from './worldline';
import { norm, subtract, type Vec3 } from '../relativity/vector';
import { instantOf } from '../time/instant';

const SITE: Vec3 = [4_546_374.099, 842_989.697626, 4_378_576.96241];
/** Places of millions of metres in doubles. */
const ROUNDING_M = 1e-8;

/** A table of ten days that starts 1 s before a whole hour, so that its kinks lie inside the hours of the grid. */
function kinkedTable(): EarthOrientation {
  const outcome = orientationTable(
    Array.from({ length: 10 }, (_, day) => ({
      mjd: 58_000 + day,
      taiS: 1_504_483_200 + day * 86_400 - 1,
      values: { ut1MinusTaiS: -36.7 - 0.001 * day + 0.0005 * (day % 2), poleXRad: 1e-6 + 1e-8 * day, poleYRad: 2e-6 - 1e-8 * (day % 3) },
      kind: 'measured',
    })),
  );
  if (!outcome.ok) throw new Error(outcome.problem.text);
  return outcome.value;
}

describe('earthRotation', () => {
  it('gives the same bits whatever was asked before', () => {
    const instants = Array.from({ length: 60 }, (_, index) =>
      instantOf(1_504_483_200 + ((index * 7_919_317) % 900_000), (index * 314_159_265_358) % 1e12),
    );
    const forwards = fixedSiteWorldline(SITE, earthRotation(kinkedTable()));
    const backwards = fixedSiteWorldline(SITE, earthRotation(kinkedTable()));
    const there = instants.map((instant) => forwards.placeAt(instant));
    const back = instants
      .toReversed()
      .map((instant) => backwards.placeAt(instant))
      .toReversed();
    expect(back).toEqual(there);
    expect(instants.map((instant) => forwards.placeAt(instant))).toEqual(there);
  });

  it('gives the same bits after more hours than it keeps', () => {
    const site = fixedSiteWorldline(SITE, earthRotation(constantOrientation(-37)));
    const first = site.placeAt(instantOf(1_000_000_000, 5));
    for (let hour = 0; hour < 16_500; hour++) site.placeAt(instantOf(1_100_000_000 + hour * 3600, 0));
    expect(site.placeAt(instantOf(1_000_000_000, 5))).toEqual(first);
  });

  it('has no step at a whole hour, at midnight or at the ends of a table', () => {
    const site = fixedSiteWorldline(SITE, earthRotation(kinkedTable()));
    const start = 1_504_483_200;
    for (const taiS of [start - 1, start, start + 3600, start + 86_399, start + 86_400, start + 9 * 86_400 - 1, start + 9 * 86_400]) {
      const [before, at] = [site.placeAt(instantOf(taiS - 1, 999_999_999_999)), site.placeAt(instantOf(taiS, 0))];
      expect(norm(subtract(at, before)), String(taiS)).toBeLessThan(ROUNDING_M);
    }
  });

  it('takes instants before 1970', () => {
    const site = fixedSiteWorldline(SITE, earthRotation(constantOrientation(-8)));
    const [before, at] = [site.placeAt(instantOf(-3600, 0)), site.placeAt(instantOf(-3601, 999_999_999_999))];
    expect(norm(subtract(at, before))).toBeLessThan(ROUNDING_M);
  });

  it('moves a site by picoseconds, not by the grain of a floating-point epoch', () => {
    const site = fixedSiteWorldline([6_378_137, 0, 0], earthRotation(constantOrientation(-37)));
    const apartM = norm(subtract(site.placeAt(instantOf(1_700_000_000, 1_000_000_000)), site.placeAt(instantOf(1_700_000_000, 0))));
    // 1 ms at 465.1 m/s; a double of seconds since 1970 has a grain of 2.4e-7 s, 1e-4 m.
    expect(Math.abs(apartM - 0.4651011)).toBeLessThan(1e-6);
  });

  it('writes three numbers where it is told and nothing beside them', () => {
    const out = new Float64Array(5).fill(7);
    earthRotation(constantOrientation(-37)).placeInto(...SITE, 1_700_000_000, 0, out, 1);
    expect([out[0], out[4]]).toEqual([7, 7]);
    expect(Math.abs(Math.hypot(...out.slice(1, 4)) - norm(SITE))).toBeLessThan(ROUNDING_M);
  });
});

describe('earthRotationAngleRad', () => {
  it('is 280.46 degrees at noon of 2000-01-01 UT1, by definition', () => {
    expect(earthRotationAngleRad(946_728_000, 0) / (2 * Math.PI)).toBeCloseTo(0.779057273264, 15);
  });

  it('grows by the defined rate over a day, whole turns dropped, and over a second', () => {
    for (const taiS of [0, 946_728_000, 1_700_000_000, 2_400_000_000]) {
      const dayRad = earthRotationAngleRad(taiS + 86_400, -37) - earthRotationAngleRad(taiS, -37);
      expect(Math.abs(Math.sin((dayRad - EARTH_ROTATION_RAD_S * 86_400) / 2))).toBeLessThan(2e-15);
      const secondRad = earthRotationAngleRad(taiS + 1, -37) - earthRotationAngleRad(taiS, -37);
      expect(Math.abs(Math.sin((secondRad - EARTH_ROTATION_RAD_S) / 2))).toBeLessThan(2e-15);
    }
  });
});
