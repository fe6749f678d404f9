import { describe, expect, it } from 'vitest';
import { lightConeAt } from './picture';

const BOX = { left: 60, top: 40, width: 400, height: 600 };
const numbers = (path: string): number[] => path.match(/-?[\d.]+(?:e-?\d+)?/g)?.map(Number) ?? [];

describe('the light cone of a point', () => {
  it.each([
    [60, 500],
    [200, 300],
    [-30_000, 45_000],
    [1e7, -3e6],
  ])('has light at 45 degrees wherever it stands: %d, %d', (x, y) => {
    const { lines, rightRays } = lightConeAt(x, y, BOX);
    for (const path of [...lines, ...rightRays]) {
      const [x1 = 0, y1 = 0, x2 = 0, y2 = 0] = numbers(path);
      expect(Math.abs((y2 - y1) / (x2 - x1))).toBe(1);
      expect(Math.max(x1, x2)).toBeGreaterThan(Math.min(x, BOX.left + BOX.width)); // it leaves the box
    }
  });
});
