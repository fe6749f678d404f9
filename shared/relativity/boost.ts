import { C_M_S } from '../constants';
import { type FourVector, type Mat4 } from './four-vector';
import { add, dot, scale, subtract, type Vec3 } from './vector';
import { type FourVelocity } from './velocity';

/**
 * The rotation-free boost from a base frame to one that moves in it, as a matrix on the column (ct, x, y, z).
 *
 * @param velocity of the moving frame, measured in the base frame
 * @returns the matrix; (gamma - 1) / beta^2 is written gamma^2 / (gamma + 1), so that slow frames keep their digits
 * @remarks source: Jackson, Classical Electrodynamics, 3rd ed., eq. 11.98
 */
export function boostMatrix(velocity: FourVelocity): Mat4 {
  const { gamma, gammaBeta: g } = velocity;
  const k = 1 / (gamma + 1);
  return [
    [gamma, -g[0], -g[1], -g[2]],
    [-g[0], 1 + k * g[0] * g[0], k * g[0] * g[1], k * g[0] * g[2]],
    [-g[1], k * g[1] * g[0], 1 + k * g[1] * g[1], k * g[1] * g[2]],
    [-g[2], k * g[2] * g[0], k * g[2] * g[1], 1 + k * g[2] * g[2]],
  ];
}

/**
 * An event, or the step between two, in a frame reached by a rotation-free boost.
 *
 * @param velocity of the moving frame, measured in the base frame
 * @param event coordinates in the base frame, metres
 * @returns coordinates in the moving frame, metres; error below 1e-15 gamma times the largest coordinate
 * @remarks source: Jackson, Classical Electrodynamics, 3rd ed., eq. 11.19
 */
export function boostEvent(velocity: FourVelocity, event: FourVector): FourVector {
  const { gamma, gammaBeta } = velocity;
  const along = dot(gammaBeta, event.xM);
  return { ctM: gamma * event.ctM - along, xM: add(event.xM, scale(along / (gamma + 1) - event.ctM, gammaBeta)) };
}

/**
 * The time between two events in a moving frame; the axes of that frame do not matter to it.
 *
 * @param velocity of the moving frame, measured in the base frame
 * @param dtS time from the first event to the second in the base frame, seconds
 * @param dxM step from the first to the second in the base frame, metres
 * @returns the time between them in the moving frame, seconds; for |dt| up to 1,000 s and gamma below 10 good to 1 ps + 1e-12 relative
 * @remarks source: Einstein 1905, Ann. Phys. 17, 891, sect. 3
 */
export function timeDifferenceInFrame(velocity: FourVelocity, dtS: number, dxM: Vec3): number {
  return velocity.gamma * dtS - dot(velocity.gammaBeta, dxM) / C_M_S;
}

/**
 * The step between two events in a frame reached by a rotation-free boost.
 *
 * @param velocity of the moving frame, measured in the base frame
 * @param dtS time from the first event to the second in the base frame, seconds
 * @param dxM step from the first to the second in the base frame, metres
 * @returns the step in the moving frame, metres, in its axes
 */
export function separationInFrame(velocity: FourVelocity, dtS: number, dxM: Vec3): Vec3 {
  const along = dot(velocity.gammaBeta, dxM) / (velocity.gamma + 1);
  return subtract(dxM, scale(C_M_S * dtS - along, velocity.gammaBeta));
}
