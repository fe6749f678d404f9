import { type CoincidenceRule } from '../coincidence/rule';
import { type SeparationBounds } from '../coincidence/window-bounds';
import { type ErrorTables } from '../relativity/events';
import { type FrameResolver } from '../relativity/frame-resolver';
import { type Vec3 } from '../relativity/vector';
import { type Worldline } from '../relativity/worldline';
import { type PreparedSegment } from '../time/correction';
import { type Instant } from '../time/instant';
import { type Scale } from '../time/scales';

/** A site as its readings are reconciled: its scale, its clock less its delay, its place. */
export interface NetworkSite {
  readonly code: string;
  readonly name: string;
  readonly scale: Scale;
  readonly itrsM: Vec3;
  readonly worldline: Worldline;
  /** One standard error of a reading that states none; undefined where the resolution says it. */
  readonly readingSigmaNs: number | undefined;
  readonly clock: readonly PreparedSegment[];
  /** Row of the clock's first segment in the error tables; -1 for an exact clock. */
  readonly firstSegmentRow: number;
}

/** A set of events named by hand. */
export interface Selection {
  readonly code: string;
  readonly events: readonly string[];
}

/** A network made ready: everything that turns readings into events, and events into coincidences. Sites are sorted by code. */
export interface Network {
  readonly name: string;
  readonly runName: string;
  readonly from: Instant;
  readonly to: Instant | undefined;
  readonly origin: Instant;
  readonly sites: readonly NetworkSite[];
  readonly errors: ErrorTables;
  readonly frames: FrameResolver;
  readonly rule: CoincidenceRule;
  readonly separation: (a: Worldline, b: Worldline) => SeparationBounds;
  readonly neighboursWithinNs: number | undefined;
  readonly selections: readonly Selection[];
}
