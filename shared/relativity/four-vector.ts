import { type Vec3 } from './vector';

/** Coordinates of an event, or of the step from one event to another, in some frame: ct and place, both in metres. */
export interface FourVector {
  readonly ctM: number;
  readonly xM: Vec3;
}

/** Four numbers in the order ct, x, y, z. */
export type Vec4 = readonly [number, number, number, number];

/** Four rows of four, `m[row][column]`, in the order ct, x, y, z. */
export type Mat4 = readonly [Vec4, Vec4, Vec4, Vec4];

/** The matrix applied to the column (ct, x, y, z). */
export function transform(m: Mat4, event: FourVector): FourVector {
  const row = (r: Vec4): number => r[0] * event.ctM + r[1] * event.xM[0] + r[2] * event.xM[1] + r[3] * event.xM[2];
  return { ctM: row(m[0]), xM: [row(m[1]), row(m[2]), row(m[3])] };
}

/** The matrix product a b: first b, then a. */
export function multiply(a: Mat4, b: Mat4): Mat4 {
  const cell = (r: Vec4, k: 0 | 1 | 2 | 3): number => r[0] * b[0][k] + r[1] * b[1][k] + r[2] * b[2][k] + r[3] * b[3][k];
  const row = (r: Vec4): Vec4 => [cell(r, 0), cell(r, 1), cell(r, 2), cell(r, 3)];
  return [row(a[0]), row(a[1]), row(a[2]), row(a[3])];
}
