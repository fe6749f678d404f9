import { emptyEvents, type EventColumns } from '../relativity/events';
import { type FourVelocity } from '../relativity/velocity';
import { type Instant, nanosecondsOf } from '../time/instant';
import { compareIdentities, type EventIdentity } from './event-identity';

/** A trigger as a live stream brings it: what a row of `EventColumns` holds, and its name. */
export interface LiveEvent extends EventIdentity {
  readonly taiS: number;
  readonly ps: number;
  readonly xM: number;
  readonly yM: number;
  readonly zM: number;
  /** Row of the site's delay and place in the error tables; the site's own row unless given. */
  readonly version?: number;
  readonly readingSigmaNs: number;
  readonly sigmaNs: number;
  readonly segment: number;
  readonly sinceEpochDays: number;
  readonly sinceEpochRestDays: number;
}

/** The columns, each with a field of its name in the event. */
const NUMBERS = [
  'taiS',
  'ps',
  'xM',
  'yM',
  'zM',
  'site',
  'readingSigmaNs',
  'sigmaNs',
  'segment',
  'sinceEpochDays',
  'sinceEpochRestDays',
] as const;

const FIRST_SLOTS = 256;

/** Columns that tell the versions of a site apart. */
export type VersionedColumns = EventColumns & { readonly version: Uint16Array };

/** Room for `capacity` events of sites with versions. */
export const emptyVersionedEvents = (capacity: number): VersionedColumns => ({
  ...emptyEvents(capacity),
  version: new Uint16Array(capacity),
});

const versionOf = ({ site, version = site }: LiveEvent): number => version;

/** Nanoseconds from an instant to an event, formed as the kernel does. */
export const sinceNs = (from: Instant, event: Instant): number => nanosecondsOf(event.taiS - from.taiS, event.ps - from.ps);

/**
 * Keeps the events of a live stream: columns by slot, in which an event stays where it is as long as it is held, and the slots in the
 * order of events. Slots are used again, so that room is bounded by what is held at one time.
 */
export class HeldEvents {
  /** By slot. */
  columns = emptyVersionedEvents(FIRST_SLOTS);
  /** By slot: the event's own reach. */
  reachNs = new Float64Array(FIRST_SLOTS);
  /** By slot: gamma and gamma-betas of the window's frame at 4 times the slot; empty where the window needs none. */
  windowVelocities: Float64Array;
  private identities: EventIdentity[] = [];
  private readonly free: number[] = [];
  private slots = 0;
  private order = new Int32Array(FIRST_SLOTS);
  private farthestNs = 0;
  private isFarthestGone = false;
  private begin = 0;
  private end = 0;

  constructor(private readonly windowVelocityAt: ((instant: Instant) => FourVelocity) | undefined) {
    this.windowVelocities = new Float64Array(windowVelocityAt ? 4 * FIRST_SLOTS : 0);
  }

  /** How many events are in order. */
  get count(): number {
    return this.end - this.begin;
  }

  /** Room that is taken, in events. */
  get capacity(): number {
    return Math.max(this.order.length, this.reachNs.length);
  }

  /** The slot at a position of the order. */
  slotAt(position: number): number {
    return this.order[this.begin + position] ?? -1;
  }

  identityOf(slot: number): EventIdentity {
    return this.identities[slot] ?? { site: 0, series: '', sequence: '' };
  }

  instantOf(slot: number): Instant {
    return { taiS: this.columns.taiS[slot] ?? 0, ps: this.columns.ps[slot] ?? 0 };
  }

  /** Nanoseconds from one slot's event to another's, formed as the kernel does. */
  apartNs(from: number, to: number): number {
    const { taiS, ps } = this.columns;
    return nanosecondsOf((taiS[to] ?? 0) - (taiS[from] ?? 0), (ps[to] ?? 0) - (ps[from] ?? 0));
  }

  /** The order of events; two slots of one identity and instant by their number. */
  compare(a: number, b: number): number {
    if (a === b) return 0;
    const { taiS, ps } = this.columns;
    const time = (taiS[a] ?? 0) - (taiS[b] ?? 0) || (ps[a] ?? 0) - (ps[b] ?? 0);
    return time !== 0 ? time : compareIdentities(this.identityOf(a), this.identityOf(b)) || a - b;
  }

  /** Writes an event into a free slot, outside the order as yet. */
  take(event: LiveEvent): number {
    const slot = this.free.pop() ?? this.slots++;
    if (slot >= this.reachNs.length) this.makeSlotRoom();
    const { site, series, sequence } = event;
    this.identities[slot] = { site, series, sequence };
    this.write(slot, event);
    return slot;
  }

  /** Other content for an event that is not in the order yet. */
  write(slot: number, event: LiveEvent): void {
    for (const name of NUMBERS) this.columns[name][slot] = event[name];
    this.columns.version[slot] = versionOf(event);
    if (!this.windowVelocityAt) return;
    const { gamma, gammaBeta } = this.windowVelocityAt(event);
    this.windowVelocities[4 * slot] = gamma;
    this.windowVelocities.set(gammaBeta, 4 * slot + 1);
  }

  holdsSame(slot: number, event: LiveEvent): boolean {
    return this.columns.version[slot] === versionOf(event) && NUMBERS.every((name) => this.columns[name][slot] === event[name]);
  }

  /** Frees a slot that is not in the order. */
  give(slot: number): void {
    this.free.push(slot);
  }

  /** The farthest reach of an event in the order, ns. */
  farthestReachNs(): number {
    if (!this.isFarthestGone) return this.farthestNs;
    this.isFarthestGone = false;
    this.farthestNs = 0;
    for (let k = this.begin; k < this.end; k++) this.farthestNs = Math.max(this.farthestNs, this.reachNs[this.order[k] ?? 0] ?? 0);
    return this.farthestNs;
  }

  /** Takes slots out of the order and puts others in; both lists in the order of events. Touches nothing before the first of them. */
  rearrange(leaving: readonly number[], arriving: readonly number[]): void {
    this.makeOrderRoom(this.count + arriving.length);
    const starts = [leaving[0], arriving[0]].flatMap((slot) => (slot === undefined ? [] : [this.positionOf(slot)]));
    let to = this.begin + Math.min(this.count, ...starts);
    let out = 0;
    let into = 0;
    for (const slot of this.order.slice(to, this.end)) {
      if (slot === leaving[out]) {
        out++;
        continue;
      }
      for (let next = arriving[into]; next !== undefined && this.compare(next, slot) < 0; next = arriving[++into]) this.order[to++] = next;
      this.order[to++] = slot;
    }
    for (; into < arriving.length; into++) this.order[to++] = arriving[into] ?? 0;
    this.end = to;
    for (const slot of arriving) this.farthestNs = Math.max(this.farthestNs, this.reachNs[slot] ?? 0);
    for (const slot of leaving) this.goes(slot);
  }

  /** The position of a slot in the order, or the one that it would have. */
  positionOf(slot: number): number {
    return this.partition((other) => this.compare(other, slot) < 0);
  }

  /** How many of the ordered events come before an instant, or at it when `including`. */
  countBefore(instant: Instant, including: 'at it too' | 'before it only'): number {
    const { taiS, ps } = this.columns;
    return this.partition((slot) => {
      const time = (taiS[slot] ?? 0) - instant.taiS || (ps[slot] ?? 0) - instant.ps;
      return time < 0 || (time === 0 && including === 'at it too');
    });
  }

  /** Releases the first `count` events of the order; each slot is told while it still holds its event. */
  releaseFirst(count: number, told: (slot: number) => void): void {
    for (let position = 0; position < count; position++) {
      const slot = this.slotAt(position);
      told(slot);
      this.goes(slot);
      this.give(slot);
    }
    this.begin += count;
  }

  private goes(slot: number): void {
    this.isFarthestGone ||= this.reachNs[slot] === this.farthestNs;
  }

  private makeOrderRoom(count: number): void {
    if (this.begin + count <= this.order.length) return;
    const order = 2 * count > this.order.length ? new Int32Array(2 * count) : this.order;
    order.set(this.order.subarray(this.begin, this.end));
    this.order = order;
    this.end -= this.begin;
    this.begin = 0;
  }

  private makeSlotRoom(): void {
    const capacity = 2 * this.reachNs.length;
    const larger = emptyVersionedEvents(capacity);
    for (const name of NUMBERS) larger[name].set(this.columns[name]);
    larger.version.set(this.columns.version);
    this.columns = larger;
    const reachNs = new Float64Array(capacity);
    reachNs.set(this.reachNs);
    this.reachNs = reachNs;
    if (!this.windowVelocityAt) return;
    const velocities = new Float64Array(4 * capacity);
    velocities.set(this.windowVelocities);
    this.windowVelocities = velocities;
  }

  /** How many events at the beginning of the order fulfil a condition that none after them does. */
  private partition(isBefore: (slot: number) => boolean): number {
    let low = 0;
    let high = this.count;
    while (low < high) {
      const middle = (low + high) >>> 1;
      if (isBefore(this.slotAt(middle))) low = middle + 1;
      else high = middle;
    }
    return low;
  }
}
