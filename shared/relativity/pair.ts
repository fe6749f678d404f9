import { PS_PER_S } from '../time/instant';
import { type ErrorTables, type EventColumns } from './events';
import { differenceVarianceNs2, distanceVarianceM2 } from './time-error';
import { norm, type Vec3 } from './vector';

/** Two events of the geocentric frame, a the earlier, and how sure their difference is. */
export interface Pair {
  /** Time from a to b in whole picoseconds; exact up to 9,007 s. */
  readonly dtPs: number;
  /** The same in nanoseconds, rounded once. */
  readonly dtNs: number;
  /** From a's place to b's, metres, GCRS axes. */
  readonly dxM: Vec3;
  readonly distanceM: number;
  /** Sum of the two events' distances from the geocentre, metres: the scale of the places' rounding. */
  readonly radiiM: number;
  /** Standard error of the time difference. */
  readonly sigmaDtNs: number;
  /** Standard error of the distance. */
  readonly sigmaDM: number;
}

const place = (e: EventColumns, i: number): Vec3 => [e.xM[i] ?? 0, e.yM[i] ?? 0, e.zM[i] ?? 0];

/**
 * Forms the pair of two events.
 *
 * @param e the events, geocentric inertial frame
 * @param t what their errors refer to
 * @param a the row of the earlier event
 * @param b the row of the later one (or one at the same instant)
 * @returns differences from a to b; whole picoseconds are subtracted before anything becomes a fraction
 */
export function pairOf(e: EventColumns, t: ErrorTables, a: number, b: number): Pair {
  const apartS = (e.taiS[b] ?? 0) - (e.taiS[a] ?? 0);
  const apartPs = (e.ps[b] ?? 0) - (e.ps[a] ?? 0);
  const placeA = place(e, a);
  const placeB = place(e, b);
  const dxM: Vec3 = [placeB[0] - placeA[0], placeB[1] - placeA[1], placeB[2] - placeA[2]];
  const dtPs = apartS * PS_PER_S + apartPs;
  return {
    dtPs,
    dtNs: Number.isSafeInteger(dtPs) ? dtPs / 1e3 : apartS * 1e9 + apartPs / 1e3,
    dxM,
    distanceM: norm(dxM),
    radiiM: norm(placeA) + norm(placeB),
    sigmaDtNs: Math.sqrt(differenceVarianceNs2(e, t, a, b)),
    sigmaDM: Math.sqrt(distanceVarianceM2(e, t, a, b)),
  };
}
