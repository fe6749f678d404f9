import { C_M_S } from '../constants';

/**
 * The invariant interval (c dt)^2 - distance^2, m^2, metric +---: positive = timelike.
 *
 * Written as a product, so that nothing cancels near the light cone beyond what the two lengths themselves lost.
 */
export function intervalM2(dtNs: number, distanceM: number): number {
  const lightM = (dtNs * C_M_S) / 1e9;
  return (lightM - distanceM) * (lightM + distanceM);
}

/** Proper time between two timelike events, seconds, from their interval in m^2 (not negative). */
export const properTimeS = (timelikeM2: number): number => Math.sqrt(timelikeM2) / C_M_S;

/** Proper distance of two spacelike events, metres, from their interval in m^2 (not positive). */
export const properDistanceM = (spacelikeM2: number): number => Math.sqrt(-spacelikeM2);
