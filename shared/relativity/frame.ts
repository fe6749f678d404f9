import { boostMatrix } from './boost';
import { type Mat4, type Vec4 } from './four-vector';
import { boostSpinor, IDENTITY, product, type Rotation, rotationOf, type Spinor, velocityOf } from './spinor';
import { add, cross, scale, type Vec3 } from './vector';
import { type FourVelocity, oppositeVelocity } from './velocity';

/** An inertial frame as reached from the geocentric frame by a chain of rotation-free boosts. */
export interface InertialFrame {
  /** Velocity of the frame measured in the geocentric frame, GCRS axes. */
  readonly velocity: FourVelocity;
  /** From geocentric (ct, x, y, z) to the frame's own, metres: the direct boost, then the turn of the axes. */
  readonly lorentz: Mat4;
  /** How the frame's axes are turned against those that the direct boost from the geocentric frame would give. */
  readonly wigner: Rotation;
  /** The whole chain, for going on from here. */
  readonly spinor: Spinor;
}

/** The geocentric inertial frame itself (GCRS axes). */
export const GEOCENTRIC: InertialFrame = frameFromSpinor(IDENTITY);

/**
 * A frame that moves in another: its axes are its parent's, carried over by a rotation-free boost.
 *
 * @param parent the frame in which the velocity is measured
 * @param velocity of the new frame, in the parent's axes
 * @returns the new frame; velocity, Wigner angle and matrix to 1e-12 relative below gamma 10, gamma and rapidity to 1e-9 up to gamma 1e6
 * @remarks source: Wigner 1939, Ann. Math. 40, 149; Ungar 1988, Found. Phys. Lett. 1, 57
 */
export function compose(parent: InertialFrame, velocity: FourVelocity): InertialFrame {
  return frameFromSpinor(product(boostSpinor(velocity), parent.spinor));
}

/** The frame to which a spinor leads from the geocentric frame. */
export function frameFromSpinor(spinor: Spinor): InertialFrame {
  const velocity = velocityOf(spinor);
  const wigner = rotationOf(spinor);
  return { velocity, wigner, spinor, lorentz: turnRows(wigner, boostMatrix(velocity)) };
}

/**
 * The velocity of a frame C in A's axes, from that of B in A's axes and of C in B's axes (B's are A's, carried over by a rotation-free boost).
 *
 * @param first velocity of B measured in A
 * @param second velocity of C measured in B
 * @returns velocity of C measured in A: not the same when first and second change places, though its size is
 */
export function addVelocities(first: FourVelocity, second: FourVelocity): FourVelocity {
  return velocityOf(product(boostSpinor(second), boostSpinor(first)));
}

/**
 * A velocity as measured in another frame.
 *
 * @param frameVelocity of the frame that measures, in the base frame
 * @param velocity that is measured, in the base frame
 * @returns the same velocity in the axes of the frame that measures (rotation-free boost of the base's)
 */
export function velocityInFrame(frameVelocity: FourVelocity, velocity: FourVelocity): FourVelocity {
  return addVelocities(oppositeVelocity(frameVelocity), velocity);
}

/** Components of a vector in axes that are turned: the vector turned the other way (Rodrigues), with sines of half the angle. */
export function inTurnedAxes(rotation: Rotation, a: Vec3): Vec3 {
  const half = rotation.angleRad / 2;
  const q = scale(-Math.sin(half), rotation.axis);
  const qa = cross(q, a);
  return add(a, scale(2, add(scale(Math.cos(half), qa), cross(q, qa))));
}

/** The spatial rows of a matrix, taken to turned axes. */
function turnRows(rotation: Rotation, m: Mat4): Mat4 {
  if (rotation.angleRad === 0) return m;
  const column = (k: 0 | 1 | 2 | 3): Vec3 => inTurnedAxes(rotation, [m[1][k], m[2][k], m[3][k]]);
  const [a, b, c, d] = [column(0), column(1), column(2), column(3)];
  const row = (i: 0 | 1 | 2): Vec4 => [a[i], b[i], c[i], d[i]];
  return [m[0], row(0), row(1), row(2)];
}
