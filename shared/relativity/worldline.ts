import { type Instant } from '../time/instant';
import { type Vec3 } from './vector';

/**
 * The path of a site or a platform: the one question that the rest of the core asks about places.
 *
 * Bounds are for the finder, which must know how far a site can have moved between two triggers without asking for each.
 */
export interface Worldline {
  /** Position in the geocentric inertial frame (GCRS axes), metres. */
  placeAt(instant: Instant): Vec3;
  /** No speed along the path exceeds this, metres per second in the geocentric inertial frame. */
  readonly mostSpeedMS: number;
  /** No distance from the geocentre along the path exceeds this, metres. */
  readonly mostRadiusM: number;
}
