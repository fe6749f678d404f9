import { describe, expect, it } from 'vitest';
import { linesOfLabels, placeBeside, placeWords } from './labels';

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

describe('the words of a picture', () => {
  const box = { left: 0, top: 0, width: 200, height: 100 };
  const word = (x: number, y: number, turnDeg = 0) => ({ kind: 'mark', text: 'ten digits', x, y, turnDeg }) as const;

  it('stand at their first place that touches no mark and no word, also one that is turned', () => {
    const [first, turned] = [word(20, 14), word(20, 90, -45)];
    expect(placeWords([[first], [word(30, 18), turned], [word(34, 80), word(120, 80)]], [], [], box)).toEqual([
      first,
      turned,
      word(120, 80),
    ]);
    expect(placeWords([[first, word(20, 80)]], [], [{ x: 60, y: 10 }], box)).toEqual([word(20, 80)]);
    expect(placeWords([[first]], [word(40, 20)], [], box)).toEqual([]);
  });

  it('are left out where they would leave the box', () => {
    expect(placeWords([[word(160, 40)], [word(20, 6)], [word(20, 98, 45)]], [], [], box)).toEqual([]);
  });
});
