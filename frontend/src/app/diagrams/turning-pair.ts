/** A place and a time on one axis, from an event at the origin: both in light-milliseconds, so that light stands at 45 degrees. */
export interface PlaneEvent {
  /** Along the axis, light-ms. */
  readonly xMs: number;
  /** Time, ms; positive is later. */
  readonly tMs: number;
}

/**
 * The same event as a frame moving along the axis places it: x' = g (x - b t), t' = g (t - b x), g = 1 / sqrt(1 - b^2).
 *
 * @param event in the frame at rest
 * @param velocityC the frame's speed along the axis, in c, between -1 and 1
 * @returns the event in the moving frame; x'^2 - t'^2 is what it was
 * Source: Einstein 1905, section 3; Rindler, Relativity (2nd edition, 2006), equation 2.6.
 */
export function seenFrom(event: PlaneEvent, velocityC: number): PlaneEvent {
  const gamma = 1 / Math.sqrt(1 - velocityC * velocityC);
  return { xMs: gamma * (event.xMs - velocityC * event.tMs), tMs: gamma * (event.tMs - velocityC * event.xMs) };
}

/** The least speed, in c along the axis, beyond which a spacelike event comes before the one at the origin: t / x. */
export const turningSpeedC = (event: PlaneEvent): number => event.tMs / event.xMs;

/**
 * The hyperbola on which every frame along the axis places a spacelike event.
 *
 * @param event spacelike from the origin and on its positive side
 * @param reachMs how far up and down the curve goes, ms
 * @param steps how many straight pieces
 * @returns steps + 1 points from early to late
 */
export function placesInAllFrames(event: PlaneEvent, reachMs: number, steps: number): PlaneEvent[] {
  const properMs2 = event.xMs * event.xMs - event.tMs * event.tMs;
  return Array.from({ length: steps + 1 }, (_, step) => {
    const tMs = reachMs * ((2 * step) / steps - 1);
    return { xMs: Math.sqrt(properMs2 + tMs * tMs), tMs };
  });
}
