import { type SeparationBounds } from '#shared/coincidence/window-bounds';
import { type FixedSiteWorldline, separationBounds } from '#shared/earth/worldline';
import { type Vec3 } from '#shared/relativity/vector';
import { type Worldline } from '#shared/relativity/worldline';
import { compareInstants, type Instant } from '#shared/time/instant';

/** A stretch of a site's worldline: where it stands from an instant on. */
export interface Stretch {
  readonly from: Instant;
  readonly line: FixedSiteWorldline;
}

/** The worldline of a site that may have been moved, or surveyed anew. */
export interface SiteWorldline extends Worldline {
  readonly stretches: readonly Stretch[];
}

/**
 * Joins a site's places into one worldline.
 *
 * @param stretches sorted by the instant from which they hold; at least one, and the first holds before its beginning too
 * @returns places in GCRS axes, metres; bounds that hold for all stretches
 */
export function siteWorldline(stretches: readonly Stretch[]): SiteWorldline {
  const lineAt = (instant: Instant): FixedSiteWorldline | undefined =>
    (stretches.findLast(({ from }) => compareInstants(from, instant) <= 0) ?? stretches[0])?.line;
  return {
    stretches,
    mostSpeedMS: Math.max(...stretches.map(({ line }) => line.mostSpeedMS)),
    mostRadiusM: Math.max(...stretches.map(({ line }) => line.mostRadiusM)),
    placeAt: (instant): Vec3 => lineAt(instant)?.placeAt(instant) ?? [0, 0, 0],
  };
}

const linesOf = (line: Worldline): readonly Worldline[] =>
  'stretches' in line ? (line as SiteWorldline).stretches.map((stretch) => stretch.line) : [line];

/** Bounds of the distance of two sites at one instant, wherever each of them ever stood. */
export function separationOfSites(a: Worldline, b: Worldline): SeparationBounds {
  const bounds = linesOf(a).flatMap((lineA) => linesOf(b).map((lineB) => separationBounds(lineA, lineB)));
  return { leastM: Math.min(...bounds.map(({ leastM }) => leastM)), mostM: Math.max(...bounds.map(({ mostM }) => mostM)) };
}
