import { compareIdentities } from '../coincidence/event-identity';
import { compareText } from '../compare-text';
import { constantOrientation } from '../earth/earth-orientation';
import { readFinalsFile } from '../earth/finals-file';
import { type EarthRotation, earthRotation } from '../earth/rotation';
import { type Outcome, problemOf, valueOf } from '../outcome';
import { quoted } from '../quoted';
import { type Network } from '../reconcile/network';
import { emptyRecord, type ReconciledRecord, takeNames, takeReading } from '../reconcile/record';
import { emptyEvents, type EventColumns } from '../relativity/events';
import { errorTerms, timeVarianceNs2 } from '../relativity/time-error';
import { type Vec3 } from '../relativity/vector';
import { type FourVelocity } from '../relativity/velocity';
import { compareInstants, type Instant } from '../time/instant';
import { type LeapSecondTable, parseLeapSeconds, taiMinusUtcAt, taiMinusUtcOnDay } from '../time/leap-seconds';
import { createReadingParser } from '../time/reading';
import { readTaiPair } from '../time/tai-pair';
import { buildNetwork } from './build-network';
import { type FrozenInputs, type FrozenRecord, type FrozenResults } from './certificate';
import { type NetworkFile } from './network-file';
import { pairsOfSet } from './pairs-of-set';

/** The velocity of the Earth in the solar-system barycentric frame, ICRS axes, m/s: the one thing that is computed from no input. */
export type EarthVelocity = (instant: Instant) => Vec3;

/** Windows play no part in the numbers of pairs; a network is built with one all the same. */
const NO_RULE: NetworkFile['rule'] = { code: 'none', window: { kind: 'light-time' } };

interface PlacedRecord {
  readonly made: ReconciledRecord;
  readonly site: string;
  readonly name: string;
}

type Refused = ReturnType<typeof problemOf>;

function rotationsOf({ orientation }: FrozenInputs, leapSeconds: LeapSecondTable): Outcome<(runFrom: Instant) => EarthRotation> {
  if (orientation === null) return valueOf((runFrom) => earthRotation(constantOrientation(-taiMinusUtcAt(leapSeconds, runFrom))));
  const table = readFinalsFile(orientation, (day) => taiMinusUtcOnDay(leapSeconds, day) ?? 0);
  if (!table.ok) return problemOf(table.problem.code, `inputs.orientation, ${table.problem.where}`, table.problem.text);
  const rotation = earthRotation(table.value);
  return valueOf(() => rotation);
}

function networkOf(inputs: FrozenInputs, leapSeconds: LeapSecondTable, earthVelocity: EarthVelocity): Outcome<Network> {
  const rotationFor = rotationsOf(inputs, leapSeconds);
  if (!rotationFor.ok) return rotationFor;
  const file = { ...inputs.network, rule: inputs.network.rule ?? NO_RULE };
  const network = buildNetwork(file, { leapSeconds, rotationFor: rotationFor.value, earthBarycentricVelocityMS: earthVelocity });
  return network.ok ? network : problemOf(network.problem.code, `inputs.network.${network.problem.where}`, network.problem.text);
}

const nameOf = ({ site }: FrozenRecord, { series, sequence }: ReconciledRecord): string =>
  series === '' ? `${site}:${sequence}` : `${site}:${series}:${sequence}`;

/** The way of one record to the time of its event, as the batch command and the server go it. */
function placedRecord(record: FrozenRecord, network: Network, leapSeconds: LeapSecondTable, where: string): PlacedRecord | Refused {
  const refuse = (fault: string): Refused =>
    problemOf('certificate-record', where, `the reading ${quoted(record.reading)} of ${record.site} gives no event: ${fault}`);
  const code = record.entry ?? record.site;
  const row = network.sites.findIndex((one) => one.code === code);
  const site = network.sites[row];
  if (!site)
    return problemOf(
      'certificate-record',
      `${where}.${record.entry === undefined ? 'site' : 'entry'}`,
      `is "${code}", which is no site of the network`,
    );
  const made = { ...emptyRecord(), site: row };
  const unnamed = takeNames(record, made);
  if (unnamed) return refuse(unnamed);
  const reading =
    record.readingForm === 'tai-pair' ? readTaiPair(record.reading) : createReadingParser(site.scale, leapSeconds)(record.reading);
  if (typeof reading === 'string') return refuse(reading);
  const unsure = takeReading(reading, { sigma: record.sigmaNs, amplitude: record.amplitude }, site, made);
  if (unsure) return refuse(unsure);
  const isOutside = compareInstants(made, network.from) < 0 || (network.to !== undefined && compareInstants(made, network.to) > 0);
  return isOutside ? refuse('outside-run') : { made, site: record.site, name: nameOf(record, made) };
}

/** The events of all records in their order: time, then site, series, sequence. */
function placedRecords({ records }: FrozenInputs, network: Network, leapSeconds: LeapSecondTable): Outcome<readonly PlacedRecord[]> {
  const placed: PlacedRecord[] = [];
  const names = new Set<string>();
  for (const [at, record] of records.entries()) {
    const one = placedRecord(record, network, leapSeconds, `inputs.records[${at}]`);
    if ('ok' in one) return one;
    if (names.has(one.name)) return problemOf('certificate-record', `inputs.records[${at}]`, `is ${one.name} for the second time`);
    names.add(one.name);
    placed.push(one);
  }
  const codes = [...new Set(records.map(({ site }) => site))].sort(compareText);
  const identityOf = ({ made, site }: PlacedRecord) => ({ ...made, site: codes.indexOf(site) });
  return valueOf(placed.sort((a, b) => compareInstants(a.made, b.made) || compareIdentities(identityOf(a), identityOf(b))));
}

function columnsOf(placed: readonly PlacedRecord[], network: Network): EventColumns {
  const events = { ...emptyEvents(placed.length), count: placed.length };
  for (const [row, { made }] of placed.entries()) {
    const [x, y, z] = network.sites[made.site]?.worldline.placeAt(made) ?? [0, 0, 0];
    events.taiS[row] = made.taiS;
    events.ps[row] = made.ps;
    events.xM[row] = x;
    events.yM[row] = y;
    events.zM[row] = z;
    events.site[row] = made.site;
    events.readingSigmaNs[row] = made.readingSigmaNs;
    events.segment[row] = made.segment;
    events.sinceEpochDays[row] = made.sinceEpochDays;
    events.sinceEpochRestDays[row] = made.sinceEpochRestDays;
    events.sigmaNs[row] = Math.sqrt(timeVarianceNs2(events, network.errors, row));
  }
  return events;
}

/**
 * Computes every number of every pair of a snapshot from the verbatim readings, with what its inputs hold and nothing else.
 *
 * @param inputs as they were frozen
 * @param earthVelocity of the product, which the barycentric frame needs
 * @returns the results, bit for bit those of the server and of the batch command; the first problem where the inputs cannot be read or a record
 *   gives no event, its place as a path such as `inputs.records[2]`
 */
export function recomputed(inputs: FrozenInputs, earthVelocity: EarthVelocity): Outcome<FrozenResults> {
  const leapSeconds = parseLeapSeconds(inputs.leapSeconds);
  if (!leapSeconds.ok)
    return problemOf(leapSeconds.problem.code, `inputs.leapSeconds, ${leapSeconds.problem.where}`, leapSeconds.problem.text);
  const network = networkOf(inputs, leapSeconds.value, earthVelocity);
  if (!network.ok) return network;
  const { errors, frames } = network.value;
  const placed = placedRecords(inputs, network.value, leapSeconds.value);
  if (!placed.ok) return placed;
  const events = columnsOf(placed.value, network.value);
  const [first = { taiS: 0, ps: 0 }] = placed.value.map(({ made }) => made);
  const velocities: FourVelocity[] = [];
  for (const code of frames.codes) {
    const velocity = frames.velocityAt(code, first);
    if (!velocity.ok) return velocity;
    velocities.push(velocity.value);
  }
  return valueOf({
    events: placed.value.map(({ made: { taiS, ps }, site, name }, row) => ({
      name,
      site,
      at: { taiS, ps },
      placeM: [events.xM[row] ?? 0, events.yM[row] ?? 0, events.zM[row] ?? 0],
      sigmaNs: events.sigmaNs[row] ?? 0,
      terms: [...errorTerms(events, errors, row)],
    })),
    frames: velocities.map(({ gamma, gammaBeta: [x, y, z] }, at) => ({ code: frames.codes[at] ?? '', gamma, gammaBeta: [x, y, z] })),
    pairs: pairsOfSet({ events, errors, sigmas: inputs.sigmas, velocities }),
  });
}
