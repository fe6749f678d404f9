import { C_M_S } from '#shared/constants';
import { boostEvent } from '#shared/relativity/boost';
import { type FourVector } from '#shared/relativity/four-vector';
import { turningVelocity } from '#shared/relativity/turning';
import { type FourVelocity, fourVelocity, rapidity } from '#shared/relativity/velocity';

/** A place and a time on one axis, from an event at the origin: both in light-milliseconds, so that light stands at 45 degrees. */
export interface PlaneEvent {
  /** Along the axis, light-ms. */
  readonly xMs: number;
  /** Time, ms; positive is later. */
  readonly tMs: number;
}

const M_PER_LIGHT_MS = C_M_S / 1000;

/** The event in the core's metres, the picture's axis as the first of three. */
const inMetres = ({ xMs, tMs }: PlaneEvent): FourVector => ({ ctM: tMs * M_PER_LIGHT_MS, xM: [xMs * M_PER_LIGHT_MS, 0, 0] });

/** The event as a frame that moves along the axis places it; the velocity is measured in the frame at rest. */
export function seenFrom(event: PlaneEvent, velocity: FourVelocity): PlaneEvent {
  const { ctM, xM } = boostEvent(velocity, inMetres(event));
  return { xMs: xM[0] / M_PER_LIGHT_MS, tMs: ctM / M_PER_LIGHT_MS };
}

/** The slowest frame in which the event is simultaneous with the one at the origin; nothing unless it is spacelike. */
export const turningFrame = (event: PlaneEvent): FourVelocity | undefined => turningVelocity(event.tMs / 1000, inMetres(event).xM);

/**
 * The curve on which every frame along the axis places a spacelike event.
 *
 * @param event spacelike from the origin and on its positive side
 * @param reach rapidity of the fastest frames, either way from the one in which the event is simultaneous with the origin
 * @param steps how many straight pieces
 * @returns steps + 1 points from early to late, none for an event that is not spacelike
 */
export function placesInAllFrames(event: PlaneEvent, reach: number, steps: number): PlaneEvent[] {
  const turning = turningFrame(event);
  if (turning === undefined) return [];
  const middle = Math.sign(event.tMs) * rapidity(turning);
  return Array.from({ length: steps + 1 }, (_, step) => {
    const gammaBeta = Math.sinh(middle + reach * (1 - (2 * step) / steps));
    return seenFrom(event, fourVelocity([gammaBeta, 0, 0]));
  });
}
