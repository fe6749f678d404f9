import { C_M_S } from '../constants';
import { norm, scale, type Vec3 } from './vector';
import { type FourVelocity } from './velocity';

/**
 * The slowest frame in which two events are simultaneous: faster along the same direction their order is reversed, and no slower frame of
 * any direction reverses it.
 *
 * @param dtS time from the first event to the second, seconds, of either sign
 * @param dxM step from the first to the second, metres, in the same frame
 * @returns velocity beta = c dt dx / |dx|^2 of that frame (against dx when dt is negative), 1e-15 relative but for the rounding of c dt
 * against |dx|; nothing for events on or inside the light cone, whose order is the same in all frames
 * @remarks source: beta . dx = c dt, from Einstein 1905, Ann. Phys. 17, 891, sect. 3
 */
export function turningVelocity(dtS: number, dxM: Vec3): FourVelocity | undefined {
  const ctM = C_M_S * dtS;
  const distanceM = norm(dxM);
  if (!(Math.abs(ctM) < distanceM)) return undefined;
  const root = Math.sqrt((distanceM - ctM) * (distanceM + ctM));
  return { gamma: distanceM / root, gammaBeta: scale(ctM / root / distanceM, dxM) };
}
