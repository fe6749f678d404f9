import { AstroTime, BaryState, Body, HelioState, type StateVector } from 'astronomy-engine';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { norm, scale, subtract, type Vec3 } from '#shared/relativity/vector';
import { type Instant, instantOf } from '#shared/time/instant';
import { earthBarycentricState } from './earth-series';
import { earthBarycentricPlaceM, earthBarycentricVelocityMS } from './ephemeris';

const START_S = 1_700_000_000;
const [FROM_S, TO_S] = [-2_208_988_800, 4_102_444_800]; // 1900 and 2100
const AU_M = 149_597_870_700;

const instants = fc
  .record({ taiS: fc.integer({ min: FROM_S, max: TO_S }), ps: fc.integer({ min: 0, max: 1e12 - 1 }) })
  .map(({ taiS, ps }) => instantOf(taiS, ps));

/** What the independent ephemeris (VSOP87: Bretagnon and Francou 1988, shortened) says. */
function packageSays(stateAt: (time: AstroTime) => StateVector, { taiS }: Instant): { placeM: Vec3; velocityMS: Vec3 } {
  const { x, y, z, vx, vy, vz } = stateAt(AstroTime.FromTerrestrialTime((taiS + 32.184 - 946_728_000) / 86_400));
  return { placeM: scale(AU_M, [x, y, z]), velocityMS: scale(AU_M / 86_400, [vx, vy, vz]) };
}

describe("the Earth's barycentric motion", () => {
  it('gives the same bits whatever was asked before', () => {
    const asked = Array.from({ length: 40 }, (_, index) =>
      instantOf(START_S + ((index * 7_919_317) % 9_000_000), (index * 314_159_265_358) % 1e12),
    );
    const there = asked.map(earthBarycentricVelocityMS);
    expect(asked.toReversed().map(earthBarycentricVelocityMS).toReversed()).toEqual(there);
  });

  it('has no step at a knot', () => {
    const knot = Math.ceil(START_S / 21_600) * 21_600;
    const [before, at] = [instantOf(knot - 1, 999_999_999_999), instantOf(knot, 0)];
    expect(norm(subtract(earthBarycentricVelocityMS(at), earthBarycentricVelocityMS(before)))).toBeLessThan(1e-9);
    // A place of 1.5e11 m has a grain of 3e-5 m.
    expect(norm(subtract(earthBarycentricPlaceM(at), earthBarycentricPlaceM(before)))).toBeLessThan(2e-4);
  });

  it('loses less than 0.1 mm/s and 1 m between the knots', () => {
    fc.assert(
      fc.property(instants, (instant) => {
        const { placeM, velocityMS } = earthBarycentricState(instant);
        expect(norm(subtract(earthBarycentricVelocityMS(instant), velocityMS))).toBeLessThan(1e-4);
        expect(norm(subtract(earthBarycentricPlaceM(instant), placeM))).toBeLessThan(1);
      }),
    );
  });

  it('has a place that changes as the velocity says', () => {
    fc.assert(
      fc.property(instants, ({ taiS, ps }) => {
        const [before, after] = [earthBarycentricState(instantOf(taiS - 500, ps)), earthBarycentricState(instantOf(taiS + 500, ps))];
        const meanMS = scale(1e-3, subtract(after.placeM, before.placeM));
        // The change of the acceleration in 500 s, at most 2e-9 m/s^3 times 500^2 / 6, and the grain of the places.
        expect(norm(subtract(meanMS, earthBarycentricState(instantOf(taiS, ps)).velocityMS))).toBeLessThan(2e-4);
      }),
    );
  });

  it('is that of an independent ephemeris, within what that one leaves out', () => {
    fc.assert(
      fc.property(instants, (instant) => {
        const bare = packageSays((time) => BaryState(Body.Earth, time), instant);
        // It keeps the largest of the terms of the Earth's monthly motion about the common centre of mass with the Moon.
        expect(norm(subtract(earthBarycentricVelocityMS(instant), bare.velocityMS))).toBeLessThan(2.2);
        expect(norm(subtract(earthBarycentricPlaceM(instant), bare.placeM))).toBeLessThan(4e6);
      }),
    );
  });

  it('is not the heliocentric motion', () => {
    const instant = instantOf(START_S, 0);
    const heliocentric = packageSays((time) => HelioState(Body.Earth, time), instant);
    // The Sun moves at 8 to 16 m/s about the barycentre.
    expect(norm(subtract(earthBarycentricVelocityMS(instant), heliocentric.velocityMS))).toBeGreaterThan(7);
  });
});
