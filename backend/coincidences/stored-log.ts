import { type SeparationBounds } from '#shared/coincidence/window-bounds';
import { type ErrorTables } from '#shared/relativity/events';
import { type FourVelocity } from '#shared/relativity/velocity';
import { type Worldline } from '#shared/relativity/worldline';
import { type Instant } from '#shared/time/instant';
import { type StoredEvent } from '../reconcile/stored-event';

/** What the events of a network refer to, as it is in force. Rows of sites are in the order of their codes. */
export interface LogGround {
  readonly siteCodes: readonly string[];
  /** By row of the site. */
  readonly worldlines: readonly Worldline[];
  /** As large as the events that were read so far need. */
  readonly errors: ErrorTables;
  readonly separation: (a: Worldline, b: Worldline) => SeparationBounds;
  /** The geocentric velocity of a frame as taken at an event. */
  readonly velocityAt: (frame: string, instant: Instant) => FourVelocity;
}

/** The stored triggers of a network, as the last commit left them: kind `trigger`, since others take part in nothing. */
export interface StoredLog {
  readonly ground: LogGround;
  /** Those from one instant to another, both included, in any order. */
  between(from: Instant, to: Instant): readonly StoredEvent[];
}

/** The place in time of a row of events, and how far its own time error carries. */
export interface Place extends Instant {
  readonly sigmaNs: number;
}
