import { type SiteRecord } from '#shared/contract/site-record';
import { addPicoseconds, compareInstants, type Instant } from '#shared/time/instant';
import { timeText } from '#shared/time/format';
import { planSlice, SLICE_S } from './plan';
import { randomFrom, type Random } from './random';
import { seenOf, type Seen } from './seen';
import { type World } from './world';

/**
 * How the sites write: decimals of a second, and the range of the errors that stand in each record, where they do. At some the flicker rises
 * so slowly that its beginning is known to a part of a millisecond only: a pair with them may lie too near to light to be told.
 */
const STYLES: Readonly<Record<string, { readonly decimals: number; readonly sigmaNs?: readonly [number, number] }>> = {
  TRK: { decimals: 12 },
  TRL: { decimals: 7 },
  SVB: { decimals: 10 },
  SVH: { decimals: 10 },
  OMB: { decimals: 9, sigmaNs: [60_000, 350_000] },
  ILC: { decimals: 9, sigmaNs: [20_000, 90_000] },
  GIL: { decimals: 9, sigmaNs: [120_000, 700_000] },
  KTS: { decimals: 11 },
};
const MOST_DECIMALS = 12;

/** Ways to write a record badly, by turns. */
const BADLY: readonly Partial<SiteRecord>[] = [
  { reading: '' },
  { reading: '2026-02-30T01:00:00.000000000' },
  { reading: '01.12.2026 10:15:00' },
  { sigmaNs: '-5' },
  { amplitude: 'loud' },
  { kind: 'noise' },
];

const LATE_SITE = 'KTS';

/** A record as a site writes it, with what only the maker knows. */
export interface Written {
  readonly site: string;
  readonly record: SiteRecord;
  /** The true time. */
  readonly at: Instant;
  readonly cause: Seen['cause'];
  /** How long the site keeps it before it sends it, seconds. */
  readonly lateS: number;
}

/** How many records each site has written before, which numbers go on from; made by `countBetween`. */
export type Counts = Map<string, number>;

/** The first second of a slice. */
export const startOfSlice = ({ firstTaiS }: Pick<World, 'firstTaiS'>, slice: number): Instant => ({
  taiS: firstTaiS + slice * SLICE_S,
  ps: 0,
});

/**
 * Counts what each site writes in the slices from one to before another: what their records are numbered from.
 *
 * @returns no entry for a site that writes nothing
 */
export function countBetween({ seed, emitter }: Pick<World, 'seed' | 'emitter'>, from: number, to: number): Counts {
  const counts: Counts = new Map();
  const add = (site: string): unknown => counts.set(site, (counts.get(site) ?? 0) + 1);
  for (let slice = from; slice < to; slice += 1)
    for (const cause of planSlice(seed, slice, emitter.periodS).happenings) {
      if (cause.kind === 'front') for (const { site } of cause.seen) add(site);
      else if (cause.kind === 'pulse') for (const site of cause.sites) add(site);
      else if (cause.kind === 'disturbance') [cause.from, cause.to].forEach(add);
      else add(cause.site);
    }
  return counts;
}

/**
 * Writes a slice of the stream: the same for the same world, number, counts and series.
 *
 * @param counts how many records each site has written before; counted on
 * @param series of all records
 * @returns records in the order of their true times
 */
export function writeSlice(world: World, slice: number, counts: Counts, series = ''): readonly Written[] {
  const plan = planSlice(world.seed, slice, world.emitter.periodS);
  const random = randomFrom(world.seed, 2, slice);
  const start = startOfSlice(world, slice);
  const seen = plan.happenings.flatMap((cause) => seenOf(world, start, cause)).sort((a, b) => compareInstants(a.at, b.at));
  const malformed = plan.malformed && chosen(seen, plan.malformed.which);
  const late =
    plan.late &&
    chosen(
      seen.filter(({ site }) => site.code === LATE_SITE),
      plan.late.which,
    );
  return seen.map((one): Written => {
    const { code } = one.site;
    const sequence = (counts.get(code) ?? 0) + 1;
    counts.set(code, sequence);
    const good = { ...write(world, one, random), series, sequence: String(sequence) };
    const badly = BADLY[Math.floor((plan.malformed?.how ?? 0) * BADLY.length)];
    return {
      site: code,
      record: one === malformed ? { ...good, ...badly } : good,
      at: one.at,
      cause: one.cause,
      lateS: one === late ? (plan.late?.byS ?? 0) : 0,
    };
  });
}

const chosen = (list: readonly Seen[], share: number): Seen | undefined => list[Math.floor(share * list.length)];

/** Reads the site's clock, which shows so much more than the true time, with the error of a reading, rounded to what the site writes. */
function write({ leapSeconds }: World, { site, at, cause, amplitude }: Seen, random: Random): Omit<SiteRecord, 'series' | 'sequence'> {
  const { decimals, sigmaNs } = STYLES[site.code] ?? { decimals: 9 };
  const statedNs = sigmaNs && Math.round(random.between(...sigmaNs) * 10) / 10;
  const noiseNs = random.normal() * (statedNs ?? site.readingSigmaNs ?? 0);
  const pulse = laterNs(at, site.delayNs);
  const halfUnitNs = decimals === MOST_DECIMALS ? 0 : 0.5 * 10 ** (9 - decimals); // what lies beyond the decimals is cut off
  const reading = timeText(laterNs(pulse, site.clock(pulse) + noiseNs + halfUnitNs), site.scale, leapSeconds, decimals);
  if (!reading.ok) throw new Error(reading.problem.text);
  return {
    kind: cause.kind === 'pulse' ? 'reference' : '',
    reading: reading.value,
    readingForm: 'iso',
    sigmaNs: statedNs === undefined ? '' : String(statedNs),
    amplitude: amplitude.toFixed(2),
  };
}

const laterNs = (instant: Instant, ns: number): Instant => addPicoseconds(instant, Math.round(ns * 1e3));
