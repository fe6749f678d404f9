import { type HeldEvents } from './held-events';
import { ALL_ASKED, GROWTH_ASKED, type Region } from './region-search';
import { earlierBy, laterBy } from './settlement';
import { type WindowBounds } from './window-bounds';

/** Where changes act. */
export interface ChangeContext {
  readonly held: HeldEvents;
  readonly bounds: WindowBounds;
  /** Widest window without errors, ns. */
  readonly geometryNs: number;
  /** How many events at the beginning of the order are settled: those are never asked for. */
  readonly settled: number;
  /** Slots of the events that are new. */
  readonly arrived: ReadonlySet<number>;
  /** Was an event crowded before the changes? */
  readonly isCrowded: (slot: number) => boolean;
}

interface OpenRegion {
  readonly from: number;
  to: number;
  readonly changed: number[];
}

/**
 * Splits changes into regions: stretches of the order that hold everything that the changes can act on, and all its neighbours.
 *
 * An event acts on what begins with itself and with those that it may be near. Whether those are coincidences depends on their own
 * neighbours. So a region holds what is within two windows of a change, and asks for the events within one.
 *
 * @param changed slots in the order of events, gone ones among them
 * @returns regions one after the other, without a common event
 */
export function* regionsAround(changed: readonly number[], context: ChangeContext): Generator<Region> {
  const { held, geometryNs, bounds } = context;
  // One width for all, so that the stretches begin and end in the order of the changes; what is gone may have reached farther than what is held.
  const farthestNs = changed.reduce((most, slot) => Math.max(most, held.reachNs[slot] ?? 0), held.farthestReachNs());
  const twiceNs = 2 * (geometryNs + 2 * farthestNs * bounds.reachFactor);
  let open: OpenRegion | undefined;
  for (const slot of changed) {
    const instant = held.instantOf(slot);
    const from = held.countBefore(earlierBy(instant, twiceNs), 'before it only');
    const to = held.countBefore(laterBy(instant, twiceNs), 'at it too');
    if (open && from <= open.to) {
      open.to = Math.max(open.to, to);
      open.changed.push(slot);
      continue;
    }
    if (open) yield asked(open, context);
    open = { from, to, changed: [slot] };
  }
  if (open) yield asked(open, context);
}

function asked({ from, to, changed }: OpenRegion, context: ChangeContext): Region {
  const wanted = new Uint8Array(to - from);
  const arrived: number[] = [];
  for (const slot of changed) {
    mark(slot, { from, to, wanted }, context);
    if (context.arrived.has(slot)) arrived.push(context.held.positionOf(slot));
  }
  return { from, to, wanted, arrived };
}

/** Asks for every event that is not settled and whose window may hold the changed one. */
function mark(changed: number, region: Omit<Region, 'arrived'>, context: ChangeContext): void {
  const { held, bounds, geometryNs, settled } = context;
  const { possibleNs, siteCount, reachFactor } = bounds;
  const { site } = held.columns;
  const ownReachNs = held.reachNs[changed] ?? 0;
  const mostNs = geometryNs + (ownReachNs + held.farthestReachNs()) * reachFactor;
  const siteRow = (site[changed] ?? 0) * siteCount;
  const isNew = context.arrived.has(changed);
  const consider = (position: number, isBefore: boolean): boolean => {
    const slot = held.slotAt(position);
    const dtNs = Math.abs(held.apartNs(changed, slot));
    if (dtNs > mostNs) return false;
    const possible = possibleNs[siteRow + (site[slot] ?? 0)] ?? -1;
    const mayBeNear = possible >= 0 && dtNs <= possible + (ownReachNs + (held.reachNs[slot] ?? 0)) * reachFactor;
    if (!mayBeNear && slot !== changed) return true;
    const asked = isNew && isBefore && context.isCrowded(slot) ? GROWTH_ASKED : ALL_ASKED;
    region.wanted[position - region.from] = Math.max(asked, region.wanted[position - region.from] ?? 0);
    return true;
  };
  const here = held.countBefore(held.instantOf(changed), 'before it only');
  const first = Math.max(region.from, settled);
  for (let position = Math.max(here, first); position < region.to && consider(position, false); position++);
  for (let position = here - 1; position >= first && consider(position, true); position--);
}
