import { hash } from 'node:crypto';
import { compareText } from '#shared/compare-text';
import { coincidenceSweep } from '#shared/coincidence/batch-finder';
import { windowBounds } from '#shared/coincidence/window-bounds';
import { type WindowVelocities } from '#shared/coincidence/kernel';
import { type Network } from '#shared/reconcile/network';
import { type EventColumns } from '#shared/relativity/events';
import { GEOCENTRIC_CODE } from '#shared/relativity/frame-definition';
import { createTaiWriter } from '#shared/time/format';
import { nanosecondsOf, picosecondsBetween } from '#shared/time/instant';
import { instantOfEvent, type PairWriter, velocityAt } from './event-tables';
import { type Pace } from './pace';
import { type ResultFile } from './result-folder';
import { type SortedEvents } from './sorted-events';

/** Triggers searched between two breaths. */
const STRETCH = 64;

/** Events and pairs looked at between two breaths when neighbours are written. */
const EVENTS_STRETCH = 1024;
const PAIRS_STRETCH = 4096;

/** The triggers among the events, and their rows there. */
interface Triggers {
  readonly events: EventColumns;
  /** Row among all events of each trigger; undefined where all events are triggers. */
  readonly rows: Uint32Array | undefined;
}

function triggersOf(sorted: SortedEvents): Triggers {
  const { events } = sorted;
  let count = 0;
  for (let event = 0; event < events.count; event++) if (sorted.kind(event) === 0) count++;
  if (count === events.count) return { events, rows: undefined };
  const rows = new Uint32Array(count);
  let at = 0;
  for (let event = 0; event < events.count; event++) if (sorted.kind(event) === 0) rows[at++] = event;
  const pick = <T extends Float64Array | Uint16Array | Int32Array>(from: T, into: T): T => {
    for (let row = 0; row < count; row++) into[row] = from[rows[row] ?? 0] ?? 0;
    return into;
  };
  const double = (from: Float64Array): Float64Array => pick(from, new Float64Array(count));
  return {
    rows,
    events: {
      count,
      taiS: double(events.taiS),
      ps: double(events.ps),
      xM: double(events.xM),
      yM: double(events.yM),
      zM: double(events.zM),
      site: pick(events.site, new Uint16Array(count)),
      readingSigmaNs: double(events.readingSigmaNs),
      sigmaNs: double(events.sigmaNs),
      segment: pick(events.segment, new Int32Array(count)),
      sinceEpochDays: double(events.sinceEpochDays),
      sinceEpochRestDays: double(events.sinceEpochRestDays),
    },
  };
}

/** The frame of a fixed window at each trigger. */
function windowVelocities(network: Network, sorted: SortedEvents, { events, rows }: Triggers): WindowVelocities | undefined {
  const { window } = network.rule;
  if (window.kind !== 'fixed' || window.frame === GEOCENTRIC_CODE) return undefined;
  const velocities = new Float64Array(4 * events.count);
  for (let row = 0; row < events.count; row++) {
    const { gamma, gammaBeta } = velocityAt(network, window.frame, instantOfEvent(sorted, rows?.[row] ?? row));
    velocities.set([gamma, ...gammaBeta], 4 * row);
  }
  return velocities;
}

/** The stable name of a set: first 12 hex digits of SHA-256 over the rule's code and the event names sorted by code unit, one a line. */
export function setName(ruleCode: string, eventNames: readonly string[]): string {
  const text = [ruleCode, ...eventNames.toSorted(compareText)].join('\n');
  return hash('sha256', text).slice(0, 12);
}

/** What was found. */
export interface CoincidenceCounts {
  /** Coincidences by their number of sites. */
  readonly byFold: Map<number, number>;
  readonly crowded: number;
  /** 1 for each event that is in a coincidence. */
  readonly inCoincidence: Uint8Array;
}

/**
 * Finds the coincidences and writes them, their pairs and orders, and the crowded events.
 *
 * @param limit an event that is the earliest of more sets than this is crowded
 */
export async function writeCoincidences(
  network: Network,
  sorted: SortedEvents,
  options: {
    limit: number;
    pairs: PairWriter;
    files: { coincidences: ResultFile; pairs: ResultFile; orders: ResultFile; crowded: ResultFile };
    pace: Pace;
    onEvents: (done: number) => void;
  },
): Promise<CoincidenceCounts> {
  const triggers = triggersOf(sorted);
  const { files } = options;
  const worldlines = network.sites.map(({ worldline }) => worldline);
  const sweep = coincidenceSweep(
    {
      events: triggers.events,
      errors: network.errors,
      rule: network.rule,
      bounds: windowBounds(network.rule.window, worldlines, network.separation),
      windowVelocities: windowVelocities(network, sorted, triggers),
    },
    options.limit,
  );
  const codes = network.sites.map(({ code }) => code);
  const taiText = createTaiWriter();
  const byFold = new Map<number, number>();
  const inCoincidence = new Uint8Array(sorted.events.count);
  let crowded = 0;
  const allRows = (row: number): number => triggers.rows?.[row] ?? row;

  const listener = {
    set: (found: Int32Array, fold: number): void => {
      const rows: number[] = [];
      for (let k = 0; k < fold; k++) rows.push(allRows(found[k] ?? 0));
      const names = rows.map((row) => sorted.name(row));
      const set = setName(network.rule.code, names);
      const first = instantOfEvent(sorted, rows[0] ?? 0);
      const spanPs = picosecondsBetween(first, instantOfEvent(sorted, rows.at(-1) ?? 0));
      const sites = rows.map((row) => codes[sorted.events.site[row] ?? 0] ?? '').join(' ');
      files.coincidences.text(set).comma().number(fold).comma().text(sites).comma().text(taiText(first)).comma();
      files.coincidences
        .number(spanPs / 1e3)
        .comma()
        .text(names.join(' '))
        .endLine();
      options.pairs.writeSet(set, rows, names, files);
      byFold.set(fold, (byFold.get(fold) ?? 0) + 1);
      for (const row of rows) inCoincidence[row] = 1;
    },
    crowd: (crowd: { event: number; sites: number; events: number; setsAtLeast: number }): void => {
      crowded++;
      files.crowded.text(`${sorted.name(allRows(crowd.event))},${crowd.sites},${crowd.events},${crowd.setsAtLeast}\n`);
    },
  };
  for (let from = 0; from < triggers.events.count; from += STRETCH) {
    sweep(from, Math.min(from + STRETCH, triggers.events.count), listener);
    options.onEvents(from);
    await options.pace.breathe();
  }
  return { byFold, crowded, inCoincidence };
}

/**
 * Writes the neighbours: every pair of events of any kind at most `withinNs` apart, of which at least one is in a coincidence.
 *
 * @returns how many were written
 */
export async function writeNeighbours(
  sorted: SortedEvents,
  inCoincidence: Uint8Array,
  options: { withinNs: number; pairs: PairWriter; file: ResultFile; pace: Pace; onEvents: (done: number) => void },
): Promise<number> {
  const { taiS, ps, count } = sorted.events;
  let written = 0;
  let sinceBreath = 0;
  for (let a = 0; a < count; a++) {
    for (let b = a + 1; b < count; b++) {
      if (nanosecondsOf((taiS[b] ?? 0) - (taiS[a] ?? 0), (ps[b] ?? 0) - (ps[a] ?? 0)) > options.withinNs) break;
      if (inCoincidence[a] === 0 && inCoincidence[b] === 0) continue;
      options.pairs.writePair(a, b, options.file);
      written++;
      if (++sinceBreath < PAIRS_STRETCH) continue;
      sinceBreath = 0;
      await options.pace.breathe();
    }
    if (a % EVENTS_STRETCH !== 0) continue;
    options.onEvents(a);
    await options.pace.breathe();
  }
  return written;
}
