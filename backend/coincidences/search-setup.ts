import { NS_PER_LIGHT_M } from '#shared/constants';
import { windowBounds, type WindowBounds } from '#shared/coincidence/window-bounds';
import { GEOCENTRIC_CODE } from '#shared/relativity/frame-definition';
import { type FourVelocity } from '#shared/relativity/velocity';
import { instantOf, type Instant } from '#shared/time/instant';
import { type StoredEvent } from '../reconcile/stored-event';
import { type ActiveRule } from './active-rule';
import { type LogGround } from './stored-log';

/** A rule made ready for the sites of its network. */
export interface SearchSetup {
  readonly active: ActiveRule;
  readonly ground: LogGround;
  readonly bounds: WindowBounds;
  /** Widest window without errors, ns. */
  readonly geometryNs: number;
  /** The window's frame at an event; undefined where the window needs none. */
  readonly windowVelocityAt: ((instant: Instant) => FourVelocity) | undefined;
}

/** No error reaches farther than three centuries, so that instants stay whole numbers. */
const MOST_REACH_NS = 1e19;

/** The ends of what an instant can be. */
export const EVER: Instant = { taiS: Number.MIN_SAFE_INTEGER, ps: 0 };
export const NEVER: Instant = { taiS: Number.MAX_SAFE_INTEGER, ps: 0 };

export function searchSetup(active: ActiveRule, ground: LogGround): SearchSetup {
  const { window } = active.rule;
  const bounds = windowBounds(window, ground.worldlines, ground.separation);
  const frame = window.kind === 'fixed' && window.frame !== GEOCENTRIC_CODE ? window.frame : undefined;
  return {
    active,
    ground,
    bounds,
    geometryNs: bounds.possibleNs.reduce((most, boundNs) => Math.max(most, boundNs), 0),
    windowVelocityAt: frame === undefined ? undefined : (instant) => ground.velocityAt(frame, instant),
  };
}

/** How far, in time, one standard error of an event's time and one of its place carry together, ns. */
export const sigmaReachNs = ({ errors }: LogGround, event: StoredEvent): number =>
  event.sigmaNs + (errors.sitePositionSigmaM[event.version] ?? 0) * NS_PER_LIGHT_M;

/** The farthest, in time, at which an event's own errors may make it near another under a rule, ns; see `eventReachNs`. */
export function reachNs({ active }: SearchSetup, carriesNs: number): number {
  const { window, sigmas } = active.rule;
  return window.kind === 'light-time' ? Math.min(sigmas * carriesNs, MOST_REACH_NS) : 0;
}

/** No two events whose reaches together are so long are near when farther apart than this, ns. */
export const widestNs = ({ geometryNs, bounds }: SearchSetup, reachesNs: number): number => geometryNs + reachesNs * bounds.reachFactor;

/** An instant moved by nanoseconds of either sign, rounded away from it, and held within what an instant can be. */
export function movedBy(instant: Instant, ns: number): Instant {
  const wholeS = Math.floor(ns / 1e9);
  const restPs = (ns - wholeS * 1e9) * 1e3;
  const { taiS, ps } = instantOf(instant.taiS + wholeS, instant.ps + (ns < 0 ? Math.floor(restPs) : Math.ceil(restPs)));
  if (taiS <= EVER.taiS) return EVER;
  return taiS >= NEVER.taiS ? NEVER : { taiS, ps };
}
