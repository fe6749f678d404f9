import { type Speed } from '#shared/relativity/speed';
import { placeBeside, placeWords } from './labels';
import { type Box, type Scale } from './one-scale';
import { lightConeAt, pathThrough, type Picture, type PictureLine, type PictureWord, round, widthOfWords } from './picture';
import { type Plane } from './plane';
import { plainTicks } from './time-ticks';

export interface BaselineGiven {
  readonly box: Box;
  readonly x: Scale;
  readonly y: Scale;
  /** The frame that is shown, along the baseline. */
  readonly speed: Speed;
  /** What the baseline leads from and to. */
  readonly from: string;
  readonly to: string;
  /** What the event at the origin is called in a title. */
  readonly originName: string;
  /** The other end of the pair in the geocentric frame; absent where there is no pair. */
  readonly other: { readonly xMs: number; readonly tMs: number; readonly isSpacelike: boolean } | undefined;
  /** Where the geocentric frame places events, for the ways that their marks have come. */
  readonly rest: Plane;
  readonly trails: readonly number[];
  /** Rows whose marks get their site's code beside them, the most important first. */
  readonly labels: readonly { readonly row: number; readonly code: string; readonly isMain: boolean }[];
  readonly shown: Plane;
}

const TRAIL_STEPS = 16;
const NARROW_PX = 340;

/**
 * The picture along a pair's baseline in a frame that moves along it: light, the worldlines of both sites, the lines of what is one instant in
 * the geocentric frame, and the curve on which every frame along the baseline places the other event.
 */
export function baselinePicture(given: BaselineGiven): Picture {
  const { box, x, y, speed, from, to, originName, other } = given;
  const { gamma, gammaBeta } = speed;
  const velocityC = gammaBeta / gamma;
  const right = box.left + box.width;
  const bottom = box.top + box.height;
  const isMoving = gammaBeta !== 0;
  const through = (points: readonly (readonly [xMs: number, tMs: number])[]): string => pathThrough(points.map(([a, b]) => [x(a), y(b)]));
  const cone = lightConeAt(x(0), y(0), box);
  const lines: PictureLine[] = cone.cones.map((path) => ({ kind: 'cone', path }));
  const yTicks = plainTicks(y, 76, isMoving);
  for (const { at, text } of yTicks) lines.push({ kind: text === '0' ? 'zero' : 'grid', path: `M${box.left} ${round(at)}H${right}` });
  const words: PictureWord[] = [];
  if (isMoving) {
    // Geocentric instants: t = gamma (t' + v x'), so that each is a line of slope -v here.
    const everyMs = Number(yTicks[1]?.text ?? 0) - Number(yTicks[0]?.text ?? 0) || stepOf(y);
    const [leftMs = 0, rightMs = 0] = x.domain();
    const [topMs = 0, bottomMs = 0] = y.domain();
    const reach = gamma * (Math.max(Math.abs(topMs), Math.abs(bottomMs)) + Math.max(Math.abs(leftMs), Math.abs(rightMs)));
    const most = Math.min(60, Math.ceil(reach / Math.abs(everyMs)));
    for (let k = -most; k <= most; k++) {
      const at = (xMs: number): number => (k * everyMs) / gamma - velocityC * xMs;
      lines.push({ kind: k === 0 ? 'instant' : 'instant-other', path: through([[leftMs, at(leftMs)], [rightMs, at(rightMs)]]) }); // prettier-ignore
    }
  }
  words.push(...instantWords(given, velocityC));
  // A worldline at x in the geocentric frame is x' = x / gamma - v t' here.
  const across = (xMs: number, tMs: number): number => xMs / gamma - velocityC * tMs;
  const [topMs = 0, bottomMs = 0] = y.domain();
  for (const [code, xMs] of [
    [from, 0],
    [to, other?.xMs],
  ] as const) {
    // prettier-ignore
    if (xMs === undefined) continue;
    lines.push({ kind: 'worldline', path: through([[across(xMs, topMs), topMs], [across(xMs, bottomMs), bottomMs]]) }); // prettier-ignore
    const top = x(across(xMs, topMs));
    if (top >= box.left && top <= right) words.push({ kind: 'site', text: code, x: top, y: box.top - 9, anchor: 'middle' });
    else if (x(across(xMs, bottomMs)) >= box.left && x(across(xMs, bottomMs)) <= right)
      words.push({ kind: 'site', text: code, x: x(across(xMs, bottomMs)) + 6, y: bottom - 8 });
  }
  for (const path of cone.lines) lines.push({ kind: 'light', path });
  const marks = given.labels.map(({ row }) => ({ x: x(given.shown.xMs[row] ?? 0), y: y(given.shown.tMs[row] ?? 0) }));
  const light = freeOnLight({ x: x(0), y: y(0) }, Math.min(right - x(0), y(0) - box.top), marks);
  if (light) words.push({ kind: 'light', text: 'light', ...light, turnDeg: -45 });
  if (other?.isSpacelike) {
    const curve = curveThrough(other, y);
    lines.push({ kind: 'curve', path: through(curve) });
    const label = curve.find(([, tMs], i) => y(tMs) < box.top + 46 || i === curve.length - 1);
    if (label && isIn(label[0], x))
      words.push({ kind: 'spacelike', text: 'same s\u00b2', x: x(label[0]) - 6, y: y(label[1]) + 4, anchor: 'end' });
    if (isMoving) {
      lines.push({ kind: 'curve-path', path: through(trail(other.xMs, other.tMs, Math.asinh(gammaBeta))) });
      const isLeft = x(other.xMs) > right - 76;
      words.push({
        kind: 'mark',
        text: 'geocentric',
        x: x(other.xMs) + (isLeft ? -12 : 12),
        y: y(other.tMs) + 4,
        anchor: isLeft ? 'end' : 'start',
      });
    }
  }
  if (isMoving)
    for (const row of given.trails)
      lines.push({ kind: 'trail', path: through(trail(given.rest.xMs[row] ?? 0, given.rest.tMs[row] ?? 0, Math.asinh(gammaBeta))) });
  return {
    box,
    lines,
    words: [...words, ...labelWords(given, words)],
    xTicks: plainTicks(x, 64, isMoving),
    yTicks,
    xTitle: isMoving ? `Place along ${from} to ${to} in this frame, x\u2032, light-ms` : `Distance along ${from} to ${to}, light-ms`,
    yTitle: isMoving ? `Time in this frame after ${originName}, t\u2032, ms` : `Time after ${originName}, ms`,
    slanted: isMoving,
  };
}

/** What is one instant in the geocentric frame, and in the frame that is shown: beside the cone of the origin, where there is room. */
function instantWords({ box, x, y }: BaselineGiven, velocityC: number): PictureWord[] {
  const turnDeg = (Math.atan(velocityC) * 180) / Math.PI;
  const side = Math.sign(velocityC);
  const texts = box.width < NARROW_PX ? ['geocentric instant'] : ['one instant in the geocentric frame', 'geocentric instant'];
  const along = texts.flatMap((text) =>
    [0.28, 0.2, -0.28, -0.2].map((part): PictureWord => {
      const atX = x(0) + side * part * box.width;
      return { kind: 'instant', text, x: atX + 4, y: y(-velocityC * x.invert(atX)) - 6, turnDeg, anchor: 'middle' };
    }),
  );
  const text = side === 0 ? 'one geocentric instant' : 'one instant here';
  const here: PictureWord[] = [
    { kind: 'here', text, x: box.left + 6, y: y(0) - 6 },
    { kind: 'here', text, x: box.left + box.width - 6, y: y(0) - 6, anchor: 'end' },
  ];
  const cone = [-18, -9, 0, 9, 18].map((acrossPx) => ({ x: x(0) + acrossPx, y: y(0) - Math.abs(acrossPx) }));
  return placeWords(side === 0 ? [here] : [along, here], [], cone, box);
}

/** Where frames from rest to a rapidity place an event. */
function trail(xMs: number, tMs: number, rapidity: number): [number, number][] {
  return Array.from({ length: TRAIL_STEPS + 1 }, (_, step) => {
    const [c, s] = [Math.cosh((rapidity * step) / TRAIL_STEPS), Math.sinh((rapidity * step) / TRAIL_STEPS)];
    return [c * xMs - s * tMs, c * tMs - s * xMs];
  });
}

/** The curve of one interval through a spacelike event, over the time that is shown. */
function curveThrough({ xMs, tMs }: { readonly xMs: number; readonly tMs: number }, y: Scale): [number, number][] {
  const square = (Math.abs(xMs) - Math.abs(tMs)) * (Math.abs(xMs) + Math.abs(tMs));
  const [topMs = 0, bottomMs = 0] = y.domain();
  return Array.from({ length: 81 }, (_, step) => {
    const t = bottomMs + ((topMs - bottomMs) * step) / 80;
    return [Math.sign(xMs) * Math.sqrt(square + t * t), t];
  });
}

/** Where on the light line that goes up to the right a short word stands free of marks. */
function freeOnLight(
  from: { readonly x: number; readonly y: number },
  reachPx: number,
  marks: readonly { readonly x: number; readonly y: number }[],
): { readonly x: number; readonly y: number } | undefined {
  for (const part of [0.5, 0.32, 0.68, 0.2, 0.84]) {
    const at = { x: from.x + part * reachPx - 6, y: from.y - part * reachPx - 6 };
    const isFree = marks.every((mark) => Math.hypot(mark.x - at.x - 10, mark.y - at.y + 10) > 34);
    if (part * reachPx > 34 && isFree) return at;
  }
  return undefined;
}

function labelWords({ labels: all, shown, x, y, box }: BaselineGiven, others: readonly PictureWord[]): PictureWord[] {
  const at = (row: number) => ({ x: x(shown.xMs[row] ?? 0), y: y(shown.tMs[row] ?? 0) });
  const labels = all.filter(({ row }) => {
    const mark = at(row);
    return mark.x > box.left && mark.x < box.left + box.width && mark.y > box.top && mark.y < box.top + box.height;
  });
  const placed = placeBeside(
    labels.map(({ row, code }) => ({ ...at(row), width: widthOfWords(code, 11) })),
    [...labels.map(({ row }) => at(row)), { x: x(0), y: y(0) }, ...others.flatMap(pointsOf)],
    box,
  );
  return labels.flatMap(({ code, isMain }, i): PictureWord[] => {
    const place = placed[i];
    return place ? [{ kind: isMain ? 'site-other' : 'mark', text: code, ...place }] : [];
  });
}

/** Points that words cover, so that no label is put on them; words that are turned are covered where they begin. */
function pointsOf({ x, y, text, anchor = 'start' }: PictureWord): { readonly x: number; readonly y: number }[] {
  const width = widthOfWords(text, 11);
  const left = anchor === 'start' ? x : anchor === 'end' ? x - width : x - width / 2;
  return Array.from({ length: Math.ceil(width / 12) + 1 }, (_, i) => ({ x: left + 12 * i, y: y - 4 }));
}

const isIn = (value: number, scale: Scale): boolean => {
  const [a = 0, b = 0] = scale.domain();
  return value >= Math.min(a, b) && value <= Math.max(a, b);
};

const stepOf = (scale: Scale): number => {
  const [a = 0, b = 1] = scale.ticks(8);
  return b - a;
};
