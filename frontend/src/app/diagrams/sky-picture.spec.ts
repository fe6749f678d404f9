import { describe, expect, it } from 'vitest';
import { hammerRaw, skyPicture } from './sky-picture';

const ROOM = { widthPx: 276, heightPx: 138, errorDtS: 0, errorDistanceM: 0 };

describe('the Hammer map', () => {
  it('has the poles at the square root of 2, and the ends of the equator twice as far out', () => {
    // From its own formula (Hammer 1892) at the pole and at 180 degrees.
    expect(hammerRaw(0, Math.PI / 2)[1]).toBeCloseTo(Math.SQRT2, 12);
    expect(hammerRaw(Math.PI, 0)[0]).toBeCloseTo(2 * Math.SQRT2, 12);
  });

  it('keeps areas: its determinant is 1 anywhere', () => {
    const step = 1e-5;
    for (const [lambda, phi] of [
      [0, 0],
      [1, 0.4],
      [-2.2, -1.1],
      [2.9, 0.9],
    ] as const) {
      // prettier-ignore
      const at = (dl: number, dp: number) => hammerRaw(lambda + dl, phi + dp);
      const byLambda = [0, 1].map((i) => ((at(step, 0)[i] ?? 0) - (at(-step, 0)[i] ?? 0)) / (2 * step));
      const byPhi = [0, 1].map((i) => ((at(0, step)[i] ?? 0) - (at(0, -step)[i] ?? 0)) / (2 * step));
      const area = (byLambda[0] ?? 0) * (byPhi[1] ?? 0) - (byLambda[1] ?? 0) * (byPhi[0] ?? 0);
      expect(area).toBeCloseTo(Math.cos(phi), 8); // central differences of 1e-5 are good to 1e-9
    }
  });
});

describe('the sky of a pair', () => {
  const C_M_S = 299_792_458;

  it('has north up, and east to the left', () => {
    const north = skyPicture({ ...ROOM, toward: [0, 0, 1], dtS: 0, distanceM: 1 }).toward;
    expect(north.y).toBeLessThan(10);
    // Right ascension 13 h lies east of 12 h, which is in the middle.
    const angle = (13 / 12) * Math.PI;
    const east = skyPicture({ ...ROOM, toward: [Math.cos(angle), Math.sin(angle), 0], dtS: 0, distanceM: 1 }).toward;
    expect(east.x).toBeLessThan(138);
    expect(east.x).toBeGreaterThan(100);
    expect(east.y).toBeCloseTo(69, 0);
  });

  it('has the opposite direction opposite', () => {
    const { toward, away } = skyPicture({ ...ROOM, toward: [-Math.SQRT1_2, 0, Math.SQRT1_2], dtS: 0, distanceM: 1 });
    expect(toward.x).toBeCloseTo(138, 0);
    expect(toward.y).toBeLessThan(69);
    expect(Math.min(away.x, 276 - away.x)).toBeLessThan(60); // right ascension 0 is at both edges
    expect(away.y).toBeGreaterThan(69);
  });

  it('has a ring where a plane wave can have made both, and none where light was too slow', () => {
    expect(skyPicture({ ...ROOM, toward: [1, 0, 0], dtS: 0.5, distanceM: C_M_S }).ring?.middle).toMatch(/^M/);
    expect(skyPicture({ ...ROOM, toward: [1, 0, 0], dtS: 1.5, distanceM: C_M_S }).ring).toBeUndefined();
  });
});
