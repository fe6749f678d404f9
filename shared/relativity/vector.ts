/** Three Cartesian components; the unit and the frame are named by what carries them. */
export type Vec3 = readonly [number, number, number];

/** Three rows of three; `m[row][column]`. */
export type Mat3 = readonly [Vec3, Vec3, Vec3];

export const dot = (a: Vec3, b: Vec3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
export const norm = (a: Vec3): number => Math.sqrt(dot(a, a));
export const scale = (k: number, a: Vec3): Vec3 => [k * a[0], k * a[1], k * a[2]];
export const add = (a: Vec3, b: Vec3): Vec3 => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
export const subtract = (a: Vec3, b: Vec3): Vec3 => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
export const cross = (a: Vec3, b: Vec3): Vec3 => [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
export const apply = (m: Mat3, a: Vec3): Vec3 => [dot(m[0], a), dot(m[1], a), dot(m[2], a)];
export const opposite = (a: Vec3): Vec3 => [-a[0], -a[1], -a[2]];

/** A vector of length 1 along another, which must not be zero. */
export const unitOf = (a: Vec3): Vec3 => {
  const length = norm(a);
  return [a[0] / length, a[1] / length, a[2] / length];
};
