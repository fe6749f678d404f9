import { ChangeDetectionStrategy, Component, DestroyRef, ElementRef, afterNextRender, computed, inject, signal } from '@angular/core';
import { line, scaleLinear } from 'd3';
import { velocityFromBeta } from '#shared/relativity/velocity';
import { type PlaneEvent, placesInAllFrames, seenFrom } from './turning-pair';

/** An invented pair: the second site lies 36 light-ms away and triggers 13.2 ms later. */
const PAIR: PlaneEvent = { xMs: 36, tMs: 13.2 };
const tenths = (least: number, most: number): number[] => Array.from({ length: most - least + 1 }, (_, k) => (least + k) / 10);
const LINES_C = tenths(-8, 8);
const PLACES = tenths(-7, 7).flatMap((speedC) => {
  const velocity = velocityFromBeta([speedC, 0, 0], 'speedC');
  return velocity.ok ? [{ rest: speedC === 0, ...seenFrom(PAIR, velocity.value) }] : [];
});
const CURVE = placesInAllFrames(PAIR, 2, 400); // rapidity 2 is past 100 ms, beyond the edges

const WIDTH_MS = 97; // of the axis shown, whatever the size
const FAR_MS = 400; // beyond every edge
const ORIGIN = { across: 0.37, down: 0.62 };
const NARROW_PX = 600;
const LABEL_FROM_BOTTOM_PX = 16;

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
    labels: { y: heightPx - LABEL_FROM_BOTTOM_PX, first: round(x(0)) - 12, second: round(x(PAIR.xMs)) + 10 },
  };
}

const round = (px: number): number => Math.round(px * 100) / 100;

/** The spacelike mark, wide and hollow, around a point. */
const lozenge = (x: number, y: number, half: number): string => {
  const low = half * 0.6;
  return `M${x - half} ${y}L${x} ${y - low}L${x + half} ${y}L${x} ${y + low}Z`;
};
