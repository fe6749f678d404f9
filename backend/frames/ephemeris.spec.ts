import { AstroTime, BaryState, Body, HelioState } from 'astronomy-engine';
import { describe, expect, it } from 'vitest';
import { norm, scale, subtract, type Vec3 } from '#shared/relativity/vector';
import { instantOf } from '#shared/time/instant';
import { earthBarycentricPlaceM, earthBarycentricVelocityMS } from './ephemeris';

const START_S = 1_700_000_000;

describe("the Earth's barycentric motion", () => {
  it('gives the same bits whatever was asked before', () => {
    const instants = Array.from({ length: 40 }, (_, index) =>
      instantOf(START_S + ((index * 7_919_317) % 9_000_000), (index * 314_159_265_358) % 1e12),
    );
    const there = instants.map(earthBarycentricVelocityMS);
    expect(instants.toReversed().map(earthBarycentricVelocityMS).toReversed()).toEqual(there);
  });

  it('has no step at a whole hour', () => {
    const hour = Math.ceil(START_S / 3600) * 3600;
    const [before, at] = [instantOf(hour - 1, 999_999_999_999), instantOf(hour, 0)];
    expect(norm(subtract(earthBarycentricVelocityMS(at), earthBarycentricVelocityMS(before)))).toBeLessThan(1e-9);
    // A place of 1.5e11 m has a grain of 3e-5 m.
    expect(norm(subtract(earthBarycentricPlaceM(at), earthBarycentricPlaceM(before)))).toBeLessThan(2e-4);
  });

  it('loses 3 mm/s at most between the hours', () => {
    // At half past, the mean of the two hours against the mean of four around them (third order), over a month.
    const errors = Array.from({ length: 720 }, (_, index) => {
      const half = Math.floor(START_S / 3600) * 3600 + index * 3600 + 1800;
      const at = (seconds: number): Vec3 => earthBarycentricVelocityMS(instantOf(half + seconds, 0));
      const [far, near] = [scale(-1 / 16, at(-5400)), scale(9 / 16, at(-1800))];
      const [nearAfter, farAfter] = [scale(9 / 16, at(1800)), scale(-1 / 16, at(5400))];
      const better = [0, 1, 2].map((axis) => [far, near, nearAfter, farAfter].reduce((sum, part) => sum + part[axis as 0 | 1 | 2], 0));
      return norm(subtract(at(0), better as unknown as Vec3));
    });
    expect(Math.max(...errors)).toBeLessThan(3e-3);
  });

  it('has a place that changes as the velocity says', () => {
    // The package holds place and velocity apart: they agree within its slow terms.
    const movedM = subtract(earthBarycentricPlaceM(instantOf(START_S + 500, 0)), earthBarycentricPlaceM(instantOf(START_S - 500, 0)));
    expect(norm(subtract(scale(1e-3, movedM), earthBarycentricVelocityMS(instantOf(START_S, 0))))).toBeLessThan(0.01);
  });

  it("differs from the package's bare Earth by the part of the monthly motion that it leaves out", () => {
    const differences = Array.from({ length: 60 }, (_, day) => {
      const taiS = START_S + day * 86_400;
      const bare = BaryState(Body.Earth, AstroTime.FromTerrestrialTime((taiS + 32.184 - 946_728_000) / 86_400));
      const bareMS = scale(149_597_870_700 / 86_400, [bare.vx, bare.vy, bare.vz]);
      return norm(subtract(earthBarycentricVelocityMS(instantOf(taiS, 0)), bareMS));
    });
    expect(Math.max(...differences)).toBeLessThan(2.2);
    expect(Math.max(...differences)).toBeGreaterThan(1);
  });

  it('is not the heliocentric motion', () => {
    const sun = HelioState(Body.Earth, AstroTime.FromTerrestrialTime((START_S + 32.184 - 946_728_000) / 86_400));
    const heliocentricMS = scale(149_597_870_700 / 86_400, [sun.vx, sun.vy, sun.vz]);
    // The Sun moves at 8 to 16 m/s about the barycentre.
    expect(norm(subtract(earthBarycentricVelocityMS(instantOf(START_S, 0)), heliocentricMS))).toBeGreaterThan(7);
  });
});
