import { C_M_S } from '../constants';
import { type Worldline } from '../relativity/worldline';
import { type CoincidenceWindow } from './rule';

/** How far apart two sites can be at one instant, metres. */
export interface SeparationBounds {
  readonly leastM: number;
  readonly mostM: number;
}

/**
 * For each ordered pair of sites, the time differences at which the geometry alone decides, before any timing error.
 *
 * Rows and columns are sites: `[a * siteCount + b]`. A pair of one site has -1 in both: two triggers of a site are never near.
 */
export interface WindowBounds {
  readonly siteCount: number;
  /** |dt| up to this is near whatever the errors, ns; -1 where nothing is certain. */
  readonly certainNs: Float64Array;
  /** |dt| beyond this, plus both events' reaches times `reachFactor`, is not near, ns. */
  readonly possibleNs: Float64Array;
  /** How much the sites' motion may stretch a reach; 1 or a little more. */
  readonly reachFactor: number;
}

/** Widens a bound beyond what rounding can have done to it. */
const SLACK_NS = 1e-3;
const SLACK_RELATIVE = 1e-9;

const wider = (boundNs: number): number => boundNs * (1 + SLACK_RELATIVE) + SLACK_NS;
const narrower = (boundNs: number): number => boundNs * (1 - SLACK_RELATIVE) - SLACK_NS;

/**
 * Bounds of a light-time window between two sites. Between the two triggers the slower site moves by at most v |dt|, which widens or
 * narrows the separation of one instant; the sum of the radii bounds it always.
 */
function lightTimeBoundsNs(window: { speedC: number; marginNs: number }, a: Worldline, b: Worldline, apart: SeparationBounds) {
  const signalMS = window.speedC * C_M_S;
  const moving = Math.min(a.mostSpeedMS, b.mostSpeedMS) / signalMS;
  const stretch = moving < 0.5 ? 1 / (1 - moving) : 1;
  const byRadii = ((a.mostRadiusM + b.mostRadiusM) / signalMS) * 1e9 + window.marginNs;
  const most = (apart.mostM / signalMS) * 1e9 + window.marginNs;
  const least = (apart.leastM / signalMS) * 1e9 + window.marginNs;
  return {
    certainNs: narrower(least / (1 + moving)),
    possibleNs: wider(moving < 0.5 ? Math.min(most * stretch, byRadii) : byRadii),
    stretch,
  };
}

/**
 * The bounds of a window for all pairs of sites.
 *
 * @param window the rule's window
 * @param worldlines one a site, in the order of the sites' rows
 * @param separation bounds of two sites' distance at one instant
 */
export function windowBounds(
  window: CoincidenceWindow,
  worldlines: readonly Worldline[],
  separation: (a: Worldline, b: Worldline) => SeparationBounds,
): WindowBounds {
  const siteCount = worldlines.length;
  const certainNs = new Float64Array(siteCount * siteCount).fill(-1);
  const possibleNs = new Float64Array(siteCount * siteCount).fill(-1);
  let reachFactor = 1;
  worldlines.forEach((lineA, a) => {
    worldlines.forEach((lineB, b) => {
      if (a === b) return;
      const at = a * siteCount + b;
      if (window.kind === 'light-time') {
        const bounds = lightTimeBoundsNs(window, lineA, lineB, separation(lineA, lineB));
        certainNs[at] = bounds.certainNs;
        possibleNs[at] = bounds.possibleNs;
        reachFactor = Math.max(reachFactor, bounds.stretch);
      } else if (window.frame === 'geocentric') {
        possibleNs[at] = wider(window.widthNs);
      } else {
        // |dt| <= width / gamma + beta distance / c, whatever the frame.
        possibleNs[at] = wider(window.widthNs + ((lineA.mostRadiusM + lineB.mostRadiusM) / C_M_S) * 1e9);
      }
    });
  });
  return { siteCount, certainNs, possibleNs, reachFactor: wider(reachFactor) };
}
