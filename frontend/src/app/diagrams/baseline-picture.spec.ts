import { scaleLinear } from 'd3';
import { describe, expect, it } from 'vitest';
import { baselinePicture } from './baseline-picture';

const BOX = { left: 50, top: 24, width: 300, height: 300 };
const NO_EVENTS = { count: 0, xMs: new Float64Array(), tMs: new Float64Array() };
const CONE_PX = 10; // half of its width at the middle of words that stand 6 px above the origin, since light stands at 45 degrees
const CHARACTER_PX = 5.2; // narrower than a character of these pictures is on average

/** The picture with its origin so far from the left edge, in a frame of such a speed. */
const picture = (originPx: number, velocityC = 0) =>
  baselinePicture({
    box: BOX,
    x: scaleLinear([-originPx / 10, (BOX.width - originPx) / 10], [BOX.left, BOX.left + BOX.width]),
    y: scaleLinear([15, -15], [BOX.top, BOX.top + BOX.height]),
    speed: { gamma: 1 / Math.sqrt(1 - velocityC ** 2), gammaBeta: velocityC / Math.sqrt(1 - velocityC ** 2) },
    from: 'AAA',
    to: 'BBB',
    originName: 'AAA:1',
    other: undefined,
    rest: NO_EVENTS,
    trails: [],
    labels: [],
    shown: NO_EVENTS,
  });

describe('the picture along a baseline', () => {
  for (const originPx of [20, 90, 150, 210, 280])
    for (const velocityC of [0, -0.1, 0.1, 0.6])
      it(`has its instant beside the cone, not in it, ${originPx} px from the left at ${velocityC} c`, () => {
        const here = picture(originPx, velocityC).words.find(({ kind }) => kind === 'here');
        if (!here) {
          expect([90, 150, 210]).toContain(originPx);
          return;
        } // where neither side has the room
        const width = here.text.length * CHARACTER_PX;
        const [from, to] = here.anchor === 'end' ? [here.x - width, here.x] : [here.x, here.x + width];
        const origin = BOX.left + originPx;
        expect(to < origin - CONE_PX || from > origin + CONE_PX).toBe(true);
      });

  it('moves it to the right where the origin stands at the left', () => {
    expect(picture(20).words.find(({ kind }) => kind === 'here')?.anchor).toBe('end');
    expect(picture(280).words.find(({ kind }) => kind === 'here')?.anchor).toBeUndefined();
  });
});
