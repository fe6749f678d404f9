import { add, cross, dot, norm, opposite, scale, subtract, unitOf, type Vec3 } from './vector';
import { type FourVelocity, fourVelocity } from './velocity';

/**
 * A boost followed by a rotation, as a 2 by 2 complex matrix of determinant 1 written over the Pauli matrices s:
 * scalar + i scalarI + (boost + i turn) . s. It takes (ct, x) to A (ct + x . s) A^+.
 *
 * Its entries grow as the square root of gamma, so that a chain out to gamma 1e6 and back loses six digits where 4 by 4 matrices lose
 * twelve. Source: Misner, Thorne & Wheeler, Gravitation, sect. 41.3.
 */
export interface Spinor {
  readonly scalar: number;
  readonly scalarI: number;
  readonly boost: Vec3;
  readonly turn: Vec3;
}

/** The spinor that changes nothing. */
export const IDENTITY: Spinor = { scalar: 1, scalarI: 0, boost: [0, 0, 0], turn: [0, 0, 0] };

/** The rotation-free boost to a frame that moves at a velocity: cosh(w/2) - sinh(w/2) n . s with w the rapidity and n its direction. */
export function boostSpinor(velocity: FourVelocity): Spinor {
  const scalar = Math.sqrt((velocity.gamma + 1) / 2);
  return { scalar, scalarI: 0, boost: scale(-0.5 / scalar, velocity.gammaBeta), turn: [0, 0, 0] };
}

/** The product a b: first b, then a. */
export function product(a: Spinor, b: Spinor): Spinor {
  const boostCross = subtract(scale(b.scalar, a.boost), scale(b.scalarI, a.turn));
  const turnCross = add(scale(b.scalar, a.turn), scale(b.scalarI, a.boost));
  return {
    scalar: a.scalar * b.scalar - a.scalarI * b.scalarI + dot(a.boost, b.boost) - dot(a.turn, b.turn),
    scalarI: a.scalar * b.scalarI + a.scalarI * b.scalar + dot(a.boost, b.turn) + dot(a.turn, b.boost),
    boost: subtract(
      add(subtract(scale(a.scalar, b.boost), scale(a.scalarI, b.turn)), boostCross),
      add(cross(a.boost, b.turn), cross(a.turn, b.boost)),
    ),
    turn: add(
      add(add(scale(a.scalar, b.turn), scale(a.scalarI, b.boost)), turnCross),
      subtract(cross(a.boost, b.boost), cross(a.turn, b.turn)),
    ),
  };
}

/** The spinor that undoes another. */
export function inverse(a: Spinor): Spinor {
  return { scalar: a.scalar, scalarI: a.scalarI, boost: opposite(a.boost), turn: opposite(a.turn) };
}

/** The velocity, in the base frame and its axes, of the frame that a spinor leads to: the column (1, 0, 0, 0) taken back. */
export function velocityOf(a: Spinor): FourVelocity {
  return fourVelocity(scale(2, subtract(cross(a.boost, a.turn), add(scale(a.scalar, a.boost), scale(a.scalarI, a.turn)))));
}

/** A turn of axes: right-handed by an angle in [0, pi] about a unit vector (z where the angle is 0). */
export interface Rotation {
  readonly angleRad: number;
  readonly axis: Vec3;
}

/**
 * The rotation in a spinor: how the axes of the frame that it leads to are turned against those of the direct rotation-free boost.
 *
 * @returns the turn of the axes; its axis has the same components in both sets of axes
 * @remarks the hermitian part that A and the inverse of A^+ share is the boost's, so that A + (A^+)^-1 is the rotation times a number
 */
export function rotationOf(a: Spinor): Rotation {
  const sine = norm(a.turn);
  if (sine === 0) return { angleRad: 0, axis: [0, 0, 1] };
  return { angleRad: 2 * Math.atan2(sine, Math.abs(a.scalar)), axis: unitOf(a.scalar < 0 ? opposite(a.turn) : a.turn) };
}
