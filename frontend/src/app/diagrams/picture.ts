import { type Box } from './one-scale';

/** How a line of a picture is drawn: the names of its styles. */
export type LineKind =
  | 'cone'
  | 'grid'
  | 'grid-fine'
  | 'zero'
  | 'light'
  | 'worldline'
  | 'worldline-other'
  | 'instant'
  | 'instant-other'
  | 'curve'
  | 'curve-path'
  | 'trail'
  | 'turning'
  | 'interval'
  | 'join-timelike'
  | 'join-spacelike'
  | 'join-undecided'
  | 'join-mixed';

/** A line, or with `isArea` the area in it, as a path on the screen; what lies beyond the box is not shown. */
export interface PictureLine {
  readonly kind: LineKind;
  readonly path: string;
}

/** Words on the screen, px; turned about their point. */
export interface PictureWord {
  readonly kind: 'site' | 'site-other' | 'cone' | 'spacelike' | 'light' | 'instant' | 'here' | 'mark' | 'edge' | 'edge-turning' | 'note';
  readonly text: string;
  readonly x: number;
  readonly y: number;
  readonly anchor?: 'start' | 'middle' | 'end';
  readonly turnDeg?: number;
}

export interface Tick {
  /** Along its axis, px. */
  readonly at: number;
  readonly text: string;
  /** Whether what it says changes with the frame. */
  readonly slanted?: boolean;
}

/** A mark of an event on the screen, px. */
export interface PictureMark {
  readonly row: number;
  readonly x: number;
  readonly y: number;
}

/** A leader from a mark to its row in the table. */
export interface Leader {
  readonly row: number;
  /** Middle of the row, from the top of the picture, px. */
  readonly y: number;
}

/** All of a picture but its marks. */
export interface Picture {
  readonly box: Box;
  readonly lines: readonly PictureLine[];
  readonly words: readonly PictureWord[];
  readonly xTicks: readonly Tick[];
  readonly yTicks: readonly Tick[];
  readonly xTitle: string;
  readonly yTitle: string;
  /** Whether both titles are slanted, since what they name changes with the frame. */
  readonly slanted: boolean;
}

/** A path through points, px. */
export const pathThrough = (points: readonly (readonly [number, number])[]): string =>
  points.map(([x, y], i) => `${i === 0 ? 'M' : 'L'}${round(x)} ${round(y)}`).join('');

/** Beyond any screen a coordinate tells nothing more, and a path of huge numbers is drawn slowly. */
const FAR_PX = 20_000;
export const round = (px: number): number => Math.round(Math.min(FAR_PX, Math.max(-FAR_PX, px)) * 100) / 100;

/**
 * The light cone of a point of the screen, over all of a box: never cut at some distance, since a cut end would turn the line.
 *
 * @returns the cone above and the one below, their parts to the right alone, and the light that goes up and down to the right, and through both
 */
export function lightConeAt(x: number, y: number, { left, top, width, height }: Box) {
  const reach = Math.max(Math.abs(x - left), Math.abs(left + width - x), Math.abs(y - top), Math.abs(top + height - y)) + 1;
  const from = `M${x} ${y}`;
  const to = (across: 1 | -1, up: 1 | -1): string => `${x + across * reach} ${y - up * reach}`;
  return {
    cones: ([1, -1] as const).map((up) => `${from}L${to(1, up)}L${to(-1, up)}Z`),
    rightCones: ([1, -1] as const).map((up) => `${from}L${to(1, up)}H${x}Z`),
    rightRays: ([1, -1] as const).map((up) => `${from}L${to(1, up)}`),
    lines: ([1, -1] as const).map((up) => `M${to(-1, up === 1 ? -1 : 1)}L${to(1, up)}`),
  };
}

/** Width of words, nearly, px: for placing labels. */
export const widthOfWords = (text: string, sizePx: number): number => text.length * sizePx * 0.62;
