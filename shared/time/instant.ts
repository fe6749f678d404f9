/** Picoseconds in one second. */
export const PS_PER_S = 1e12;

/**
 * A point on the time axis: whole TAI seconds since 1970-01-01T00:00:00 TAI, and picoseconds within that second.
 *
 * `taiS` is a whole number of any sign, `ps` a whole number in [0, 1e12). Both are exact; no instant ever passes through a
 * floating-point count of seconds.
 */
export interface Instant {
  readonly taiS: number;
  readonly ps: number;
}

/**
 * Makes an instant from whole seconds and whole picoseconds of any sign and size, carrying what exceeds a second.
 *
 * @param taiS whole TAI seconds since 1970-01-01T00:00:00 TAI
 * @param ps whole picoseconds, |ps| below 2^53
 */
export function instantOf(taiS: number, ps: number): Instant {
  const carryS = Math.floor(ps / PS_PER_S);
  return carryS === 0 ? { taiS, ps } : { taiS: taiS + carryS, ps: ps - carryS * PS_PER_S };
}

/** Negative when a is earlier than b, positive when later, 0 when they are the same instant. */
export function compareInstants(a: Instant, b: Instant): number {
  return a.taiS - b.taiS || a.ps - b.ps;
}

/**
 * Seconds from a to b, as a double: the difference is formed in whole numbers first, so up to 1,000 s it is good to 1 ps.
 */
export function secondsBetween(a: Instant, b: Instant): number {
  return b.taiS - a.taiS + (b.ps - a.ps) / PS_PER_S;
}

/** Picoseconds from a to b: exact up to 9,007 s, beyond that the nearest double. */
export function picosecondsBetween(a: Instant, b: Instant): number {
  return (b.taiS - a.taiS) * PS_PER_S + (b.ps - a.ps);
}

/**
 * Nanoseconds in a difference of two instants, formed as whole picoseconds (exact up to 9,007 s) and rounded once: a limit of whole
 * picoseconds is met at that picosecond, on one side of a second as on the other.
 *
 * @param apartS difference of the whole seconds
 * @param apartPs difference of the picoseconds within the second, of any sign
 */
export const nanosecondsOf = (apartS: number, apartPs: number): number => (apartS * PS_PER_S + apartPs) / 1e3;

/** The instant a whole number of picoseconds (of any sign, below 2^53) after another. */
export function addPicoseconds(a: Instant, ps: number): Instant {
  return instantOf(a.taiS, a.ps + ps);
}
