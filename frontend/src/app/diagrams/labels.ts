import { type PictureWord, widthOfWords } from './picture';

/** A label on one line: where its middle would stand, and how wide it is, px. */
export interface LineLabel {
  readonly at: number;
  readonly width: number;
}

/** Lines of labels above a diagram, at most. */
export const MOST_LABEL_LINES = 3;

/**
 * On which line each label stands so that none touches another: 0 is the nearest to the diagram; -1 where there is no room.
 *
 * @param labels in the order in which they are to be placed
 * @param gap least distance between two, px
 */
export function linesOfLabels(labels: readonly LineLabel[], gap: number): number[] {
  const ends: number[] = [];
  const order = labels.map((_, i) => i).sort((a, b) => (labels[a]?.at ?? 0) - (labels[b]?.at ?? 0));
  const lines = labels.map(() => -1);
  for (const i of order) {
    const { at, width } = labels[i] ?? { at: 0, width: 0 };
    const from = at - width / 2;
    let line = ends.findIndex((end) => end + gap <= from);
    if (line === -1 && ends.length < MOST_LABEL_LINES) line = ends.length;
    if (line === -1) continue;
    lines[i] = line;
    ends[line] = at + width / 2;
  }
  return lines;
}

interface Area {
  readonly left: number;
  readonly top: number;
  readonly right: number;
  readonly bottom: number;
}

/** A label beside a mark: its point and size, px. */
export interface MarkLabel {
  readonly x: number;
  readonly y: number;
  readonly width: number;
}

export interface PlacedLabel {
  readonly x: number;
  readonly y: number;
  readonly anchor: 'start' | 'end';
}

const HEIGHT_PX = 13;
const OFF_PX = 11;

/**
 * Places labels beside their marks, each at the first of eight places where it touches no mark and no label placed before.
 *
 * @param labels the most important first
 * @param marks points that no label may hide, px
 * @param box within which labels stand
 * @returns one for each label; undefined where there is no free place
 */
export function placeBeside(
  labels: readonly MarkLabel[],
  marks: readonly { readonly x: number; readonly y: number }[],
  box: { readonly left: number; readonly top: number; readonly width: number; readonly height: number },
): (PlacedLabel | undefined)[] {
  const taken: Area[] = marks.map(({ x, y }) => ({ left: x - 7, top: y - 7, right: x + 7, bottom: y + 7 }));
  return labels.map(({ x, y, width }) => {
    for (const up of [-5, 4, 14, -15])
      for (const anchor of ['start', 'end'] as const) {
        const left = anchor === 'start' ? x + OFF_PX : x - OFF_PX - width;
        const area = { left, top: y + up - HEIGHT_PX + 3, right: left + width, bottom: y + up + 3 };
        if (!isWithin(area, box) || taken.some((other) => touch(area, other))) continue;
        taken.push(area);
        return { x: anchor === 'start' ? left : left + width, y: y + up, anchor };
      }
    return undefined;
  });
}

const LARGEST_WORDS_PX = 12;
/** From a word's line to its middle, px. */
const HALF_UP_PX = 4;
/** Words whose middles are nearer than a line is high touch. */
const APART_PX = 13;
const STEP_PX = 6;

/**
 * Places the words of a picture, each at the first of its places where it is in the box and touches no mark and no word placed before.
 *
 * @param wanted the most important first, each with its places, the best first
 * @param kept words that stand already
 * @param marks points that no word may hide, px
 * @returns those that found a place, where they stand
 */
export function placeWords(
  wanted: readonly (readonly PictureWord[])[],
  kept: readonly PictureWord[],
  marks: readonly { readonly x: number; readonly y: number }[],
  box: { readonly left: number; readonly top: number; readonly width: number; readonly height: number },
): PictureWord[] {
  const taken = [...marks, ...kept.flatMap(middleOf)];
  return wanted.flatMap((places) => {
    for (const word of places) {
      const middle = middleOf(word);
      const isInBox = middle.every(({ x, y }) => isWithin({ left: x - 3, top: y - 7, right: x + 3, bottom: y + 7 }, box));
      if (!isInBox || middle.some(({ x, y }) => taken.some((other) => Math.hypot(other.x - x, other.y - y) < APART_PX))) continue;
      taken.push(...middle);
      return [word];
    }
    return [];
  });
}

/** Points along the middle of words, turned as they are, px. */
function middleOf({ x, y, text, anchor = 'start', turnDeg = 0 }: PictureWord): { readonly x: number; readonly y: number }[] {
  const width = widthOfWords(text, LARGEST_WORDS_PX);
  const from = anchor === 'start' ? 0 : anchor === 'end' ? -width : -width / 2;
  const [cos, sin] = [Math.cos((turnDeg * Math.PI) / 180), Math.sin((turnDeg * Math.PI) / 180)];
  const steps = Math.max(1, Math.ceil((width - STEP_PX) / STEP_PX));
  return Array.from({ length: steps + 1 }, (_, i) => {
    const along = from + STEP_PX / 2 + ((width - STEP_PX) * i) / steps;
    return { x: x + along * cos + HALF_UP_PX * sin, y: y + along * sin - HALF_UP_PX * cos };
  });
}

const touch = (a: Area, b: Area): boolean => a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom;

const isWithin = (area: Area, box: { readonly left: number; readonly top: number; readonly width: number; readonly height: number }) =>
  area.left >= box.left + 2 && area.right <= box.left + box.width - 2 && area.top >= box.top + 2 && area.bottom <= box.top + box.height - 2;
