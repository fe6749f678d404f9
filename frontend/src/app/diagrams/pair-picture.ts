import { scaleLinear } from 'd3';
import { type IntervalClass } from '#shared/relativity/verdict';
import { type Box, type Scale } from './one-scale';
import { pairWords } from './pair-picture-words';
import { pathThrough, type Picture, type PictureLine, round, type Tick } from './picture';
import { plainTicks } from './time-ticks';

/** A frame of the network as it moves along the baseline. */
export interface FrameAlong {
  readonly name: string;
  readonly alongC: number;
}

export interface PairPictureGiven {
  readonly box: Box;
  readonly x: Scale;
  readonly y: Scale;
  /** In which both axes are printed, and how many ms it has. */
  readonly unit: { readonly name: string; readonly ms: number };
  readonly class: IntervalClass;
  /** What the earlier event and the later one are called, and their sites. */
  readonly names: readonly [string, string];
  readonly sites: readonly [string, string];
  /** From the earlier event to the later, light-ms and ms, in the geocentric frame. */
  readonly xMs: number;
  readonly tMs: number;
  /** As many standard errors of the time between them as make a decision, ms, and how they are written beside the mark. */
  readonly errorMs: number;
  readonly errorText: string;
  /** The speed along the baseline at which both are one instant, in c; undefined where there is none. */
  readonly turningC: number | undefined;
  readonly frames: readonly FrameAlong[];
}

const FAR_MS = 1e10;
const CURVE_STEPS = 120;
const CAP_PX = 5;
const NARROW_PX = 340;

/**
 * The scales on which a pair fills a box: one factor for both axes, so that light stands at 45 degrees, with the earlier event at 0.
 *
 * @param xMs step along the baseline, light-ms, not negative
 * @param tMs time from the earlier to the later, ms, not negative
 * @param errorMs what is drawn of its error on both sides; it widens the sight to twice the pair at most
 */
export function pairScales(box: Box, xMs: number, tMs: number, errorMs: number): { readonly x: Scale; readonly y: Scale } {
  const size = Math.max(xMs, tMs) || errorMs || 1e-6;
  const reachMs = tMs + Math.min(errorMs, 2 * size);
  const widthMs = Math.max(1.5 * size * (xMs >= tMs ? 1 : 0), 1.5 * xMs, (1.5 * reachMs * box.width) / box.height);
  const heightMs = (widthMs * box.height) / box.width;
  const leftMs = -(widthMs - xMs) / 2;
  const bottomMs = -(heightMs - reachMs) * 0.42;
  return {
    x: scaleLinear([leftMs, leftMs + widthMs], [box.left, box.left + box.width]),
    y: scaleLinear([bottomMs + heightMs, bottomMs], [box.top, box.top + box.height]),
  };
}

/**
 * The picture of a pair along its own baseline, in the geocentric frame, where it is exact: the cone of the earlier event, the worldlines
 * of both sites, what is one instant with it in each frame, where the order turns, and the curve on which every frame along the baseline
 * places the later event.
 */
export function pairPicture(given: PairPictureGiven): Picture {
  const { box, x, y, unit, xMs, tMs, errorMs, turningC } = given;
  const [right, bottom] = [box.left + box.width, box.top + box.height];
  const through = (points: readonly (readonly [xMs: number, tMs: number])[]): string => pathThrough(points.map(([a, b]) => [x(a), y(b)]));
  const ticks = (scale: Scale): Tick[] => {
    const [from = 0, to = 1] = scale.domain();
    return plainTicks(scaleLinear([from / unit.ms, to / unit.ms], scale.range()), 76, false);
  };
  const [xTicks, yTicks] = [ticks(x), ticks(y)];
  const kind = JOINS[given.class];
  const lines: PictureLine[] = [
    { kind: 'cone', path: `M${round(x(0))} ${round(y(0))}L${round(x(0) + CONE_PX)} ${round(y(0) - CONE_PX)}H${round(x(0) - CONE_PX)}Z` },
    { kind: 'cone', path: `M${round(x(0))} ${round(y(0))}L${round(x(0) + CONE_PX)} ${round(y(0) + CONE_PX)}H${round(x(0) - CONE_PX)}Z` },
    ...yTicks.map(({ at }): PictureLine => ({ kind: 'grid-fine', path: `M${box.left} ${round(at)}H${right}` })),
    ...xTicks.map(({ at }): PictureLine => ({ kind: 'grid-fine', path: `M${round(at)} ${box.top}V${bottom}` })),
    { kind: given.class === 'spacelike' ? 'curve' : kind, path: through(curveOf(given)) },
    ...[1, -1].map((sign): PictureLine => ({ kind: 'light', path: pathThrough([[x(0) - CONE_PX, y(0) + sign * CONE_PX], [x(0) + CONE_PX, y(0) - sign * CONE_PX]]) })), // prettier-ignore
    ...[0, xMs].map((at): PictureLine => ({ kind: 'worldline-other', path: `M${round(x(at))} ${box.top}V${bottom}` })),
    ...given.frames.map(({ alongC }): PictureLine => ({ kind: alongC === 0 ? 'zero' : 'instant', path: through(simultaneous(alongC, x)) })),
    ...(turningC === undefined
      ? []
      : [{ kind: given.class === 'undecided' ? kind : 'turning', path: through(simultaneous(turningC, x)) } satisfies PictureLine]),
    { kind: given.class === 'spacelike' ? 'interval' : kind, path: through([[0, 0], [xMs, tMs]]) }, // prettier-ignore
  ];
  const errorPx = Math.abs(y(0) - y(errorMs));
  if (errorPx > 2) {
    const [high, low] = [round(y(tMs + errorMs)), round(y(tMs - errorMs))];
    const at = round(x(xMs));
    lines.push({ kind, path: `M${at} ${high}V${low}M${at - CAP_PX} ${high}h${2 * CAP_PX}M${at - CAP_PX} ${low}h${2 * CAP_PX}` });
  }
  const isNarrow = box.width < NARROW_PX; // where figures and a title beside them have no room
  return {
    box,
    lines,
    words: pairWords(given),
    xTicks,
    yTicks,
    xTitle: `Distance along the baseline, light-${unit.name}${isNarrow ? `; time up, ${unit.name}` : ''}`,
    yTitle: isNarrow ? '' : `Time after ${given.names[0]}, ${unit.name}`,
    slanted: false,
  };
}

const CONE_PX = 4_000;
const JOINS = { timelike: 'join-timelike', spacelike: 'join-spacelike', undecided: 'join-undecided' } as const;

/** What is one instant with the earlier event for a frame, along the baseline: t = v x, to both edges. */
function simultaneous(alongC: number, x: Scale): [number, number][] {
  const [leftMs = 0, rightMs = 0] = x.domain();
  return [
    [leftMs, alongC * leftMs],
    [rightMs, alongC * rightMs],
  ];
}

/** Where every frame along the baseline places the later event: the curve of one interval through it. */
function curveOf({ xMs, tMs, x, y }: PairPictureGiven): [number, number][] {
  const square = (xMs - tMs) * (xMs + tMs);
  const [from = 0, to = 0] = square > 0 ? y.domain() : x.domain();
  return Array.from({ length: CURVE_STEPS + 1 }, (_, step) => {
    const at = from + ((to - from) * step) / CURVE_STEPS;
    const other = Math.min(FAR_MS, Math.sqrt(Math.abs(square) + at * at));
    return square > 0 ? [other, at] : [at, other];
  });
}
