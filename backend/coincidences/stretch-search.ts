import { coincidenceSweep } from '#shared/coincidence/batch-finder';
import { compareInstants, type Instant } from '#shared/time/instant';
import { columnsOf, compareEvents } from '../reconcile/event-columns';
import { type StoredEvent } from '../reconcile/stored-event';
import { type ReachHistory } from './reach-history';
import { movedBy, reachNs, type SearchSetup, widestNs } from './search-setup';
import { type StoredLog } from './stored-log';
import { attendance, type Attendance } from './taking-part';

/** A piece of time, both ends included. */
export interface Stretch {
  readonly from: Instant;
  readonly to: Instant;
}

/** An event that is crowded; the numbers as in `Crowd`. */
export interface FoundCrowd {
  readonly sites: number;
  readonly events: number;
  readonly setsAtLeast: number;
}

/** What begins with the events of a stretch. */
export interface StretchFindings {
  /** The stretch that was searched: that which was asked for, or its later part where more was found than fits. */
  readonly searched: Stretch;
  /** The events that were searched, and those that come within a dead time. */
  readonly triggers: readonly number[];
  readonly sets: readonly (readonly StoredEvent[])[];
  /** By trigger. */
  readonly crowds: ReadonlyMap<number, FoundCrowd>;
}

/** A stretch that holds more sets than this is searched in parts, so that no transaction is long. */
const MOST_SETS = 4_000;

/** Searches stretches of the stored log by the batch finder. */
export class StretchSearch {
  constructor(
    private readonly log: StoredLog,
    private readonly reaches: ReachHistory,
  ) {}

  /**
   * How far from an event of a stretch another one may lie and still be near it, ns.
   *
   * @param carriesNs how far the errors of events carry that stood there and no longer do
   */
  windowAround(setup: SearchSetup, { from, to }: Stretch, carriesNs = 0): number {
    const withinNs = Math.max(carriesNs, this.reaches.within(from, to));
    const window = (otherNs: number): number => widestNs(setup, reachNs(setup, withinNs) + reachNs(setup, otherNs));
    return window(Math.max(withinNs, this.reaches.around(from, to, window)));
  }

  /** The events that take part in a rule in a stretch, in their order. */
  participants(setup: SearchSetup, stretch: Stretch): StoredEvent[] {
    return this.attendance(setup, stretch).taking;
  }

  /** The eligible events of a stretch in their order: those that take part, and those that come within a dead time. */
  attendance({ active }: SearchSetup, { from, to }: Stretch): Attendance {
    const events = this.log.between(movedBy(from, -active.deadTimeNs), to).toSorted(compareEvents);
    const { taking, dead } = attendance(active, events);
    if (active.deadTimeNs === 0) return { taking, dead };
    const isWithin = (event: StoredEvent): boolean => compareInstants(event, from) >= 0;
    return { taking: taking.filter(isWithin), dead: dead.filter(isWithin) };
  }

  /**
   * Finds what begins with the events of a stretch.
   *
   * @param most sets that are found before the rest is left, the latest first
   */
  run(setup: SearchSetup, stretch: Stretch, most = MOST_SETS): StretchFindings {
    const { active, bounds, ground, windowVelocityAt } = setup;
    const windowNs = this.windowAround(setup, stretch);
    const { taking: events, dead } = this.attendance(setup, {
      from: movedBy(stretch.from, -windowNs),
      to: movedBy(stretch.to, windowNs),
    });
    const first = countBefore(events, (event) => compareInstants(event, stretch.from) < 0);
    const end = countBefore(events, (event) => compareInstants(event, stretch.to) <= 0);
    const input = {
      events: columnsOf(events),
      errors: ground.errors,
      rule: active.rule,
      bounds,
      windowVelocities: windowVelocityAt && velocitiesAt(events, windowVelocityAt),
    };
    const sweep = coincidenceSweep(input, active.limit);
    const sets: StoredEvent[][] = [];
    const crowds = new Map<number, FoundCrowd>();
    const at = (row: number): StoredEvent[] => events.slice(row, row + 1);
    const listener = {
      set: (rows: Int32Array, fold: number): void => {
        sets.push(Array.from(rows.subarray(0, fold)).flatMap(at));
      },
      crowd: ({ event, sites, events: count, setsAtLeast }: FoundCrowd & { event: number }): void => {
        for (const { triggerId } of at(event)) crowds.set(triggerId, { sites, events: count, setsAtLeast });
      },
    };
    let row = end;
    while (row > first && (sets.length < most || isOneInstant(events, row - 1, row))) {
      row--;
      sweep(row, row + 1, listener);
    }
    const from = row > first ? (events[row] ?? stretch.from) : stretch.from;
    return {
      searched: { from: { taiS: from.taiS, ps: from.ps }, to: stretch.to },
      triggers: [...events.slice(row, end), ...dead].map(({ triggerId }) => triggerId),
      sets,
      crowds,
    };
  }
}

/** Whether two rows are at one instant; false past either end. */
function isOneInstant(events: readonly StoredEvent[], a: number, b: number): boolean {
  const [first, second] = [events[a], events[b]];
  return first !== undefined && second !== undefined && compareInstants(first, second) === 0;
}

function velocitiesAt(events: readonly StoredEvent[], velocityAt: NonNullable<SearchSetup['windowVelocityAt']>): Float64Array {
  const velocities = new Float64Array(4 * events.length);
  events.forEach((event, row) => {
    const { gamma, gammaBeta } = velocityAt(event);
    velocities.set([gamma, ...gammaBeta], 4 * row);
  });
  return velocities;
}

/** How many events at the beginning fulfil a condition that none after them does. */
function countBefore(events: readonly StoredEvent[], isBefore: (event: StoredEvent) => boolean): number {
  let low = 0;
  let high = events.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    const event = events[middle];
    if (event && isBefore(event)) low = middle + 1;
    else high = middle;
  }
  return low;
}
