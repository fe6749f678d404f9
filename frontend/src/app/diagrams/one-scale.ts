import { scaleLinear, type ScaleLinear } from 'd3';

/** A rectangle of the screen, px. */
export interface Box {
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
}

/** The part of a diagram that is shown: what stands at the left and at the top of its box, and how large it is drawn. */
export interface Sight {
  readonly leftMs: number;
  readonly topMs: number;
  readonly pxPerMs: number;
}

export type Scale = ScaleLinear<number, number>;

/** The scales of both axes: one and the same, time upwards, so that light stands at 45 degrees at any size. */
export function oneScale({ leftMs, topMs, pxPerMs }: Sight, box: Box): { readonly x: Scale; readonly y: Scale } {
  return {
    x: scaleLinear([leftMs, leftMs + box.width / pxPerMs], [box.left, box.left + box.width]),
    y: scaleLinear([topMs, topMs - box.height / pxPerMs], [box.top, box.top + box.height]),
  };
}

/** A zoom's transform: a point u of the screen at first stands at k u + x now. */
export interface Transform {
  readonly k: number;
  readonly x: number;
  readonly y: number;
}

/** How much may be shown at once: between two steps of it nothing is drawn larger or smaller. */
export interface SightLimits {
  readonly leastPxPerMs: number;
  readonly mostPxPerMs: number;
}

/**
 * What is shown after a gesture that took a zoom from one transform to the next: both axes at one factor, and what was under the pointer
 * stays there.
 */
export function sightAfter(sight: Sight, box: Box, from: Transform, to: Transform, limits: SightLimits): Sight {
  const pxPerMs = Math.min(limits.mostPxPerMs, Math.max(limits.leastPxPerMs, (sight.pxPerMs * to.k) / from.k));
  const factor = pxPerMs / sight.pxPerMs;
  const wanted = to.k / from.k;
  // The point of the screen that the gesture leaves in its place; a plain shift has none.
  const stays = (a: number, b: number): number => (wanted === 1 ? 0 : (b - wanted * a) / (1 - wanted));
  const shift = (a: number, b: number): number => (wanted === 1 ? b - a : 0);
  const across = stays(from.x, to.x) - box.left;
  const down = stays(from.y, to.y) - box.top;
  return {
    pxPerMs,
    leftMs: sight.leftMs + (across - across / factor - shift(from.x, to.x)) / sight.pxPerMs,
    topMs: sight.topMs - (down - down / factor - shift(from.y, to.y)) / sight.pxPerMs,
  };
}

/** The same sight about a point of its box, larger by a factor. */
export function sightZoomed(sight: Sight, box: Box, factor: number, limits: SightLimits): Sight {
  const [u, v] = [box.left + box.width / 2, box.top + box.height / 2];
  return sightAfter(sight, box, { k: 1, x: 0, y: 0 }, { k: factor, x: u * (1 - factor), y: v * (1 - factor) }, limits);
}
