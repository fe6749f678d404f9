import { C_M_S } from '../constants';
import { type ErrorTables, type EventColumns } from '../relativity/events';
import { gapSigmaNs } from '../relativity/time-error';
import { nanosecondsOf, PS_PER_S } from '../time/instant';
import { eventReachNs, reachBands } from './reach-bands';
import { type CoincidenceRule } from './rule';
import { type WindowBounds } from './window-bounds';

/** The frame of a fixed window at each event: gamma and the three gamma-betas of row i stand at 4 i. */
export type WindowVelocities = Float64Array;

/** What the finder is asked about: sorted triggers, their errors, the rule, and what the geometry alone decides. */
export interface KernelInput {
  /** Triggers alone, sorted. */
  readonly events: EventColumns;
  readonly errors: ErrorTables;
  readonly rule: CoincidenceRule;
  readonly bounds: WindowBounds;
  /** For a fixed window in another frame than the geocentric one. */
  readonly windowVelocities?: WindowVelocities | undefined;
}

/** Answers the two questions that every form of the finder asks of sorted triggers. Rows in `found` are ascending. */
export interface CoincidenceKernel {
  /** Are two triggers near? Their rows may come in any order; two triggers of one site never are. */
  near(a: number, b: number): boolean;
  /** The first row from `from` on, before `to`, that may have a near trigger after it; `to` where there is none. */
  nextBusy(from: number, to: number): number;
  /** Puts the rows after `event` that are near it into `found` from 0 on, and returns how many. */
  laterNear(event: number, found: RowList): number;
  /** The same for the rows before it. */
  earlierNear(event: number, found: RowList): number;
  readonly siteCount: number;
  /** No two near triggers are farther apart in time than this, ns. */
  readonly spanNs: number;
}

/** A list of rows that grows, used again and again so that the search leaves nothing behind. */
export class RowList {
  rows = new Int32Array(64);

  put(at: number, row: number): void {
    if (at === this.rows.length) {
      const larger = new Int32Array(at * 2);
      larger.set(this.rows);
      this.rows = larger;
    }
    this.rows[at] = row;
  }
}

/** The exact rule behind the bounds, for two events of different sites, |dt| in ns. */
function exactly(input: KernelInput): (a: number, b: number, dtNs: number) => boolean {
  const { events: e, errors, rule, windowVelocities } = input;
  const window = rule.window;
  if (window.kind === 'light-time') {
    const nsPerM = 1e9 / (window.speedC * C_M_S);
    return (a, b, dtNs) => {
      const x = (e.xM[b] ?? 0) - (e.xM[a] ?? 0);
      const y = (e.yM[b] ?? 0) - (e.yM[a] ?? 0);
      const z = (e.zM[b] ?? 0) - (e.zM[a] ?? 0);
      const reachNs = Math.sqrt(x * x + y * y + z * z) * nsPerM + window.marginNs;
      return dtNs <= reachNs || (rule.sigmas > 0 && dtNs <= reachNs + rule.sigmas * gapSigmaNs(e, errors, a, b));
    };
  }
  if (!windowVelocities) return (_a, _b, dtNs) => dtNs <= window.widthNs;
  const u = windowVelocities;
  return (a, b, dtNs) => {
    const at = 4 * a;
    const along =
      (u[at + 1] ?? 0) * ((e.xM[b] ?? 0) - (e.xM[a] ?? 0)) +
      (u[at + 2] ?? 0) * ((e.yM[b] ?? 0) - (e.yM[a] ?? 0)) +
      (u[at + 3] ?? 0) * ((e.zM[b] ?? 0) - (e.zM[a] ?? 0));
    return Math.abs((u[at] ?? 0) * dtNs - (along / C_M_S) * 1e9) <= window.widthNs;
  };
}

/**
 * Makes the kernel over sorted triggers.
 *
 * The bounds of the geometry decide all but a sliver of the pairs; places and errors are read for those alone. Events whose errors reach
 * far are kept in bands of their own, so that one doubtful clock does not widen the search of all others.
 *
 * @param input the triggers, sorted; time and place in the geocentric frame
 * @returns answers that depend on the events alone, never on the order in which they are asked
 */
export function coincidenceKernel(input: KernelInput): CoincidenceKernel {
  const { events: e, bounds, rule } = input;
  const { taiS, ps, site, count } = e;
  const { siteCount, certainNs, possibleNs, reachFactor } = bounds;
  const isNear = exactly(input);
  const geometryNs = possibleNs.reduce((most, boundNs) => Math.max(most, boundNs), 0);
  const reachesBySigma = rule.window.kind === 'light-time' && rule.sigmas > 0;
  const bands = reachesBySigma ? reachBands(input, geometryNs) : [{ rows: undefined, mostReachNs: 0 }];
  const mostReachNs = bands.reduce((most, band) => Math.max(most, band.mostReachNs), 0);
  const spanNs = geometryNs + 2 * mostReachNs * reachFactor;
  const oneBand = bands.length === 1 && !bands[0]?.rows;

  // The walk of one band compares picoseconds, which takes no division. Its bounds carry a slack that exceeds their rounding by far.
  const spanPs = spanNs * 1e3;
  const certainPs = certainNs.map((boundNs) => boundNs * 1e3);
  /** Beyond this not near, whatever the errors; stays below 0 within a site. */
  const possiblePs = possibleNs.map((boundNs) => (boundNs < 0 ? -1 : (boundNs + 2 * mostReachNs * reachFactor) * 1e3));

  const apartNs = (a: number, b: number): number => nanosecondsOf((taiS[b] ?? 0) - (taiS[a] ?? 0), (ps[b] ?? 0) - (ps[a] ?? 0));

  /** Decides for a before b in the order of events, dt not negative. */
  function nearInOrder(a: number, b: number, dtNs: number, reachNs: number): boolean {
    const at = (site[a] ?? 0) * siteCount + (site[b] ?? 0);
    const possible = possibleNs[at] ?? -1;
    if (possible < 0 || dtNs > possible + reachNs) return false;
    return dtNs <= (certainNs[at] ?? -1) || isNear(a, b, dtNs);
  }

  /** The farthest that an event's own errors let it be near another, ns. */
  const reachOf = oneBand ? () => mostReachNs : (event: number) => eventReachNs(input, event);

  /** All rows are one band: a plain walk over the columns, the way of every network whose clocks are good. */
  function laterInOneBand(event: number, found: RowList): number {
    const fromS = taiS[event] ?? 0;
    const fromPs = ps[event] ?? 0;
    const siteRow = (site[event] ?? 0) * siteCount;
    let filled = 0;
    for (let other = event + 1; other < count; other++) {
      const dtPs = ((taiS[other] ?? 0) - fromS) * PS_PER_S + ((ps[other] ?? 0) - fromPs);
      if (dtPs > spanPs) break;
      const at = siteRow + (site[other] ?? 0);
      if (dtPs > (possiblePs[at] ?? -1)) continue;
      if (dtPs <= (certainPs[at] ?? -1) || isNear(event, other, dtPs / 1e3)) found.put(filled++, other);
    }
    return filled;
  }

  /** Most events of a quiet network are alone: their successor is beyond the widest window. */
  function nextBusyInOneBand(from: number, to: number): number {
    let atS = taiS[from] ?? 0;
    let atPs = ps[from] ?? 0;
    for (let event = from; event < to && event + 1 < count; event++) {
      const nextS = taiS[event + 1] ?? 0;
      const nextPs = ps[event + 1] ?? 0;
      if ((nextS - atS) * PS_PER_S + (nextPs - atPs) <= spanPs) return event;
      atS = nextS;
      atPs = nextPs;
    }
    return to;
  }

  function earlierInOneBand(event: number, found: RowList): number {
    const toS = taiS[event] ?? 0;
    const toPs = ps[event] ?? 0;
    const siteRow = (site[event] ?? 0) * siteCount;
    let filled = 0;
    for (let other = event - 1; other >= 0; other--) {
      const dtPs = (toS - (taiS[other] ?? 0)) * PS_PER_S + (toPs - (ps[other] ?? 0));
      if (dtPs > spanPs) break;
      const at = siteRow + (site[other] ?? 0);
      if (dtPs > (possiblePs[at] ?? -1)) continue;
      if (dtPs <= (certainPs[at] ?? -1) || isNear(other, event, dtPs / 1e3)) found.put(filled++, other);
    }
    if (filled > 1) found.rows.subarray(0, filled).reverse();
    return filled;
  }

  /** Rows in bands: each is walked as far as the event's reach and the band's own carry. */
  function inBands(event: number, found: RowList, step: 1 | -1): number {
    const eventReach = reachOf(event);
    let filled = 0;
    for (const { rows, mostReachNs: bandNs } of bands) {
      if (!rows) continue;
      const reachNs = (eventReach + bandNs) * reachFactor;
      for (let k = step > 0 ? firstAfter(rows, event) : firstAfter(rows, event - 1) - 1; k >= 0 && k < rows.length; k += step) {
        const other = rows[k] ?? 0;
        const [first, second] = step > 0 ? [event, other] : [other, event];
        const dtNs = apartNs(first, second);
        if (dtNs > geometryNs + reachNs) break;
        if (nearInOrder(first, second, dtNs, reachNs)) found.put(filled++, other);
      }
    }
    found.rows.subarray(0, filled).sort();
    return filled;
  }

  return {
    near: (a, b) => {
      const reachNs = (reachOf(a) + reachOf(b)) * reachFactor;
      return a < b ? nearInOrder(a, b, apartNs(a, b), reachNs) : nearInOrder(b, a, apartNs(b, a), reachNs);
    },
    nextBusy: oneBand ? nextBusyInOneBand : (from) => from,
    laterNear: oneBand ? laterInOneBand : (event, found) => inBands(event, found, 1),
    earlierNear: oneBand ? earlierInOneBand : (event, found) => inBands(event, found, -1),
    siteCount,
    spanNs,
  };
}

/** Position of the first row above `row` in an ascending list. */
function firstAfter(rows: Int32Array, row: number): number {
  let low = 0;
  let high = rows.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if ((rows[middle] ?? 0) > row) high = middle;
    else low = middle + 1;
  }
  return low;
}
