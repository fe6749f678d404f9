import { describe, expect, it } from 'vitest';
import { linesOfLabels, placeBeside } from './labels';

describe('labels above a diagram', () => {
  it('stand on one line while they do not touch', () => {
    expect(linesOfLabels([{ at: 0, width: 30 }, { at: 34, width: 30 }], 4)).toEqual([0, 0]); // prettier-ignore
  });

  it('take the next line where they would, and none where there is no room', () => {
    expect(linesOfLabels([0, 1, 2, 3, 40].map((at) => ({ at, width: 30 })), 4)).toEqual([0, 1, 2, -1, 0]); // prettier-ignore
  });
});

describe('labels beside marks', () => {
  const box = { left: 0, top: 0, width: 200, height: 100 };
  it('stand to the right and above at first, to the left at the edge', () => {
    const marks = [{ x: 50, y: 50 }, { x: 190, y: 50 }]; // prettier-ignore
    const [first, edge] = placeBeside(marks.map((mark) => ({ ...mark, width: 24 })), marks, box); // prettier-ignore
    expect(first).toEqual({ x: 61, y: 45, anchor: 'start' });
    expect(edge?.anchor).toBe('end');
  });

  it('hide no mark and no label, and are left out where there is no place', () => {
    const crowd = Array.from({ length: 40 }, (_, i) => ({ x: 60 + (i % 8) * 6, y: 40 + Math.floor(i / 8) * 6 }));
    const placed = placeBeside(crowd.map((mark) => ({ ...mark, width: 24 })), crowd, box); // prettier-ignore
    expect(placed.filter((one) => one !== undefined).length).toBeLessThan(crowd.length);
    const areas = placed.flatMap((one) => (one ? [{ left: one.anchor === 'start' ? one.x : one.x - 24, top: one.y }] : []));
    for (const [i, a] of areas.entries())
      for (const b of areas.slice(i + 1)) expect(Math.abs(a.left - b.left) >= 24 || Math.abs(a.top - b.top) >= 12).toBe(true);
  });
});
