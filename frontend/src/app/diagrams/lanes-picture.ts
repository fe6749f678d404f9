import { scaleLinear } from 'd3';
import { type Instant } from '#shared/time/instant';
import { type Scale as TimeScale } from '#shared/time/scales';
import { siteWords } from './around-picture';
import { type Box, type Scale } from './one-scale';
import { type LineKind, pathThrough, type Picture, type PictureLine } from './picture';
import { type Plane } from './plane';
import { timeTicks } from './time-ticks';

export interface LanesGiven {
  readonly box: Box;
  readonly x: Scale;
  readonly y: Scale;
  readonly origin: Instant;
  readonly scale: TimeScale;
  /** Sites from left to right. */
  readonly codes: readonly string[];
  readonly plane: Plane;
  /** Coincidences whose events are joined: their rows in time order. */
  readonly joins: readonly { readonly kind: 'timelike' | 'spacelike' | 'undecided' | 'mixed'; readonly rows: readonly number[] }[];
  /** How long light needs between the two sites that are farthest apart, px in this picture. */
  readonly lightPx: number;
}

/** The scales of all sites side by side: time up, a lane for each site; across nothing is measured. */
export function laneScales(box: Box, sites: number, topMs: number, spanMs: number): { readonly x: Scale; readonly y: Scale } {
  const margin = box.width / Math.max(1, sites) / 2;
  return {
    x: scaleLinear([0, Math.max(1, sites - 1)], [box.left + margin, box.left + box.width - (sites > 1 ? margin : 0)]),
    y: scaleLinear([topMs, topMs - spanMs], [box.top, box.top + box.height]),
  };
}

/** All sites side by side: each on its lane, the events of a coincidence joined. */
export function lanesPicture({ box, x, y, origin, scale, codes, plane, joins, lightPx }: LanesGiven): Picture {
  const right = box.left + box.width;
  const bottom = box.top + box.height;
  const time = timeTicks(y, origin, scale);
  const lines: PictureLine[] = time.ticks.map(({ at }) => ({ kind: 'grid', path: `M${box.left} ${at.toFixed(1)}H${right}` }));
  codes.forEach((_, lane) => lines.push({ kind: 'worldline-other', path: `M${x(lane).toFixed(1)} ${box.top - 4}V${bottom}` }));
  for (const { kind, rows } of joins) {
    const across = rows.map((row): [number, number] => [x(plane.xMs[row] ?? 0), y(plane.tMs[row] ?? 0)]).sort((a, b) => a[0] - b[0]);
    const style: LineKind = `join-${kind}`;
    lines.push({ kind: style, path: pathThrough(across) });
  }
  return {
    box,
    lines,
    words: siteWords(codes.map((code, xMs) => ({ code, xMs })), '', x, box), // prettier-ignore
    xTicks: [],
    yTicks: time.ticks,
    xTitle: lightPx < 1.5 && box.width > 340 ? 'Sites side by side: light joins them within the width of a line' : 'Sites side by side',
    yTitle: time.title,
    slanted: false,
  };
}
