/** A pair on the dial: the angle of its step from 'at the same time', light at 45 degrees, and what its error makes of it. */
export interface DialAngles {
  readonly deg: number;
  readonly fromDeg: number;
  readonly toDeg: number;
}

/**
 * The dial of a pair.
 *
 * @param dtNs time from the earlier to the later, >= 0
 * @param lightNs light-time between them, >= 0
 * @param halfNs half width of the wedge: so many standard errors of the gap as make a decision
 * @returns atan2(dt, light), 0 to 90 degrees; the wedge between the same with dt less and more by its half width, not beyond the dial
 */
export function dialAngles(dtNs: number, lightNs: number, halfNs: number): DialAngles {
  const deg = (dt: number): number => (Math.atan2(Math.max(0, dt), lightNs) * 180) / Math.PI;
  return { deg: deg(dtNs), fromDeg: deg(dtNs - halfNs), toDeg: deg(dtNs + halfNs) };
}
