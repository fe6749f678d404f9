import { type Instant } from '#shared/time/instant';
import { type Scale as TimeScale } from '#shared/time/scales';
import { linesOfLabels } from './labels';
import { type Box, type Scale } from './one-scale';
import { lightConeAt, type Picture, type PictureLine, type PictureWord, round, widthOfWords } from './picture';
import { plainTicks, timeTicks } from './time-ticks';

/** A site in a picture: where it stands across, in the unit of the axis. */
export interface SiteAcross {
  readonly code: string;
  readonly xMs: number;
}

export interface AroundGiven {
  readonly box: Box;
  readonly x: Scale;
  readonly y: Scale;
  /** The event's instant: where time counts from. */
  readonly origin: Instant;
  readonly scale: TimeScale;
  readonly site: string;
  /** Light-time of each site from the event, at the event's instant. */
  readonly sites: readonly SiteAcross[];
}

const LABEL_PX = 11.5;
const LABEL_LINE_PX = 14;
const LEAST_WORDS_PX = 70; // a cone that is lower has no words

/** The picture around an event: its light cone, exact against every mark, and the worldlines of the sites at their light-time from it. */
export function aroundPicture({ box, x, y, origin, scale, site, sites }: AroundGiven): Picture {
  const right = box.left + box.width;
  const bottom = box.top + box.height;
  const [x0, y0] = [x(0), y(0)];
  const time = timeTicks(y, origin, scale);
  const lines: PictureLine[] = [];
  const cone = lightConeAt(x0, y0, box);
  for (const path of cone.rightCones) lines.push({ kind: 'cone', path });
  const fine = (time.ticks[0]?.at ?? 0) - (time.ticks[1]?.at ?? 0);
  for (const { at } of time.ticks) {
    lines.push({ kind: 'grid', path: `M${box.left} ${round(at)}H${right}` });
    for (let k = 1; k < 5 && fine > 40; k++) lines.push({ kind: 'grid-fine', path: `M${box.left} ${round(at - (k * fine) / 5)}H${right}` });
  }
  const shown = sites.filter(({ xMs }) => x(xMs) >= box.left - 1 && x(xMs) <= right + 1);
  for (const { code, xMs } of shown)
    lines.push({ kind: code === site ? 'worldline' : 'worldline-other', path: `M${round(x(xMs))} ${box.top - 4}V${bottom}` });
  for (const path of cone.rightRays) lines.push({ kind: 'light', path });
  return {
    box,
    lines,
    words: [...siteWords(shown, site, x, box), ...coneWords({ box, x0, y0, site })],
    xTicks: plainTicks(x, 64, false).filter(({ at }) => at >= box.left - 1),
    yTicks: time.ticks,
    xTitle: `Light-time from ${site}, light-ms`,
    yTitle: time.title,
    slanted: false,
  };
}

/** Codes of sites above their worldlines, on lines where they would touch. */
export function siteWords(sites: readonly SiteAcross[], main: string, x: Scale, box: Box): PictureWord[] {
  const lines = linesOfLabels(
    sites.map(({ code, xMs }) => ({ at: x(xMs), width: widthOfWords(code, LABEL_PX) })),
    5,
  );
  return sites.flatMap(({ code, xMs }, i): PictureWord[] => {
    const line = lines[i] ?? -1;
    if (line < 0) return [];
    const kind = code === main ? 'site' : 'site-other';
    return [{ kind, text: code, x: x(xMs), y: box.top - 10 - line * LABEL_LINE_PX, anchor: 'middle' }];
  });
}

function coneWords({ box, x0, y0, site }: { readonly box: Box; readonly x0: number; readonly y0: number; readonly site: string }) {
  const right = box.left + box.width;
  const bottom = box.top + box.height;
  const words: PictureWord[] = [];
  const up = y0 - box.top;
  const down = bottom - y0;
  const narrow = box.width < 300;
  const cause = `${site} can be the cause`;
  const caused = narrow ? `can cause ${site}` : `can be the cause of ${site}`;
  const left = Math.max(x0, box.left) + 10;
  if (up > LEAST_WORDS_PX + widthOfWords(cause, 12) - 60) words.push({ kind: 'cone', text: cause, x: left + 30, y: box.top + 20 });
  if (down > widthOfWords(caused, 12) + 20) words.push({ kind: 'cone', text: caused, x: left + 30, y: bottom - 14 });
  if (x0 < right - 230 && y0 > box.top && y0 < bottom)
    words.push({
      kind: 'spacelike',
      text: narrow ? 'order depends on frame' : 'order depends on the frame',
      x: right - 5,
      y: y0 - 7,
      anchor: 'end',
    });
  const leaves = Math.min(up, right - x0) * 0.68;
  if (leaves > 60) words.push({ kind: 'light', text: narrow ? 'light' : `light leaving ${site}`, x: x0 + leaves - 7, y: y0 - leaves - 7, turnDeg: -45, anchor: narrow ? 'start' : 'middle' }); // prettier-ignore
  const reaches = Math.min(down, right - x0) * 0.6;
  if (reaches > 90 && !narrow) words.push({ kind: 'light', text: `light reaching ${site}`, x: x0 + reaches + 6, y: y0 + reaches - 7, turnDeg: 45, anchor: 'middle' }); // prettier-ignore
  return words;
}
