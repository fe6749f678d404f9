import { add, dot, norm, scale, type Vec3 } from './vector';
import { type FourVelocity } from './velocity';

/**
 * Received over emitted frequency when the receiver moves and the source rests in the base frame.
 *
 * @param velocity of the receiver, measured in the base frame
 * @param toSource unit vector to the source, base frame
 * @returns gamma (1 + beta cos theta), above 1 when they approach; 1e-15 relative, from straight behind 1e-15 gamma^2 at worst, which is
 * the direction's own rounding
 * @remarks source: Einstein 1905, Ann. Phys. 17, 891, sect. 7
 */
export function dopplerOfMovingReceiver(velocity: FourVelocity, toSource: Vec3): number {
  const size = norm(velocity.gammaBeta);
  if (size === 0) return 1;
  const sum = add(toSource, scale(1 / size, velocity.gammaBeta));
  return 1 / (velocity.gamma + size) + (size * dot(sum, sum)) / 2;
}

/**
 * Received over emitted frequency when the source moves and the receiver rests in the base frame.
 *
 * @param velocity of the source, measured in the receiver's frame (only its size counts)
 * @param angleRad at emission, in the receiver's frame: from the source's velocity to the line of sight from source to receiver, [0, pi]
 * @returns 1 / (gamma (1 - beta cos alpha)), above 1 when they approach; 1e-15 relative also straight ahead
 * @remarks source: Jackson, Classical Electrodynamics, 3rd ed., eq. 11.30; 1 - cos alpha is taken from the half-angle
 */
export function dopplerOfMovingSource(velocity: FourVelocity, angleRad: number): number {
  const size = norm(velocity.gammaBeta);
  return 1 / (1 / (velocity.gamma + size) + 2 * size * Math.sin(angleRad / 2) ** 2);
}

/**
 * How quantities of light scale between source and receiver, as powers of the Doppler ratio D (received over emitted frequency), for a
 * source that radiates equally in all directions in its rest frame. Each says for which quantity it is:
 * - photonEnergy: energy of one photon; photonRate: photons received per second of the receiver, of those sent into one solid angle of the source
 * - solidAngle: of a bundle of rays
 * - photonsPerSolidAngle: photons emitted, per solid angle of the receiver's frame (a count, no rate)
 * - photonRatePerSolidAngle: photons received per second and solid angle; energyFluxPerSolidAngle: energy received per second and solid angle
 *
 * Source: Rybicki & Lightman, Radiative Processes in Astrophysics, sect. 4.8 and 4.9.
 */
export const BEAMING_EXPONENT = {
  photonEnergy: 1,
  photonRate: 1,
  solidAngle: -2,
  photonsPerSolidAngle: 2,
  photonRatePerSolidAngle: 3,
  energyFluxPerSolidAngle: 4,
} as const;

/**
 * The share of a moving source's photons, by number, that leave within a cone about its velocity; it radiates equally in its rest frame.
 *
 * @param velocity of the source, measured in the receiver's frame (only its size counts)
 * @param halfAngleRad of the cone, in the receiver's frame, [0, pi]
 * @returns the share, [0, 1], 1e-15 relative: half of them lie within sin = 1 / gamma
 * @remarks source: Rindler, Relativity: Special, General, and Cosmological, sect. 4.3 (headlight effect)
 */
export function photonShareWithin(velocity: FourVelocity, halfAngleRad: number): number {
  const stretch = velocity.gamma + norm(velocity.gammaBeta);
  const sine = stretch * Math.sin(halfAngleRad / 2);
  return 1 / (1 + (Math.cos(halfAngleRad / 2) / sine) ** 2);
}

/**
 * The share of a moving source's emitted energy, as counted in the receiver's frame, that leaves within a cone about its velocity.
 *
 * @param velocity of the source, measured in the receiver's frame (only its size counts)
 * @param halfAngleRad of the cone, in the receiver's frame, [0, pi]
 * @returns the share, [0, 1]: the integral of gamma (1 + beta cos t) over the photons within, t their angle in the rest frame; with q the
 * share of photons it is q (1 + beta (1 - q))
 * @remarks source: Rindler, Relativity: Special, General, and Cosmological, sect. 4.3, weighted with the photons' energy
 */
export function energyShareWithin(velocity: FourVelocity, halfAngleRad: number): number {
  const share = photonShareWithin(velocity, halfAngleRad);
  return share * (1 + (norm(velocity.gammaBeta) / velocity.gamma) * (1 - share));
}
