import { C_M_S } from '../constants';
import { type Pair } from './pair';
import { rootOfSquares } from './root-of-squares';
import { dot, norm, scale, type Vec3 } from './vector';
import { type FourVelocity } from './velocity';

/** Where the order of a spacelike pair turns. */
export interface Turning {
  /** The least frame speed, in c, at which the order reverses. */
  readonly speedC: number;
  /** Its standard error, in c. */
  readonly sigmaC: number;
  /** Unit vector from a to b, GCRS axes: the direction of that frame's velocity. */
  readonly toward: Vec3;
}

/** Which of two events comes first in a frame, or that its own error leaves it open. */
export type FrameOrder = 'a' | 'b' | 'tie';

/**
 * The turning speed of a spacelike pair: c dt / distance, towards b.
 *
 * @param pair a pair at a distance above 0
 * @returns speed and error in c; the error is sqrt((c sigma_dt)^2 + (v sigma_d)^2) / distance
 */
export function turningOf(pair: Pair): Turning {
  const speedC = (pair.dtNs * C_M_S) / 1e9 / pair.distanceM;
  const timeSigmaM = (pair.sigmaDtNs * C_M_S) / 1e9;
  return {
    speedC,
    sigmaC: rootOfSquares(timeSigmaM, speedC * pair.sigmaDM) / pair.distanceM,
    toward: scale(1 / pair.distanceM, pair.dxM),
  };
}

/**
 * The time from a to b in a frame.
 *
 * @param velocity the frame's four-velocity in the geocentric frame
 * @returns nanoseconds; to 1 ps + 1e-12 of gamma times the larger of dt and distance / c
 */
export function frameDtNs(pair: Pair, velocity: FourVelocity): number {
  return velocity.gamma * pair.dtNs - (dot(velocity.gammaBeta, pair.dxM) / C_M_S) * 1e9;
}

/** Standard error of the time from a to b in a frame, ns: gamma sqrt(sigma_dt^2 + beta^2 sigma_d^2 / c^2). */
export function frameSigmaNs(pair: Pair, velocity: FourVelocity): number {
  return rootOfSquares(velocity.gamma * pair.sigmaDtNs, ((norm(velocity.gammaBeta) * pair.sigmaDM) / C_M_S) * 1e9);
}

/** The order of a pair in a frame: a tie when its time difference there is within `sigmas` of its own standard errors. */
export function orderFrom(dtNs: number, sigmaNs: number, sigmas: number): FrameOrder {
  if (Math.abs(dtNs) <= sigmas * sigmaNs) return 'tie';
  return dtNs > 0 ? 'a' : 'b';
}
