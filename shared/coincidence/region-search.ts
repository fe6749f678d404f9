import { type ErrorTables, type EventColumns } from '../relativity/events';
import { emptyVersionedEvents, type HeldEvents } from './held-events';
import { coincidenceKernel, type CoincidenceKernel, RowList } from './kernel';
import { type Crowding, type Outcome } from './outcome';
import { type CoincidenceRule } from './rule';
import { type Crowd, setsFrom } from './sets-from';
import { type WindowBounds } from './window-bounds';

/** What the search of a region asks the kernel with. */
export interface RegionRule {
  readonly rule: CoincidenceRule;
  readonly bounds: WindowBounds;
  readonly limit: number;
}

/** A stretch of the order of held events that holds all neighbours of those asked for. */
export interface Region {
  /** Positions in the order, the last one excluded. */
  readonly from: number;
  readonly to: number;
  /** What is asked of each of them, by position less `from`. */
  readonly wanted: Uint8Array;
  /** Positions of the events that are new, ascending. */
  readonly arrived: readonly number[];
}

/** What a region asks of an event. */
export const NOTHING_ASKED = 0;
/**
 * A crowded event of which nothing changed but that events after it came: it stays crowded, and counts those that are near. Each of its sets
 * is still one, or grew by some of the new events, and no two grow into one; an earlier event that is near all of the grown set was near all
 * of the former.
 */
export const GROWTH_ASKED = 1;
/** What begins with it, found anew. */
export const ALL_ASKED = 2;

/** Copies a stretch of held events side by side, and finds by the batch kernel what begins with the wanted ones. */
export class RegionSearch {
  private scratch = emptyVersionedEvents(256);
  private velocities = new Float64Array(0);
  private packed = new Int32Array(256);
  private readonly later = new RowList();

  constructor(
    private readonly held: HeldEvents,
    private readonly regionRule: RegionRule,
  ) {}

  /**
   * Tells the outcome of each wanted event, in order; events are named by their slots.
   *
   * @param region where to search
   * @param errors the tables, which hold a row of each site and segment
   * @param before the outcomes as they were, by slot
   * @param told hears of each outcome
   */
  run(region: Region, errors: ErrorTables, before: readonly Outcome[], told: (slot: number, outcome: Outcome) => void): void {
    const { rule, bounds, limit } = this.regionRule;
    const events = this.gather(region);
    const windowVelocities = this.held.windowVelocities.length > 0 ? this.velocities : undefined;
    const kernel = coincidenceKernel({ events, errors, rule, bounds, windowVelocities });
    const setsOf = setsFrom(kernel, events, { minimumFold: rule.minimumFold, limit });
    const slotOf = (row: number): number => this.held.slotAt(region.from + row);
    let filled = 0;
    let crowding: Crowding | undefined;
    const outcome = (): Outcome => crowding ?? (filled > 0 ? { sets: this.packed.slice(0, filled) } : undefined);
    const listener = {
      set: (rows: Int32Array, fold: number): void => {
        this.makePackedRoom(filled + fold + 1);
        this.packed[filled++] = fold;
        for (let k = 0; k < fold; k++) this.packed[filled++] = slotOf(rows[k] ?? 0);
      },
      crowd: (found: Crowd): void => {
        crowding = { crowd: { ...found, event: slotOf(found.event) }, hasSite: this.sitesAround(kernel, events, found.event) };
      },
    };
    const arrived = region.arrived.map((position) => position - region.from);
    for (let row = 0; row < events.count; row++) {
      if (region.wanted[row] === NOTHING_ASKED) continue;
      const slot = slotOf(row);
      const known = before[slot];
      if (region.wanted[row] === GROWTH_ASKED && known && 'crowd' in known) {
        told(slot, grown(known, kernel, events, { row, arrived }));
        continue;
      }
      filled = 0;
      crowding = undefined;
      setsOf(row, listener);
      told(slot, outcome());
    }
  }

  private sitesAround(kernel: CoincidenceKernel, events: EventColumns, row: number): Uint8Array {
    const hasSite = new Uint8Array(kernel.siteCount);
    hasSite[events.site[row] ?? 0] = 1;
    const count = kernel.laterNear(row, this.later);
    for (let k = 0; k < count; k++) hasSite[events.site[this.later.rows[k] ?? 0] ?? 0] = 1;
    return hasSite;
  }

  private gather({ from, to }: Region): EventColumns {
    const count = to - from;
    if (count > this.scratch.taiS.length) this.scratch = emptyVersionedEvents(2 * count);
    const { columns, windowVelocities } = this.held;
    const into = this.scratch;
    for (let row = 0; row < count; row++) {
      const slot = this.held.slotAt(from + row);
      into.taiS[row] = columns.taiS[slot] ?? 0;
      into.ps[row] = columns.ps[slot] ?? 0;
      into.xM[row] = columns.xM[slot] ?? 0;
      into.yM[row] = columns.yM[slot] ?? 0;
      into.zM[row] = columns.zM[slot] ?? 0;
      into.site[row] = columns.site[slot] ?? 0;
      into.version[row] = columns.version[slot] ?? 0;
      into.readingSigmaNs[row] = columns.readingSigmaNs[slot] ?? 0;
      into.sigmaNs[row] = columns.sigmaNs[slot] ?? 0;
      into.segment[row] = columns.segment[slot] ?? -1;
      into.sinceEpochDays[row] = columns.sinceEpochDays[slot] ?? 0;
      into.sinceEpochRestDays[row] = columns.sinceEpochRestDays[slot] ?? 0;
    }
    if (windowVelocities.length > 0) {
      if (4 * count > this.velocities.length) this.velocities = new Float64Array(8 * count);
      for (let row = 0; row < count; row++) {
        const at = 4 * this.held.slotAt(from + row);
        this.velocities.set(windowVelocities.subarray(at, at + 4), 4 * row);
      }
    }
    return { ...into, count };
  }

  private makePackedRoom(length: number): void {
    if (length <= this.packed.length) return;
    const larger = new Int32Array(2 * length);
    larger.set(this.packed);
    this.packed = larger;
  }
}

/** A crowd with those of the new events that are near it and after it. */
function grown(
  { crowd, hasSite }: Crowding,
  kernel: CoincidenceKernel,
  events: EventColumns,
  { row, arrived }: { readonly row: number; readonly arrived: readonly number[] },
): Crowding {
  const sites = hasSite.slice();
  let more = 0;
  for (const other of arrived) {
    if (other <= row || !kernel.near(row, other)) continue;
    more++;
    sites[events.site[other] ?? 0] = 1;
  }
  return { crowd: { ...crowd, events: crowd.events + more, sites: sites.reduce((sum, has) => sum + has, 0) }, hasSite: sites };
}
