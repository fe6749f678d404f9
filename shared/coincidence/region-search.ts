import { emptyEvents, type ErrorTables, type EventColumns } from '../relativity/events';
import { type HeldEvents } from './held-events';
import { coincidenceKernel } from './kernel';
import { type Outcome } from './outcome';
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
  /** Which of them are asked for, 0 or 1, by position less `from`. */
  readonly wanted: Uint8Array;
}

/** Copies a stretch of held events side by side, and finds by the batch kernel what begins with the wanted ones. */
export class RegionSearch {
  private scratch = emptyEvents(256);
  private velocities = new Float64Array(0);
  private packed = new Int32Array(256);

  constructor(
    private readonly held: HeldEvents,
    private readonly regionRule: RegionRule,
  ) {}

  /** Tells the outcome of each wanted event, in order; events are named by their slots. */
  run(region: Region, errors: ErrorTables, told: (slot: number, outcome: Outcome) => void): void {
    const { rule, bounds, limit } = this.regionRule;
    const events = this.gather(region);
    const windowVelocities = this.held.windowVelocities.length > 0 ? this.velocities : undefined;
    const kernel = coincidenceKernel({ events, errors, rule, bounds, windowVelocities });
    const setsOf = setsFrom(kernel, events, { minimumFold: rule.minimumFold, limit });
    const slotOf = (row: number): number => this.held.slotAt(region.from + row);
    let filled = 0;
    let crowd: Crowd | undefined;
    const outcome = (): Outcome => (crowd ? { crowd } : filled > 0 ? { sets: this.packed.slice(0, filled) } : undefined);
    const listener = {
      set: (rows: Int32Array, fold: number): void => {
        this.makePackedRoom(filled + fold + 1);
        this.packed[filled++] = fold;
        for (let k = 0; k < fold; k++) this.packed[filled++] = slotOf(rows[k] ?? 0);
      },
      crowd: (found: Crowd): void => {
        crowd = { ...found, event: slotOf(found.event) };
      },
    };
    for (let row = 0; row < events.count; row++) {
      if (region.wanted[row] !== 1) continue;
      filled = 0;
      crowd = undefined;
      setsOf(row, listener);
      told(slotOf(row), outcome());
    }
  }

  private gather({ from, to }: Region): EventColumns {
    const count = to - from;
    if (count > this.scratch.taiS.length) this.scratch = emptyEvents(2 * count);
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
      into.readingSigmaNs[row] = columns.readingSigmaNs[slot] ?? 0;
      into.sigmaNs[row] = columns.sigmaNs[slot] ?? 0;
      into.segment[row] = columns.segment[slot] ?? -1;
      into.sinceEpochDays[row] = columns.sinceEpochDays[slot] ?? 0;
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
