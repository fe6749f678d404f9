import { type Outcome, problemOf, valueOf } from '../outcome';
import { oneMinusSquare } from './one-minus-square';
import { type Speed } from './speed';
import { dot, norm, opposite, scale, type Vec3 } from './vector';

/**
 * The velocity of a frame as measured in another, its base, and in the base's axes.
 *
 * It is carried as gamma and gamma times beta, which keep their digits where a beta near 1 has none left (at gamma 1e6 a double beta is
 * wrong by 2e-4 of its distance from 1).
 */
export interface FourVelocity {
  readonly gamma: number;
  readonly gammaBeta: Vec3;
}

/** The velocity of a frame that rests in its base. */
export const AT_REST: FourVelocity = { gamma: 1, gammaBeta: [0, 0, 0] };

/** The largest double below 1: what a speed in c is rounded to at most, since no frame moves at c. */
const MOST_SPEED_C = 1 - Number.EPSILON / 2;

/**
 * The velocity whose spatial part is given.
 *
 * @param gammaBeta gamma times the velocity in c, in the base's axes; any finite vector is a velocity below c
 * @returns that velocity, gamma = sqrt(1 + |gamma beta|^2) to 2e-16 relative
 */
export function fourVelocity(gammaBeta: Vec3): FourVelocity {
  return { gamma: Math.sqrt(1 + dot(gammaBeta, gammaBeta)), gammaBeta };
}

/**
 * The velocity with three components in c.
 *
 * @param betaC velocity in c, in the base's axes, |beta| below 1
 * @param where path of the field that it comes from, for the problem
 * @returns the velocity; or the problem `frame-speed` for a component that is not finite or a speed of 1 or more
 * @remarks accurate to 1e-15 relative for the doubles given; the doubles themselves hold gamma to 1e-16 gamma^2
 */
export function velocityFromBeta(betaC: Vec3, where: string): Outcome<FourVelocity> {
  const rest = betaC.every((component) => Math.abs(component) < 1) ? oneMinusSquare(betaC) : Number.NaN;
  if (!(rest > 0)) {
    return problemOf('frame-speed', where, `a velocity of [${betaC.join(', ')}] c; three finite numbers with a speed below 1 are allowed`);
  }
  const gamma = 1 / Math.sqrt(rest);
  return valueOf({ gamma, gammaBeta: scale(gamma, betaC) });
}

/** The velocity of a given speed along a unit vector (base's axes); a negative speed moves against it. */
export function velocityToward(speed: Speed, unitVector: Vec3): FourVelocity {
  return { gamma: speed.gamma, gammaBeta: scale(speed.gammaBeta, unitVector) };
}

/** The velocity of the same size and opposite direction: the base's as measured in a frame reached by a rotation-free boost. */
export function oppositeVelocity(velocity: FourVelocity): FourVelocity {
  return { gamma: velocity.gamma, gammaBeta: opposite(velocity.gammaBeta) };
}

/** Speed in c, in [0, 1): never 1, since a speed nearer to 1 than a double can say is rounded down. */
export function speedC(velocity: FourVelocity): number {
  return Math.min(norm(velocity.gammaBeta) / velocity.gamma, MOST_SPEED_C);
}

/** Velocity in c, in the base's axes. */
export function betaC(velocity: FourVelocity): Vec3 {
  return scale(1 / velocity.gamma, velocity.gammaBeta);
}

/** 1 - beta, accurate to 1e-15 relative at any speed: 1 / (gamma^2 (1 + beta)), written without beta. */
export function shortOfLightC(velocity: FourVelocity): number {
  return 1 / (velocity.gamma * (velocity.gamma + norm(velocity.gammaBeta)));
}

/** Rapidity artanh(beta), >= 0, from gamma beta = sinh(rapidity): accurate to 1e-15 relative at any speed. */
export function rapidity(velocity: FourVelocity): number {
  return Math.asinh(norm(velocity.gammaBeta));
}

/** gamma - 1, accurate to 1e-15 relative at any speed: (gamma beta)^2 / (gamma + 1). */
export function gammaLessOne(velocity: FourVelocity): number {
  return dot(velocity.gammaBeta, velocity.gammaBeta) / (velocity.gamma + 1);
}
