/** Times the larger of distance and time between: below the first event lies so much of the picture as the other needs that came before it. */
const TIMES = 3.6;
const STEPS = [1, 2, 5, 10];
/** What the address can say, and what is held around the event without a further reading. */
const LIMITS_MS = { least: 1e-3, most: 1_000 };

/**
 * How much time a picture along a baseline shows at first, so that its two ends stand well apart: a step of 1, 2 or 5.
 *
 * @param lightMs light-time from one end to the other
 * @param apartMs time between them, with either sign
 * @returns ms; undefined where the ends are one point
 */
export function firstSpanMs(lightMs: number, apartMs: number): number | undefined {
  const wantedMs = TIMES * Math.max(Math.abs(lightMs), Math.abs(apartMs));
  if (wantedMs === 0) return undefined;
  const power = Math.floor(Math.log10(wantedMs));
  // Of a negative power the quotient is exact where the product is not: 2 / 10 is 0.2.
  const steps = STEPS.map((step) => (power < 0 ? step / 10 ** -power : step * 10 ** power));
  const spanMs = steps.find((step) => step >= wantedMs) ?? LIMITS_MS.most;
  return Math.min(LIMITS_MS.most, Math.max(LIMITS_MS.least, spanMs));
}
