import { placeWords } from './labels';
import { type PairPictureGiven } from './pair-picture';
import { type PictureWord, widthOfWords } from './picture';

/** Where a word may stand, the best place first. */
type Places = readonly PictureWord[];

const LABEL_PX = 15;
/** Worldlines nearer than this are one line on the screen. */
const ONE_LINE_PX = 12;

/** The words of a pair's picture. Those of its sites and at its edge stand always; the others where there is room for them. */
export function pairWords(given: PairPictureGiven): PictureWord[] {
  const { box, x, y, xMs, tMs } = given;
  const { atEdge, along } = speedWords(given);
  const kept = [...siteWords(given), ...atEdge];
  const marks = [{ x: x(0), y: y(0) }, { x: x(xMs), y: y(tMs) }]; // prettier-ignore
  return [...kept, ...placeWords([errorPlaces(given), ...along, ...lightPlaces(given), samePlaces(given)], kept, marks, box)];
}

function siteWords({ box, x, sites, xMs }: PairPictureGiven): PictureWord[] {
  const [right, bottom] = [box.left + box.width, box.top + box.height];
  const isRoomy = x(xMs) + 12 + widthOfWords(sites[1], 12) < right;
  const isOneLine = x(xMs) - x(0) < ONE_LINE_PX;
  return isOneLine
    ? [{ kind: 'site', text: sites[0] === sites[1] ? sites[0] : sites.join(', '), x: x(0) - 8, y: box.top + 18, anchor: 'end' }]
    : [
        { kind: 'site', text: sites[0], x: x(0) - 8, y: box.top + 18, anchor: 'end' },
        isRoomy
          ? { kind: 'site', text: sites[1], x: x(xMs) + 8, y: bottom - 9 }
          : { kind: 'site', text: sites[1], x: x(xMs) - 8, y: bottom - 9, anchor: 'end' },
      ];
}

/** The error beside the later event. */
function errorPlaces({ box, x, y, xMs, tMs, errorText: text }: PairPictureGiven): Places {
  const [atX, atY, right] = [x(xMs), y(tMs), box.left + box.width];
  return [
    { kind: 'mark', text, x: atX + 12, y: atY + 18 },
    { kind: 'mark', text, x: right - 6, y: atY + 28, anchor: 'end' },
    { kind: 'mark', text, x: atX - 12, y: atY + 18, anchor: 'end' },
    { kind: 'mark', text, x: atX + 12, y: atY - 12 },
    { kind: 'mark', text, x: right - 6, y: atY - 20, anchor: 'end' },
    { kind: 'mark', text, x: atX - 12, y: atY - 12, anchor: 'end' },
  ];
}

/** What the cone of the earlier event says, and the light that goes from it. */
function lightPlaces({ box, x, y, names }: PairPictureGiven): readonly Places[] {
  const right = box.left + box.width;
  const isWide = y(0) - box.top > 80 && right - x(0) > 150;
  const cause: Places = isWide ? [{ kind: 'cone', text: `${names[0]} can be the cause`, x: x(0) + 10, y: box.top + 42 }] : [];
  const reachPx = Math.min(right - x(0), y(0) - box.top);
  const light = [0.62, 0.46, 0.76].map((part): PictureWord => ({
    kind: 'light',
    text: `light from ${names[0]}`,
    x: x(0) + part * reachPx - 4,
    y: y(0) - part * reachPx - 6,
    turnDeg: -45,
    anchor: 'middle',
  }));
  return [cause, 0.62 * reachPx > 90 ? light : []];
}

/** What the curve is called, beside it. */
function samePlaces({ box, x, y, xMs, tMs, class: kind }: PairPictureGiven): Places {
  const square = (xMs - tMs) * (xMs + tMs);
  const text = 'same s\u00b2';
  const style = kind === 'spacelike' ? 'spacelike' : kind === 'timelike' ? 'cone' : 'note';
  if (square > 0)
    return [0.4, 0.6, 0.75, 0.25].map((part) => {
      const at = y(0) + part * (box.top + box.height - y(0));
      return { kind: style, text, x: x(Math.hypot(Math.sqrt(square), y.invert(at))) - 8, y: at, anchor: 'end' };
    });
  return [0.1, 0.2, 0.02].map((part) => {
    const at = box.left + box.width * part + 3;
    return { kind: style, text, x: at, y: y(Math.hypot(Math.sqrt(-square), x.invert(at))) - 8 };
  });
}

/**
 * The frames' speeds where their lines leave the box, at its right edge, or along a line that leaves above or below; of lines that leave it at
 * one place the slowest frame's alone.
 */
function speedWords({ box, x, y, frames, turningC, class: kind }: PairPictureGiven): {
  readonly atEdge: readonly PictureWord[];
  readonly along: readonly Places[];
} {
  const right = box.left + box.width;
  const [, rightMs = 0] = x.domain();
  const [topMs = 0, bottomMs = 0] = y.domain();
  const texts = [
    ...[...frames].sort((a, b) => Math.abs(a.alongC) - Math.abs(b.alongC)).map(({ alongC }) => ({ alongC, text: `\u03b2 ${betaText(alongC)}`, isTurning: false })), // prettier-ignore
  ];
  const kept: typeof texts = turningC === undefined ? [] : [{ alongC: turningC, text: turningC.toFixed(3), isTurning: true }];
  const atOf = (alongC: number): number => y(alongC * rightMs);
  for (const one of texts)
    if (kept.every(({ alongC, isTurning }) => isTurning || Math.abs(atOf(alongC) - atOf(one.alongC)) > 6)) kept.push(one);
  const leavesRight = ({ alongC }: { readonly alongC: number }): boolean => alongC * rightMs <= topMs && alongC * rightMs >= bottomMs;
  const edge = spread(kept.filter(leavesRight).map((one) => ({ ...one, at: atOf(one.alongC) })));
  const atEdge = edge.map(({ text, isTurning, at }): PictureWord => ({
    kind: !isTurning ? 'edge' : kind === 'undecided' ? 'note' : 'edge-turning',
    text,
    x: right + 8,
    y: at + 4,
  }));
  const along = [topMs, bottomMs].flatMap((endMs) => {
    const leaving = kept.filter((one) => !leavesRight(one) && one.alongC * endMs > 0);
    return leaving.map(({ text, isTurning, alongC }, i): Places => {
      // It leaves at the top or the bottom: its words stand along it, the flattest line's above it and the steepest one's below.
      const isBelow = (i === leaving.length - 1 && i > 0) === endMs < 0;
      const share = i > 0 && i < leaving.length - 1 ? 0.36 : 0.6;
      const placeAt = (part: number, below: boolean): PictureWord => ({
        kind: !isTurning ? 'instant' : kind === 'undecided' ? 'note' : 'spacelike',
        text,
        x: x((part * endMs) / alongC),
        y: y(part * endMs) + (below ? 14 : -6),
        turnDeg: (-Math.atan(alongC) * 180) / Math.PI,
        anchor: 'middle',
      });
      return [share, 0.6, 0.36, 0.76, 0.24].flatMap((part) => [placeAt(part, isBelow), placeAt(part, !isBelow)]);
    });
  });
  return { atEdge, along };
}

/** Labels moved down or up so far that none touches another; their order stays. */
export function spread<T extends { readonly at: number }>(labels: readonly T[]): T[] {
  const placed = [...labels].sort((a, b) => a.at - b.at);
  for (let pass = 0; pass < 60; pass++) {
    let moved = false;
    for (let i = 1; i < placed.length; i++) {
      const [above, below] = [placed[i - 1], placed[i]];
      if (!above || !below) continue;
      const lacks = LABEL_PX - (below.at - above.at);
      if (lacks <= 0.01) continue;
      placed[i - 1] = { ...above, at: above.at - lacks / 2 };
      placed[i] = { ...below, at: below.at + lacks / 2 };
      moved = true;
    }
    if (!moved) break;
  }
  return placed;
}

const betaText = (alongC: number): string => (alongC === 0 ? '0' : `${alongC < 0 ? '\u2212' : ''}${Math.abs(alongC).toFixed(2)}`);
