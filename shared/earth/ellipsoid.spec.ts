import { describe, expect, it } from 'vitest';
import { eccentricitySquared, geodeticToItrs, itrsToGeodetic, WGS84 } from './ellipsoid';
import { norm, subtract, type Vec3 } from '../relativity/vector';

const POLE_M = WGS84.semiMajorM * Math.sqrt(1 - eccentricitySquared(WGS84));
/** Distance of the evolute's cusp from the centre, e2 a: within it a point has more than one normal to the ellipse. */
const CUSP_M = eccentricitySquared(WGS84) * WGS84.semiMajorM;
const BACK_M = 2e-8;

describe('geodeticToItrs', () => {
  it('puts a pole exactly on the axis, whatever its longitude', () => {
    for (const longitudeDeg of [0, 33, -180, 270]) {
      expect(geodeticToItrs({ latitudeDeg: 90, longitudeDeg, heightM: 0 }).slice(0, 2).map(Math.abs)).toEqual([0, 0]);
      expect(geodeticToItrs({ latitudeDeg: -90, longitudeDeg, heightM: 0 })[2]).toBeCloseTo(-POLE_M, 8);
    }
  });

  it('gives one point for both names of the antimeridian, and for a full turn more', () => {
    const east = geodeticToItrs({ latitudeDeg: -17, longitudeDeg: 180, heightM: 5 });
    for (const longitudeDeg of [-180, 540]) {
      const same = geodeticToItrs({ latitudeDeg: -17, longitudeDeg, heightM: 5 });
      expect(norm(subtract(same, east))).toBe(0);
    }
    expect(Math.abs(east[1])).toBe(0);
  });
});

describe('itrsToGeodetic', () => {
  it('says latitude 90 and longitude 0 on the axis', () => {
    expect(itrsToGeodetic([0, 0, POLE_M + 100])).toMatchObject({ latitudeDeg: 90, longitudeDeg: 0 });
    expect(itrsToGeodetic([0, 0, POLE_M + 100]).heightM).toBeCloseTo(100, 7);
    expect(itrsToGeodetic([0, 0, -POLE_M])).toMatchObject({ latitudeDeg: -90, longitudeDeg: 0 });
  });

  it('says longitude 180, never -180', () => {
    expect(itrsToGeodetic([-WGS84.semiMajorM, 0, 0]).longitudeDeg).toBe(180);
    expect(itrsToGeodetic([-WGS84.semiMajorM, -0, 0]).longitudeDeg).toBe(180);
    expect(itrsToGeodetic([-WGS84.semiMajorM, -1, 0]).longitudeDeg).toBeLessThan(-179.99);
  });

  it('keeps the equator at latitude 0 from the cusp of the evolute outwards', () => {
    for (const xM of [CUSP_M * 1.000001, WGS84.semiMajorM, 4e7]) expect(itrsToGeodetic([xM, 0, 0]).latitudeDeg).toBe(0);
  });

  it('finds the nearer pole from the geocentre', () => {
    const { latitudeDeg, heightM } = itrsToGeodetic([0, 0, 0]);
    expect(latitudeDeg).toBeCloseTo(90, 12);
    expect(heightM).toBeCloseTo(-POLE_M, 7);
    expect(itrsToGeodetic([0, 0, -1e-300]).latitudeDeg).toBeCloseTo(-90, 12);
  });

  it.each<Vec3>([
    [1, 0, 0],
    [1, 0, -1e-155],
    [1, 0, 1e-12],
    [CUSP_M, 0, 0],
    [CUSP_M, 0, 1e-6],
    [0, CUSP_M * 0.999999, -1e-3],
    [0, 0, 42_841.31],
    [1e-9, 0, -20_000],
    [300, -400, 0],
    [1e-9, 1e-9, POLE_M],
  ])('comes back from (%d, %d, %d)', (...point) => {
    expect(norm(subtract(geodeticToItrs(itrsToGeodetic(point)), point))).toBeLessThan(BACK_M);
  });
});
