import { type Colours } from './colours';
import { densityOf, inkOf } from './density';
import { MARK_KINDS, type MarkKind } from './mark-shape';
import { type Box, type Scale } from './one-scale';
import { type Plane } from './plane';

/** More marks than this are inked as a density. */
export const MOST_MARKS = 20_000;
const CELL_PX = 3;
const SMALL_PX = 3.4;
const STAMP_PX = 12; // the largest mark with its line, and room around it

/** What marks are painted from: every row of the plane that lies in the box. */
export interface Painted {
  readonly plane: Plane;
  readonly kinds: Uint8Array;
  readonly x: Scale;
  readonly y: Scale;
  readonly box: Box;
  /** How many lie in the box. */
  readonly inBox: number;
  readonly colours: Colours;
}

/** Paints marks on a canvas, its origin at the box's corner: one kind after the other, or above `MOST_MARKS` their density. */
export function paintMarks(context: CanvasRenderingContext2D, painted: Painted): void {
  const { box, inBox } = painted;
  context.clearRect(0, 0, box.width, box.height);
  if (inBox > MOST_MARKS) paintDensity(context, painted);
  else for (const kind of MARK_KINDS) if (kind !== 'selected') paintKind(context, painted, kind);
}

/** The mark is drawn once and then stamped: a path of thousands of marks takes a browser half a second, since it looks for where they cross. */
function paintKind(context: CanvasRenderingContext2D, { plane, kinds, x, y, box, colours }: Painted, kind: MarkKind): void {
  const wanted = MARK_KINDS.indexOf(kind);
  const [x0, kx, y0, ky] = [x(0) - box.left, x(1) - x(0), y(0) - box.top, y(1) - y(0)];
  let stamp: HTMLCanvasElement | undefined;
  for (let i = 0; i < plane.count; i++) {
    if (kinds[i] !== wanted) continue;
    const px = x0 + kx * (plane.xMs[i] ?? 0);
    const py = y0 + ky * (plane.tMs[i] ?? 0);
    if (px < 0 || py < 0 || px > box.width || py > box.height) continue;
    stamp ??= stampOf(kind, colours, context.getTransform().a);
    context.drawImage(stamp, px - STAMP_PX / 2, py - STAMP_PX / 2, STAMP_PX, STAMP_PX);
  }
}

/** One mark in the middle of a small canvas, as dense as the screen. */
function stampOf(kind: MarkKind, colours: Colours, dense: number): HTMLCanvasElement {
  const canvas = document.createElement('canvas');
  canvas.width = canvas.height = Math.ceil(STAMP_PX * dense);
  const context = canvas.getContext('2d');
  if (!context) return canvas;
  context.scale(canvas.width / STAMP_PX, canvas.height / STAMP_PX);
  context.translate(STAMP_PX / 2, STAMP_PX / 2);
  context.beginPath();
  if (kind === 'timelike' || kind === 'spacelike') {
    const [w, h] = kind === 'timelike' ? [SMALL_PX * 0.8, SMALL_PX * 1.3] : [SMALL_PX * 1.3, SMALL_PX * 0.8];
    context.moveTo(0, -h);
    context.lineTo(w, 0);
    context.lineTo(0, h);
    context.lineTo(-w, 0);
    context.closePath();
  } else context.arc(0, 0, SMALL_PX * (kind === 'undecided' ? 0.92 : 0.5), 0, 2 * Math.PI);
  const isFilled = kind === 'timelike' || kind === 'plain';
  context.fillStyle = kind === 'plain' ? colours.ink : kind === 'timelike' ? colours.timelike : colours.sheet;
  context.fill();
  if (isFilled) return canvas;
  context.lineWidth = 1.3;
  context.strokeStyle = kind === 'spacelike' ? colours.spacelike : colours.undecided;
  context.stroke();
  return canvas;
}

function paintDensity(context: CanvasRenderingContext2D, { plane, x, y, box, colours }: Painted): void {
  const [x0, kx, y0, ky] = [x(0) - box.left, x(1) - x(0), y(0) - box.top, y(1) - y(0)];
  const size = { width: box.width, height: box.height, cell: CELL_PX };
  const density = densityOf(
    plane.count,
    (i) => x0 + kx * (plane.xMs[i] ?? 0),
    (i) => y0 + ky * (plane.tMs[i] ?? 0),
    size,
  );
  context.fillStyle = colours.ink;
  for (let row = 0; row < density.rows; row++)
    for (let column = 0; column < density.columns; column++) {
      const count = density.counts[row * density.columns + column] ?? 0;
      if (count === 0) continue;
      context.globalAlpha = inkOf(count, density.most);
      context.fillRect(column * CELL_PX, row * CELL_PX, CELL_PX, CELL_PX);
    }
  context.globalAlpha = 1;
}
