import { hash } from 'node:crypto';
import { type EventIdentity } from '#shared/coincidence/event-identity';
import { compareText } from '#shared/compare-text';
import { intervalM2, properDistanceM, properTimeS } from '#shared/relativity/interval';
import { turningOf } from '#shared/relativity/order';
import { pairOf } from '#shared/relativity/pair';
import { type IntervalClass, verdictOf } from '#shared/relativity/verdict';
import { type Instant, picosecondsBetween } from '#shared/time/instant';
import { INTERVAL_CLASSES } from '#schema/words';
import { columnsOf, eventName } from '../reconcile/event-columns';
import { type StoredEvent } from '../reconcile/stored-event';
import { type SearchSetup } from './search-setup';
import { type LogGround } from './stored-log';

/** A pair as its row has it; what its class does not have is null. */
export interface PairNumbers {
  readonly a: number;
  readonly b: number;
  readonly class: IntervalClass;
  readonly dtNs: number;
  readonly distanceM: number;
  readonly sigmaDtNs: number;
  readonly sigmaGapNs: number;
  readonly marginSigma: number;
  readonly reverseMarginSigma: number;
  readonly intervalM2: number;
  readonly properTimeS: number | null;
  readonly properDistanceM: number | null;
  readonly turningSpeedC: number | null;
  readonly turningSigmaC: number | null;
  readonly toward: readonly [number, number, number] | undefined;
}

/** A coincidence as its rows have it. */
export interface SetNumbers {
  readonly setHash: string;
  /** In their order. */
  readonly events: readonly StoredEvent[];
  readonly first: Instant;
  readonly spanNs: number;
  readonly class: IntervalClass | 'mixed';
  readonly counts: Readonly<Record<IntervalClass, number>>;
  readonly nearestMarginSigma: number;
  readonly leastTurningSpeedC: number | null;
  readonly amplitude: number | null;
  readonly pairs: readonly PairNumbers[];
  readonly rowHash: Buffer;
}

/** What the hash of a coincidence is over: as computed, or as its rows have it. */
export type HashedSet = Omit<SetNumbers, 'rowHash' | 'events'> & {
  readonly events: readonly Pick<StoredEvent, 'triggerId' | 'siteId' | 'eventVersion'>[];
};

const CLASSES: readonly string[] = [...INTERVAL_CLASSES, 'mixed'];

/** The hash that names a set for ever: SHA-256 over the rule's code and the event names sorted by code unit, one a line; its first 12 digits are the name. */
export function setHash(ground: LogGround, ruleCode: string, events: readonly EventIdentity[]): string {
  const names = events.map((event) => eventName(ground.siteCodes[event.site] ?? '', event)).sort(compareText);
  return hash('sha256', [ruleCode, ...names].join('\n'));
}

/** SQLite's columns take no infinite error, and keep no sign of 0. */
const finite = (value: number): number => Math.min(value, Number.MAX_VALUE) + 0;

function pairNumbers(columns: Parameters<typeof pairOf>[0], { ground, active }: SearchSetup, a: number, b: number): PairNumbers {
  const pair = pairOf(columns, ground.errors, a, b);
  const verdict = verdictOf(pair, active.rule.sigmas);
  const interval = intervalM2(pair.dtNs, pair.distanceM);
  const turning = verdict.class === 'spacelike' ? turningOf(pair) : undefined;
  return {
    a: a + 1,
    b: b + 1,
    class: verdict.class,
    dtNs: pair.dtNs,
    distanceM: pair.distanceM,
    sigmaDtNs: finite(pair.sigmaDtNs),
    sigmaGapNs: finite(verdict.sigmaGapNs),
    marginSigma: verdict.marginSigma + 0,
    reverseMarginSigma: verdict.reverseMarginSigma + 0,
    intervalM2: interval + 0,
    properTimeS: verdict.class === 'timelike' ? properTimeS(interval) : null,
    properDistanceM: turning ? properDistanceM(interval) : null,
    turningSpeedC: turning ? turning.speedC : null,
    turningSigmaC: turning ? finite(turning.sigmaC) : null,
    toward: turning && [turning.toward[0] + 0, turning.toward[1] + 0, turning.toward[2] + 0],
  };
}

/** The sum of the amplitudes that are there; null where none is. */
function sumOfAmplitudes(events: readonly StoredEvent[]): number | null {
  const given = events.flatMap(({ amplitude }) => (Number.isNaN(amplitude) ? [] : [amplitude]));
  if (given.length === 0) return null;
  const sum = given.reduce((total, amplitude) => total + amplitude, 0);
  return Math.max(-Number.MAX_VALUE, finite(sum));
}

/**
 * Computes a set: all pairs of its events, and what the lists sort by.
 *
 * @param events of the set, in their order
 * @param named its hash
 */
export function setNumbers(setup: SearchSetup, events: readonly StoredEvent[], named: string): SetNumbers {
  const columns = columnsOf(events);
  const pairs: PairNumbers[] = [];
  for (let a = 0; a < events.length; a++) for (let b = a + 1; b < events.length; b++) pairs.push(pairNumbers(columns, setup, a, b));
  const counts = { timelike: 0, spacelike: 0, undecided: 0 };
  for (const pair of pairs) counts[pair.class]++;
  const [first = { taiS: 0, ps: 0 }] = events;
  const speeds = pairs.flatMap(({ turningSpeedC }) => (turningSpeedC === null ? [] : [turningSpeedC]));
  const margins = pairs.map(({ marginSigma }) => marginSigma);
  const numbers = {
    setHash: named,
    events,
    first: { taiS: first.taiS, ps: first.ps },
    spanNs: picosecondsBetween(first, events.at(-1) ?? first) / 1e3,
    class: classOf(pairs),
    counts,
    nearestMarginSigma: margins.reduce((nearest, margin) => (Math.abs(margin) < Math.abs(nearest) ? margin : nearest)),
    leastTurningSpeedC: speeds.length === 0 ? null : Math.min(...speeds),
    amplitude: sumOfAmplitudes(events),
    pairs,
  };
  return { ...numbers, rowHash: coincidenceHash(setup.active.versionId, numbers) };
}

function classOf([first, ...others]: readonly PairNumbers[]): IntervalClass | 'mixed' {
  return first && others.every((pair) => pair.class === first.class) ? first.class : 'mixed';
}

/**
 * SHA-256 over everything of a set that never changes: its rule's version, hash and numbers, its members, its pairs. Numbers are doubles, lowest
 * byte first, in the order of the columns; NaN stands for NULL, a class for its place among the classes.
 */
export function coincidenceHash(versionId: number, set: HashedSet): Buffer {
  const absent = (value: number | null): number => value ?? NaN;
  const numbers = [versionId, set.events.length, set.first.taiS, set.first.ps, set.spanNs, CLASSES.indexOf(set.class)];
  numbers.push(set.counts.timelike, set.counts.spacelike, set.counts.undecided);
  numbers.push(set.nearestMarginSigma, absent(set.leastTurningSpeedC), absent(set.amplitude));
  for (const { triggerId, siteId, eventVersion } of set.events) numbers.push(triggerId, siteId, eventVersion);
  for (const pair of set.pairs) {
    numbers.push(pair.a, pair.b, CLASSES.indexOf(pair.class), pair.dtNs, pair.distanceM, pair.sigmaDtNs, pair.sigmaGapNs);
    numbers.push(pair.marginSigma, pair.reverseMarginSigma, pair.intervalM2, absent(pair.properTimeS), absent(pair.properDistanceM));
    numbers.push(absent(pair.turningSpeedC), absent(pair.turningSigmaC), ...(pair.toward ?? [NaN, NaN, NaN]));
  }
  const name = Buffer.from(set.setHash, 'hex');
  const bytes = Buffer.alloc(name.length + 8 * numbers.length);
  name.copy(bytes);
  numbers.forEach((value, k) => bytes.writeDoubleLE(value, name.length + 8 * k));
  return hash('sha256', bytes, 'buffer');
}
