import { ChangeDetectionStrategy, Component, DestroyRef, ElementRef, afterNextRender, computed, inject, signal } from '@angular/core';
import { line, scaleLinear } from 'd3';
import { speedC, velocityFromBeta } from '#shared/relativity/velocity';
import { type PlaneEvent, placesInAllFrames, seenFrom, turningFrame } from './turning-pair';

/** An invented pair: the second site lies 36 light-ms away and triggers 13.2 ms later. */
const PAIR: PlaneEvent = { xMs: 36, tMs: 13.2 };
const tenths = (least: number, most: number): number[] => Array.from({ length: most - least + 1 }, (_, k) => (least + k) / 10);
const LINES_C = tenths(-8, 8);
const PLACES = tenths(-7, 7).flatMap((velocityC) => {
  const velocity = velocityFromBeta([velocityC, 0, 0], 'velocityC');
  return velocity.ok ? [{ rest: velocityC === 0, ...seenFrom(PAIR, velocity.value) }] : [];
});
const TURNING = turningFrame(PAIR);
const TURNING_WORDS = TURNING ? `turns at ${speedC(TURNING).toFixed(3)} c` : '';
const CURVE = placesInAllFrames(PAIR, 2, 400); // rapidity 2 is past 100 ms, beyond the edges

const WIDTH_MS = 97; // of the axis shown, whatever the size
const TICKS_MS = [10, 20, 30];
const FAR_MS = 400; // beyond every edge
const ORIGIN = { across: 0.37, down: 0.62 };
const NARROW_PX = 600;
const LABEL_FROM_BOTTOM_PX = 16;
const TICK_PX = 3;
const LOWER_WORDS_PX = 105; // the lower cone is as wide as the words at this depth

/**
 * Two triggers of two sites: the first one's light cone, one line of simultaneity for each frame from -0.8 c to 0.8 c along the baseline,
 * and where frames from -0.7 c to 0.7 c place the second. Time runs up, and both axes have one scale, so that light stands at 45 degrees.
 */
@Component({
  selector: 'sw-turning-picture',
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './turning-picture.html',
  styleUrl: './turning-picture.scss',
})
export class TurningPicture {
  private readonly size = signal({ widthPx: 0, heightPx: 0 });
  protected readonly viewBox = computed(() => `0 0 ${this.size().widthPx} ${this.size().heightPx}`);
  protected readonly narrow = computed(() => this.size().widthPx < NARROW_PX);
  protected readonly drawing = computed(() => draw(this.size()));

  constructor() {
    const host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
    const destroyed = inject(DestroyRef);
    afterNextRender(() => {
      const sizes = new ResizeObserver(() => this.size.set({ widthPx: host.clientWidth, heightPx: host.clientHeight }));
      sizes.observe(host);
      destroyed.onDestroy(() => sizes.disconnect());
    });
  }
}

/** Everything of the picture in pixels, for one size. */
function draw({ widthPx, heightPx }: { widthPx: number; heightPx: number }) {
  if (widthPx === 0 || heightPx === 0) return undefined;
  const pxPerMs = widthPx / WIDTH_MS;
  const x = scaleLinear([0, 1], [widthPx * ORIGIN.across, widthPx * ORIGIN.across + pxPerMs]);
  const y = scaleLinear([0, 1], [heightPx * ORIGIN.down, heightPx * ORIGIN.down - pxPerMs]);
  const path = line<PlaneEvent>(
    ({ xMs }) => round(x(xMs)),
    ({ tMs }) => round(y(tMs)),
  );
  const through = (xMs: number, tMs: number): string => path([{ xMs: -xMs, tMs: -tMs }, { xMs, tMs }]) ?? ''; // prettier-ignore
  const half = widthPx < NARROW_PX ? 4.5 : 6.5;
  const cone = (tMs: number): string =>
    `${
      path([
        { xMs: -FAR_MS, tMs },
        { xMs: 0, tMs: 0 },
        { xMs: FAR_MS, tMs },
      ]) ?? ''
    }Z`;
  return {
    cones: [cone(FAR_MS), cone(-FAR_MS)],
    light: [through(FAR_MS, FAR_MS), through(FAR_MS, -FAR_MS)],
    frames: LINES_C.map((velocityC) => ({ path: through(FAR_MS, FAR_MS * velocityC), rest: velocityC === 0 })),
    turning: through(10 * PAIR.xMs, 10 * PAIR.tMs),
    sites: [0, PAIR.xMs].map((xMs) => round(x(xMs))),
    curve: path(CURVE) ?? '',
    marks: PLACES.map(({ rest, xMs, tMs }) => lozenge(round(x(xMs)), round(y(tMs)), rest ? half * 1.9 : half)),
    first: { x: round(x(0)), y: round(y(0)), r: widthPx < NARROW_PX ? 7.5 : 10.5 },
    heightPx,
    ticks: TICKS_MS.flatMap((ms) => [
      `M${round(x(ms))} ${round(y(0)) - TICK_PX}v${2 * TICK_PX}`,
      `M${round(x(0)) - TICK_PX} ${round(y(ms))}h${2 * TICK_PX}`,
    ]),
    words: words({ x, y, widthPx, heightPx }),
  };
}

interface Word {
  readonly kind: 'site' | 'axis' | 'tick' | 'cone' | 'light' | 'turning';
  /** No line runs behind it. */
  readonly clear: boolean;
  readonly anchor: 'start' | 'middle' | 'end';
  readonly place: string;
  readonly lines: readonly { readonly text: string; readonly down: number }[];
}

/** What is written in the picture: a narrow one has no room for all figures, nor a low one for words in the lower cone. */
function words({ x, y, widthPx, heightPx }: { x: Scale; y: Scale; widthPx: number; heightPx: number }): Word[] {
  const narrow = widthPx < NARROW_PX;
  const linePx = narrow ? 13 : 16;
  const word = (kind: Word['kind'], anchor: Word['anchor'], across: number, down: number, text: string[], turnDeg = 0): Word => ({
    kind,
    clear: kind === 'cone' || kind === 'light' || (across < x(0) && Math.abs(down - y(0)) > x(0) - across),
    anchor,
    place: `translate(${round(across)} ${round(down)}) rotate(${round(turnDeg)})`,
    lines: text.map((line, k) => ({ text: line, down: k * linePx })),
  });
  const edge = narrow ? 8 : 14;
  const bottom = heightPx - LABEL_FROM_BOTTOM_PX;
  const lightMs = Math.min(24, 0.5 * y.invert(0));
  const slope = PAIR.tMs / PAIR.xMs;
  const rightMs = x.invert(widthPx - edge);
  const figures = TICKS_MS.filter((ms) => !narrow || ms === 20);
  return [
    word('site', 'end', x(0) - 12, bottom, ['Site A']),
    narrow ? word('site', 'end', x(PAIR.xMs) - 10, bottom, ['Site B']) : word('site', 'start', x(PAIR.xMs) + 10, bottom, ['Site B']),
    word('axis', 'end', x(0) - 9, edge + 9, ['Time after A, ms']),
    word('axis', 'end', widthPx - edge, y(0) + 18, [narrow ? 'Distance,' : 'Distance from A,', 'light-ms']),
    ...figures.filter((ms) => y(ms) > edge + 28).map((ms) => word('tick', 'end', x(0) - 9, y(ms) + 4, [String(ms)])),
    ...figures.map((ms) => word('tick', 'middle', x(ms), y(0) + 17, [String(ms)])),
    word('cone', 'start', x(0) + 10, edge + 9, ['after A', 'in every frame']),
    ...(bottom - y(0) < LOWER_WORDS_PX ? [] : [word('cone', 'start', x(0) + 10, bottom - linePx, ['before A', 'in every frame'])]),
    word('light', 'middle', x(lightMs) - 5, y(lightMs) - 5, ['light'], -45),
    word('turning', 'end', widthPx - edge, y(rightMs * slope) + 15, [TURNING_WORDS], (-Math.atan(slope) * 180) / Math.PI),
  ];
}

type Scale = ReturnType<typeof scaleLinear<number>>;

const round = (px: number): number => Math.round(px * 100) / 100;

/** The spacelike mark, wide and hollow, around a point. */
const lozenge = (x: number, y: number, half: number): string => {
  const low = half * 0.6;
  return `M${x - half} ${y}L${x} ${y - low}L${x + half} ${y}L${x} ${y + low}Z`;
};
