import { describe, expect, it } from 'vitest';
import { pairPicture, type PairPictureGiven, pairScales, spread } from './pair-picture';

const BOX = { left: 50, top: 6, width: 440, height: 470 };

function given(wanted: Partial<PairPictureGiven> & { readonly xMs: number; readonly tMs: number }): PairPictureGiven {
  const errorMs = wanted.errorMs ?? 0;
  return {
    box: BOX,
    ...pairScales(BOX, wanted.xMs, wanted.tMs, errorMs),
    unit: { name: 'ms', ms: 1 },
    class: 'spacelike',
    names: ['AAA:1', 'BBB:2'],
    sites: ['AAA', 'BBB'],
    errorMs,
    errorText: '\u00b1 1 ms',
    turningC: undefined,
    frames: [{ name: 'Geocentric', alongC: 0 }],
    ...wanted,
  };
}

/** The points of a path of straight lines. */
const points = (path: string): number[][] => [...path.matchAll(/[ML](-?[\d.]+) (-?[\d.]+)/g)].map(([, x, y]) => [Number(x), Number(y)]);

describe('the picture of a pair', () => {
  for (const [what, xMs, tMs, errorMs] of [
    ['spacelike', 36, 14, 1],
    ['timelike', 0.001, 3.6e6, 0.01],
    ['at one instant', 36, 0, 0],
    ['at one place and instant', 0, 0, 0],
    ['less sure than long', 1e-3, 1.2e-3, 0.5],
  ] as const)
    it(`has both events in the box, ${what}, and light at 45 degrees`, () => {
      const { x, y } = pairScales(BOX, xMs, tMs, errorMs);
      for (const [px, py] of [
        [x(0), y(0)],
        [x(xMs), y(tMs)],
      ]) {
        expect(px).toBeGreaterThan(BOX.left);
        expect(px).toBeLessThan(BOX.left + BOX.width);
        expect(py).toBeGreaterThan(BOX.top);
        expect(py).toBeLessThan(BOX.top + BOX.height);
      }
      expect((x(1) - x(0)) / (y(0) - y(1))).toBeCloseTo(1, 7); // at an hour in the box a ms is some 1e-4 px of 470
    });

  it('leads the turning line through both events', () => {
    const picture = given({ xMs: 36, tMs: 14, turningC: 14 / 36 });
    const line = pairPicture(picture).lines.find(({ kind }) => kind === 'turning');
    const [[x0 = 0, y0 = 0] = [], [x1 = 0, y1 = 0] = []] = points(line?.path ?? '');
    const slope = (y1 - y0) / (x1 - x0);
    expect(y0 + slope * (picture.x(0) - x0)).toBeCloseTo(picture.y(0), 0);
    expect(y0 + slope * (picture.x(36) - x0)).toBeCloseTo(picture.y(14), 0);
  });

  it('leads the curve of one interval through the later event, on the side on which it lies', () => {
    for (const [xMs, tMs, kind, line] of [
      [36, 14, 'spacelike', 'curve'],
      [14, 36, 'timelike', 'join-timelike'],
    ] as const) {
      const picture = given({ xMs, tMs, class: kind });
      const curve = points(pairPicture(picture).lines.find((one) => one.kind === line)?.path ?? '');
      for (const [px = 0, py = 0] of curve) {
        const [atX, atT] = [picture.x.invert(px), picture.y.invert(py)];
        expect((atX - atT) * (atX + atT)).toBeCloseTo((xMs - tMs) * (xMs + tMs), -1); // a path is cut at hundredths of a pixel
      }
    }
  });

  it('draws the error as a bar of its own length, and none that would not be seen', () => {
    const picture = given({ xMs: 36, tMs: 14, errorMs: 2 });
    const bar = pairPicture(picture).lines.find(({ kind }) => kind === 'join-spacelike')?.path ?? '';
    const [, high = '0', low = '0'] = /^M[\d.]+ ([\d.]+)V([\d.]+)/.exec(bar) ?? [];
    expect(Number(low) - Number(high)).toBeCloseTo(picture.y(12) - picture.y(16), 1);
    expect(pairPicture(given({ xMs: 36, tMs: 14, errorMs: 1e-4 })).lines.some(({ kind }) => kind === 'join-spacelike')).toBe(false);
  });

  it('names one worldline where both sites are one', () => {
    const sites = (xMs: number) => pairPicture(given({ xMs, tMs: 40, class: 'timelike' })).words.filter(({ kind }) => kind === 'site').map(({ text }) => text); // prettier-ignore
    expect(sites(1e-6)).toEqual(['AAA, BBB']);
    expect(sites(30)).toEqual(['AAA', 'BBB']);
  });

  it('labels frames that are not told apart once, by the slowest', () => {
    const frames = [{ name: 'slow', alongC: -4e-4 }, { name: 'Geocentric', alongC: 0 }, { name: 'fast', alongC: 0.3 }]; // prettier-ignore
    const words = pairPicture(given({ xMs: 36, tMs: 14, frames })).words;
    expect(words.filter(({ kind }) => kind === 'edge').map(({ text }) => text).sort()).toEqual(['\u03b2 0', '\u03b2 0.30']); // prettier-ignore
  });
});

describe('labels beside an edge', () => {
  it('move apart around their middle, and keep their order', () => {
    const placed = spread([{ at: 100, name: 'b' }, { at: 98, name: 'a' }, { at: 300, name: 'c' }]); // prettier-ignore
    expect(placed.map(({ name }) => name)).toEqual(['a', 'b', 'c']);
    expect((placed[1]?.at ?? 0) - (placed[0]?.at ?? 0)).toBeCloseTo(15, 1);
    expect(((placed[1]?.at ?? 0) + (placed[0]?.at ?? 0)) / 2).toBeCloseTo(99, 6);
    expect(placed[2]?.at).toBe(300);
  });
});
