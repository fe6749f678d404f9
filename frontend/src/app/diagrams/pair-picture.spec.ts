import { describe, expect, it } from 'vitest';
import { pairPicture, type PairPictureGiven, pairScales } from './pair-picture';
import { spread } from './pair-picture-words';

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

describe('the words of a pair in a narrow picture', () => {
  const box = { left: 44, top: 6, width: 248, height: 251 }; // of a screen of 390 px
  const CHARACTER_PX = 5.2; // narrower than any font of the pictures is on average, so that what touches here touches on the screen
  const frames = [-0.3, 0, 0.0012, 0.3].map((alongC) => ({ name: String(alongC), alongC }));

  it('touch nowhere, whatever the pair', () => {
    let seen = 0;
    for (const kind of ['spacelike', 'timelike', 'undecided'] as const)
      for (const [xMs, tMs] of [
        [0.9, 0.05],
        [36, 14],
        [14, 36],
        [3, 2.9],
        [2.9, 3],
        [1, 0],
        [0, 1],
        [1e-3, 40],
      ] as const)
        // prettier-ignore
        for (const errorMs of [0.01, 0.1, 0.3, 0.9].map((part) => part * Math.max(xMs, tMs))) {
          const asked = { box, xMs, tMs, errorMs, class: kind, frames, errorText: '\u00b1 874 \u00b5s (3 \u03c3)', turningC: xMs > tMs ? tMs / xMs : undefined };
          const { words } = pairPicture(given({ ...asked, ...pairScales(box, xMs, tMs, errorMs) }));
          const areas = words.map(({ text, x, y, anchor, turnDeg = 0 }) => {
            const width = text.length * CHARACTER_PX;
            const from = anchor === 'end' ? -width : anchor === 'middle' ? -width / 2 : 0;
            const turn = (turnDeg * Math.PI) / 180;
            // Its middle line, 4 px above its foot.
            return Array.from({ length: 21 }, (_, i) => ({
              x: x + (from + (width * i) / 20) * Math.cos(turn) + 4 * Math.sin(turn),
              y: y + (from + (width * i) / 20) * Math.sin(turn) - 4 * Math.cos(turn),
            }));
          });
          for (const [i, a] of areas.entries())
            for (const b of areas.slice(i + 1)) {
              seen++;
              const nearest = Math.min(...a.flatMap((p) => b.map((q) => Math.hypot(p.x - q.x, p.y - q.y))));
              expect(nearest, words.map(({ text }) => text).join(' | ')).toBeGreaterThan(9); // of lines some 12 px high
            }
        }
    expect(seen).toBeGreaterThan(500);
  });

  it('keep the error and the sites where there is room', () => {
    const texts = pairPicture(given({ box, xMs: 36, tMs: 14, ...pairScales(box, 36, 14, 0.5) })).words.map(({ text }) => text);
    expect(texts).toEqual(expect.arrayContaining(['AAA', 'BBB', '\u00b1 1 ms', '\u03b2 0', 'same s\u00b2']));
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
