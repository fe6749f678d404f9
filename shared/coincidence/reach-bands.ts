import { NS_PER_LIGHT_M } from '../constants';
import { type ErrorTables, type EventColumns } from '../relativity/events';
import { versionOf } from '../relativity/time-error';

/** Events whose errors reach about equally far. */
export interface ReachBand {
  /** Their rows, ascending; undefined when they are all rows. */
  readonly rows: Int32Array | undefined;
  readonly mostReachNs: number;
}

/** What a reach rests on. */
export interface ReachInput {
  readonly events: EventColumns;
  readonly errors: ErrorTables;
  readonly rule: { readonly sigmas: number };
}

/** Doublings beyond this are one band: no error of a reading is larger than the age of the universe. */
const MOST_BANDS = 48;

/** Least reach that is worth a band of its own, ns. */
const LEAST_BAND_NS = 1e3;

/**
 * The farthest, in time, at which an event's own errors may make it near another, ns: `sigmas` times its time error and its position error
 * over c. Two events' reaches together bound `sigmas` standard errors of their gap, since what they share can only cancel.
 */
export function eventReachNs(input: ReachInput, event: number): number {
  const position = input.errors.sitePositionSigmaM[versionOf(input.events, event)] ?? 0;
  return input.rule.sigmas * ((input.events.sigmaNs[event] ?? 0) + position * NS_PER_LIGHT_M);
}

/**
 * Sorts events into bands by their reach: one band up to the width that the geometry has anyway, then one a doubling.
 *
 * @param geometryNs widest window without errors
 * @returns bands that hold at least one event; a single band of all rows where no reach stands out
 */
export function reachBands(input: ReachInput, geometryNs: number): readonly ReachBand[] {
  const { events, errors, rule } = input;
  const { sigmaNs } = events;
  let mostSigmaNs = 0;
  for (let i = 0; i < events.count; i++) if ((sigmaNs[i] ?? 0) > mostSigmaNs) mostSigmaNs = sigmaNs[i] ?? 0;
  const mostPositionM = errors.sitePositionSigmaM.reduce((most, sigmaM) => Math.max(most, sigmaM), 0);
  const mostReachNs = rule.sigmas * (mostSigmaNs + mostPositionM * NS_PER_LIGHT_M);
  const firstNs = Math.max(geometryNs, LEAST_BAND_NS);
  if (mostReachNs <= firstNs) return [{ rows: undefined, mostReachNs }];

  const bandOf = (reachNs: number): number => Math.min(MOST_BANDS, Math.max(0, Math.ceil(Math.log2(reachNs / firstNs))));
  const rows = Array.from({ length: MOST_BANDS + 1 }, (): number[] => []);
  const most = new Float64Array(MOST_BANDS + 1);
  for (let i = 0; i < events.count; i++) {
    const reachNs = eventReachNs(input, i);
    const band = bandOf(reachNs);
    rows[band]?.push(i);
    most[band] = Math.max(most[band] ?? 0, reachNs);
  }
  return rows.flatMap((list, band) => (list.length > 0 ? [{ rows: Int32Array.from(list), mostReachNs: most[band] ?? 0 }] : []));
}
