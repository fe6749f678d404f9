import { parseNetworkFile } from '#shared/contract/network-file';
import { buildNetwork } from '#shared/contract/build-network';
import { type Network } from '#shared/reconcile/network';
import { compareInstants, type Instant } from '#shared/time/instant';
import { earthBarycentricVelocityMS } from '../frames/ephemeris';
import { VERSION } from '../version';
import { writeCoincidences, writeNeighbours } from './coincidence-tables';
import { eventWriter, HEADERS, instantOfEvent, PairWriter } from './event-tables';
import { faultText } from './fault-text';
import { keepInputs } from './kept-inputs';
import { type GroundTables, loadGroundTables } from './ground-tables';
import { readLiveTime } from './live-time';
import { type Pace, paceUntil } from './pace';
import { grouped, type Progress } from './progress';
import { readOption } from './readable-file';
import { logArguments, logPath, readLogs } from './read-logs';
import { type FoundRecords } from './record-store';
import { ResultFolder } from './result-folder';
import { writeSetAside } from './set-aside-table';
import { type SortedEvents, sortEvents } from './sorted-events';
import { summaryOf } from './summary';
import { UsageProblem } from './usage-problem';

/** What the command line asks for. */
export interface ReconcileOptions {
  readonly network: string;
  readonly out: string;
  readonly logs: readonly string[];
  readonly live?: string | undefined;
  readonly leapSeconds?: string | undefined;
  readonly earthOrientation?: string | undefined;
  /** An event that is the earliest of more sets than this is crowded; at least 1. */
  readonly limit: number;
}

/** The world around the command. */
export interface CommandContext {
  readonly signal: AbortSignal;
  readonly progress: Progress;
  /** Hears of warnings and counts, a line each. */
  readonly say: (line: string) => void;
}

const inputPaths = ({ network, logs, live, leapSeconds, earthOrientation }: ReconcileOptions): string[] =>
  [...logs.map(logPath), network, live, leapSeconds, earthOrientation].filter((path) => path !== undefined);

/** Lines of events written between two breaths. */
const STRETCH = 4096;

function loadNetwork(path: string, tables: GroundTables, say: (line: string) => void): Network {
  const text = readOption('--network', path);
  let input: unknown;
  try {
    input = JSON.parse(text.replace(/^\ufeff/, '')); // a byte order mark, as some editors put it, is no JSON
  } catch (fault) {
    throw new UsageProblem(`${path}: is not JSON (${faultText(fault)})`);
  }
  const file = parseNetworkFile(input);
  if (!file.ok) throw UsageProblem.of(file.problem, path);
  const { leapSeconds, rotationFor } = tables;
  const network = buildNetwork(file.value, { leapSeconds, rotationFor, earthBarycentricVelocityMS });
  if (!network.ok) throw UsageProblem.of(network.problem, path);
  for (const { where, text: what } of network.warnings) say(`warning: ${where}: ${what}`);
  return network.value;
}

/** The rows of each selection, ascending; an event that is not among the accepted ones is a usage problem. */
function selectionRows(network: Network, sorted: SortedEvents, path: string): readonly { code: string; rows: readonly number[] }[] {
  if (network.selections.length === 0) return [];
  const rows = new Map<string, number>(network.selections.flatMap(({ events }) => events.map((name) => [name, -1])));
  for (let event = 0; event < sorted.events.count; event++) {
    const name = sorted.name(event);
    if (rows.has(name)) rows.set(name, event);
  }
  return network.selections.map(({ code, events }, at) => ({
    code,
    rows: events
      .map((name, k) => {
        const row = rows.get(name) ?? -1;
        if (row < 0)
          throw new UsageProblem(
            `${path}: selections[${at}].events[${k}]: is ${JSON.stringify(name)}; it must be the name of an accepted event, such as ORL:17`,
          );
        return row;
      })
      .sort((a, b) => a - b),
  }));
}

async function writeEvents(
  network: Network,
  sorted: SortedEvents,
  folder: ResultFolder,
  watch: { pace: Pace; progress: Progress },
): Promise<void> {
  const file = folder.file('events.csv');
  const writeEvent = eventWriter(network, sorted, file.text(HEADERS.events));
  watch.progress.begin('writing events', sorted.events.count);
  for (let event = 0; event < sorted.events.count; event++) {
    writeEvent(event);
    if (event % STRETCH !== 0) continue;
    watch.progress.at(event);
    await watch.pace.breathe();
  }
}

/**
 * Reconciles logs into results, from files to files: nothing is written to the folder unless everything could be.
 *
 * @returns how many records are set aside
 */
export async function reconcileFiles(options: ReconcileOptions, context: CommandContext): Promise<void> {
  const { progress, say } = context;
  keepInputs(options.out, inputPaths(options));
  const pace = paceUntil(context.signal);
  const tables = loadGroundTables(options);
  const network = loadNetwork(options.network, tables, say);
  const logs = logArguments(options.logs, network);
  const live = options.live === undefined ? undefined : await readLiveTime(options.live, network, tables.leapSeconds, pace);
  const folder = new ResultFolder(options.out);
  try {
    progress.begin(
      'reading logs, bytes',
      logs.reduce((bytes, { sizeBytes }) => bytes + sizeBytes, 0),
    );
    const warnings: string[] = [];
    const store = await readLogs(logs, network, tables.leapSeconds, { pace, onBytes: progress.at, warn: (text) => warnings.push(text) });
    const found = store.finish();
    progress.begin('placing events', found.rows.length);
    const sorted = await sortEvents(network, tables.rotationFor(network.from), found, { pace, onEvents: progress.at });
    const selections = selectionRows(network, sorted, options.network);
    await writeEvents(network, sorted, folder, { pace, progress });
    const results = await writePairs(network, sorted, selections, folder, { pace, progress, limit: options.limit });
    const setAside = folder.file('set-aside.csv');
    setAside.text(HEADERS.setAside);
    await writeSetAside(found, logs, setAside, pace);
    const hashes = folder.finishFiles();
    const ground = tables.accountOf({ from: network.from, end: endOfRun(network, sorted) });
    const summary = summaryOf({ network, version: VERSION, ground, found, sorted, live, ...results, hashes });
    folder.file('summary.json').text(`${JSON.stringify(summary, null, 2)}\n`);
    folder.finishFiles();
    context.signal.throwIfAborted();
    folder.publish([...hashes.keys(), 'summary.json']);
    progress.end();
    for (const text of [...warnings, ...ground.warnings]) say(`warning: ${text}`);
    say(closingLine(found, sorted, results.coincidences.byFold));
  } catch (fault) {
    progress.end();
    folder.discard();
    throw fault;
  }
}

/** The end of what was reconciled: the run's or the last event's, whichever is later. */
function endOfRun(network: Network, sorted: SortedEvents): Instant {
  const last = sorted.events.count > 0 ? instantOfEvent(sorted, sorted.events.count - 1) : network.from;
  return network.to && compareInstants(network.to, last) > 0 ? network.to : last;
}

async function writePairs(
  network: Network,
  sorted: SortedEvents,
  selections: readonly { code: string; rows: readonly number[] }[],
  folder: ResultFolder,
  watch: { pace: Pace; progress: Progress; limit: number },
) {
  const file = (name: string, header: string) => folder.file(name).text(header);
  const files = {
    coincidences: file('coincidences.csv', HEADERS.coincidences),
    pairs: file('pairs.csv', HEADERS.pairs),
    orders: file('orders.csv', HEADERS.orders),
    crowded: file('crowded.csv', HEADERS.crowded),
  };
  const neighbours = file('neighbours.csv', HEADERS.neighbours);
  const { pace, progress } = watch;
  const pairs = new PairWriter(network, sorted);
  progress.begin('finding coincidences', sorted.events.count);
  const coincidences = await writeCoincidences(network, sorted, { limit: watch.limit, pairs, files, pace, onEvents: progress.at });
  for (const { code, rows } of selections) {
    const names = rows.map((row) => sorted.name(row));
    pairs.writeSet(code, rows, names, files);
    await pace.breathe();
  }
  const withinNs = network.neighboursWithinNs;
  progress.begin('writing neighbours', sorted.events.count);
  const written =
    withinNs === undefined
      ? undefined
      : await writeNeighbours(sorted, coincidences.inCoincidence, { withinNs, pairs, file: neighbours, pace, onEvents: progress.at });
  return { coincidences, pairs: pairs.counts, neighbours: written };
}

function closingLine(found: FoundRecords, sorted: SortedEvents, byFold: ReadonlyMap<number, number>): string {
  const repeated = found.counts.repeated.reduce((total, count) => total + count, 0);
  const sets = [...byFold.values()].reduce((total, count) => total + count, 0);
  return (
    `${counted(sorted.events.count, 'event')}, ${counted(sets, 'coincidence')}; ` +
    `${counted(found.setAsideCount, 'record')} set aside, ${grouped(repeated)} repeated`
  );
}

const counted = (count: number, what: string): string => `${grouped(count)} ${what}${count === 1 ? '' : 's'}`;
