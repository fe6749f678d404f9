import { compareText } from '#shared/compare-text';
import { sortOrder } from '#shared/coincidence/sort-order';
import { type EarthRotation } from '#shared/earth/rotation';
import { type Network } from '#shared/reconcile/network';
import { KINDS, SIGMA_SOURCES } from '#shared/reconcile/record';
import { emptyEvents, type EventColumns } from '#shared/relativity/events';
import { timeVarianceNs2 } from '#shared/relativity/time-error';
import { type Pace } from './pace';
import { type AcceptedColumns, type FoundRecords } from './record-store';
import { type Sequences } from './sequences';

/** The accepted events in the order of events, with what names and describes them. */
export interface SortedEvents {
  readonly events: EventColumns;
  /** Index in KINDS. */
  readonly kind: (event: number) => number;
  readonly kindText: (event: number) => string;
  readonly sigmaSourceText: (event: number) => string;
  readonly amplitude: Float64Array;
  readonly seriesText: (event: number) => string;
  readonly sequenceText: (event: number) => string;
  /** `ORL:17`, or with a series `ORL:b:17`. */
  readonly name: (event: number) => string;
}

/** Events placed between two breaths. */
const STRETCH = 1 << 14;

/** The doubles of a column in a new order; apart from the other kinds, since one loop over many kinds of array is a slow one. */
function inOrder(from: Float64Array, order: Uint32Array): Float64Array {
  const into = new Float64Array(order.length);
  for (let at = 0; at < order.length; at++) into[at] = from[order[at] ?? 0] ?? 0;
  return into;
}

function gather<T extends Uint16Array | Int32Array | Uint32Array | Uint8Array>(from: T, order: Uint32Array, into: T): T {
  for (let at = 0; at < order.length; at++) into[at] = from[order[at] ?? 0] ?? 0;
  return into;
}

/**
 * Sorts what was accepted (time, then site, series, sequence as a number) and places it in the geocentric inertial frame.
 *
 * @param network sites in the order of their codes
 * @param rotation of the Earth
 * @param found what the logs held; may be forgotten after this
 */
export async function sortEvents(
  network: Network,
  rotation: EarthRotation,
  found: FoundRecords,
  watch: { pace: Pace; onEvents: (done: number) => void },
): Promise<SortedEvents> {
  const { accepted, rows, series, sequences } = found;
  const seriesRank = rankOf(series);
  const compare = compareRows(accepted, seriesRank, sequences);
  const byOrder = sortOrder(rows.length, (a, b) => compare(rows[a] ?? 0, rows[b] ?? 0));
  const order = gather(rows, byOrder, new Uint32Array(rows.length));
  const count = order.length;
  const events: EventColumns = {
    ...emptyEvents(0),
    count,
    taiS: inOrder(accepted.taiS, order),
    ps: inOrder(accepted.ps, order),
    xM: new Float64Array(count),
    yM: new Float64Array(count),
    zM: new Float64Array(count),
    site: gather(accepted.site, order, new Uint16Array(count)),
    readingSigmaNs: inOrder(accepted.readingSigmaNs, order),
    sigmaNs: new Float64Array(count),
    segment: gather(accepted.segment, order, new Int32Array(count)),
    sinceEpochDays: inOrder(accepted.sinceEpochDays, order),
    sinceEpochRestDays: inOrder(accepted.sinceEpochRestDays, order),
  };
  const flags = gather(accepted.flags, order, new Uint8Array(count));
  const sequence = inOrder(accepted.sequence, order);
  const seriesOf = gather(accepted.series, order, new Uint32Array(count));
  const amplitude = inOrder(accepted.amplitude, order);

  const place = new Float64Array(3);
  for (let event = 0; event < count; event++) {
    const itrsM = network.sites[events.site[event] ?? 0]?.itrsM ?? [0, 0, 0];
    rotation.placeInto(itrsM[0], itrsM[1], itrsM[2], events.taiS[event] ?? 0, events.ps[event] ?? 0, place, 0);
    events.xM[event] = place[0] ?? 0;
    events.yM[event] = place[1] ?? 0;
    events.zM[event] = place[2] ?? 0;
    events.sigmaNs[event] = Math.sqrt(timeVarianceNs2(events, network.errors, event));
    if (event % STRETCH === 0) {
      watch.onEvents(event);
      await watch.pace.breathe();
    }
  }

  const codes = network.sites.map(({ code }) => code);
  const seriesText = (event: number): string => series[seriesOf[event] ?? 0] ?? '';
  const sequenceText = (event: number): string => sequences.textOf(sequence[event] ?? 0);
  return {
    events,
    kind: (event) => (flags[event] ?? 0) & 3,
    kindText: (event) => KINDS[(flags[event] ?? 0) & 3] ?? '',
    sigmaSourceText: (event) => SIGMA_SOURCES[(flags[event] ?? 0) >> 2] ?? '',
    amplitude,
    seriesText,
    sequenceText,
    name: (event) => {
      const site = codes[events.site[event] ?? 0] ?? '';
      const inSeries = seriesText(event);
      return inSeries === '' ? `${site}:${sequenceText(event)}` : `${site}:${inSeries}:${sequenceText(event)}`;
    },
  };
}

/** For each code of a series, its place among the series sorted as text. */
function rankOf(series: readonly string[]): Uint32Array {
  const sorted = series.map((_, code) => code).sort((a, b) => compareText(series[a] ?? '', series[b] ?? ''));
  const ranks = new Uint32Array(series.length);
  sorted.forEach((code, rank) => (ranks[code] = rank));
  return ranks;
}

function compareRows(accepted: AcceptedColumns, seriesRank: Uint32Array, sequences: Sequences): (a: number, b: number) => number {
  const { taiS, ps, site, series, sequence } = accepted;
  return (a, b) => {
    const apartS = (taiS[a] ?? 0) - (taiS[b] ?? 0);
    if (apartS !== 0) return apartS;
    const apartPs = (ps[a] ?? 0) - (ps[b] ?? 0);
    if (apartPs !== 0) return apartPs;
    const sites = (site[a] ?? 0) - (site[b] ?? 0);
    if (sites !== 0) return sites;
    const ranks = (seriesRank[series[a] ?? 0] ?? 0) - (seriesRank[series[b] ?? 0] ?? 0);
    return ranks !== 0 ? ranks : sequences.compare(sequence[a] ?? 0, sequence[b] ?? 0);
  };
}
