import { add, dot, norm, scale, subtract, unitOf, type Vec3 } from './vector';
import { type FourVelocity } from './velocity';

/**
 * The direction to a source of light as measured in a moving frame.
 *
 * @param toSource unit vector to the source, base frame
 * @param velocity of the moving frame, measured in the base frame
 * @returns unit vector to the source in the axes of a rotation-free boost: it leans toward the velocity; 1e-15 times gamma at worst
 * (light that overtakes the frame from straight behind), 1e-15 elsewhere
 * @remarks cos t' = (cos t + beta) / (1 + beta cos t), with 1 + cos t from the sum of the unit vectors so that nothing cancels from behind.
 * Source: Einstein 1905, Ann. Phys. 17, 891, sect. 7
 */
export function aberrate(toSource: Vec3, velocity: FourVelocity): Vec3 {
  const size = norm(velocity.gammaBeta);
  if (size === 0) return toSource;
  const ahead = scale(1 / size, velocity.gammaBeta);
  const sum = add(toSource, ahead);
  const fromBehind = dot(sum, sum) / 2;
  const least = 1 / (velocity.gamma + size);
  const across = subtract(toSource, scale(dot(toSource, ahead), ahead));
  return unitOf(add(across, scale(velocity.gamma * fromBehind - least, ahead)));
}

/**
 * The angle between a source of light and a frame's velocity, as measured in that frame.
 *
 * @param angleRad in the base frame, in [0, pi], from the frame's velocity to the direction to the source
 * @param velocity of the moving frame, measured in the base frame (only its size counts)
 * @returns the angle in the moving frame, in [0, pi], 1e-15 relative: tan(t'/2) = exp(-rapidity) tan(t/2)
 * @remarks source: Einstein 1905, Ann. Phys. 17, 891, sect. 7, in the half-angle form of Penrose & Terrell 1959
 */
export function aberratedAngleRad(angleRad: number, velocity: FourVelocity): number {
  const shrink = 1 / (velocity.gamma + norm(velocity.gammaBeta));
  return 2 * Math.atan2(shrink * Math.sin(angleRad / 2), Math.cos(angleRad / 2));
}

/** The inverse of `aberratedAngleRad`: the angle in the base frame of a source seen at an angle in the moving one, both in [0, pi]. */
export function unaberratedAngleRad(angleRad: number, velocity: FourVelocity): number {
  const stretch = velocity.gamma + norm(velocity.gammaBeta);
  return 2 * Math.atan2(stretch * Math.sin(angleRad / 2), Math.cos(angleRad / 2));
}
