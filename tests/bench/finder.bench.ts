import { coincidenceSweep } from '#shared/coincidence/batch-finder';
import { coincidenceKernel, RowList } from '#shared/coincidence/kernel';
import { type CoincidenceRule } from '#shared/coincidence/rule';
import { windowBounds } from '#shared/coincidence/window-bounds';
import { separationBounds } from '#shared/earth/worldline';
import { duckdbRangeJoin } from './duckdb-join';
import { inTurn, median, ratioText } from './medians';
import { type QuietColumns, quietColumns } from './quiet-columns';

const EVENTS = 2_000_000;
const SITES = 10;
const RATE_HZ = 10;
const ROUNDS = 9;
const RULE: CoincidenceRule = { code: 'light2', minimumFold: 2, sigmas: 3, window: { kind: 'light-time', speedC: 1, marginNs: 0 } };

/** One linear pass: reads every column that the finder is given once, and adds it all up. */
function onePass({ events: e }: QuietColumns): number {
  let sum = 0;
  for (let i = 0; i < e.count; i++) {
    const x = e.xM[i] ?? 0;
    const y = e.yM[i] ?? 0;
    const z = e.zM[i] ?? 0;
    sum += (e.taiS[i] ?? 0) + (e.ps[i] ?? 0) * 1e-12 + Math.sqrt(x * x + y * y + z * z);
    sum += (e.site[i] ?? 0) + (e.segment[i] ?? 0) + (e.sigmaNs[i] ?? 0) + (e.readingSigmaNs[i] ?? 0) + (e.sinceEpochDays[i] ?? 0);
  }
  return sum;
}

const inputOf = (columns: QuietColumns) => ({
  events: columns.events,
  errors: columns.errors,
  rule: RULE,
  bounds: windowBounds(RULE.window, columns.worldlines, separationBounds),
});

function find(columns: QuietColumns): { sets: number; members: number } {
  let sets = 0;
  let members = 0;
  const listener = {
    set: (_rows: Int32Array, fold: number) => {
      sets++;
      members += fold;
    },
    crowd: () => undefined,
  };
  coincidenceSweep(inputOf(columns), 10_000)(0, columns.events.count, listener);
  return { sets, members };
}

/** Pairs that are near, to hold against the database's count. */
function nearPairs(columns: QuietColumns): { pairs: number; widestNs: number } {
  const kernel = coincidenceKernel(inputOf(columns));
  const found = new RowList();
  let pairs = 0;
  for (let event = 0; event < columns.events.count; event++) pairs += kernel.laterNear(event, found);
  return { pairs, widestNs: kernel.spanNs };
}

const columns = quietColumns(EVENTS, SITES, RATE_HZ, 7);
const twice = quietColumns(2 * EVENTS, SITES, RATE_HZ, 7);
let sink = 0;
let sets = 0;
const [pass = [], finder = [], doubled = []] = inTurn(ROUNDS, [
  () => (sink += onePass(columns)),
  () => (sets = find(columns).sets),
  () => (sink += find(twice).sets),
]);
console.log(`finder: ${EVENTS} events of ${SITES} sites at ${RATE_HZ} Hz in all, light-time rule: ${sets} coincidences`);
console.log(`  finder / one linear pass over the same columns   ${ratioText(finder, pass)}   at most 10`);
console.log(`  twice the events / the events                    ${ratioText(doubled, finder)}   at most 2.3`);
console.log(
  `  (pass ${median(pass).toFixed(1)} ms, finder ${median(finder).toFixed(1)} ms on this machine, now; sum ${sink.toExponential(3)})`,
);

const { pairs, widestNs } = nearPairs(columns);
const join = await duckdbRangeJoin(columns, widestNs, RULE.sigmas);
const finderMs = median(finder);
for (const [times, { pairs: joined, cpuMs }] of [
  ['TAI in picoseconds, as the events have it', join.absolute],
  ['picoseconds since the first event', join.sinceFirst],
] as const) {
  if (joined !== pairs) throw new Error(`the join found ${joined} near pairs, the finder ${pairs}`);
  console.log(`  DuckDB ${join.version} range join / finder   ${(cpuMs / finderMs).toFixed(1)}   at least 30   (times: ${times})`);
}
console.log(`  (${pairs} near pairs in all three, one thread each)`);
