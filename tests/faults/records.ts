import { type SiteRecord } from '#shared/contract/site-record';
import { type Instant } from '#shared/time/instant';

/** Midnight (TAI) of the day of all records here, which is long past on any server's clock. */
const DAY = '2020-03-01T';
const DAY_TAI_S = 1_583_020_800;
/** Between two records of one site; 4 sites within 200 km of each other are then near by chance a few times in a hundred records. */
const STEP_NS = 20_000_000;
/** Each so many steps a wavefront passes all sites. */
const FRONT_EVERY = 8;
const FRONT_SPREAD_NS = 100_000;
const SIGMA_NS = 30;
/** Records that come late come so many steps late. */
const LATE_STEPS = 12;
const DAY_STEPS = (86_400 * 1e9) / STEP_NS;

/** A record, and what its site can say once it is sent. */
export interface SentRecord {
  readonly record: SiteRecord;
  /** Everything before this has been sent. */
  readonly completeTo: Instant;
}

/** Numbers from 0 to 1 that a seed decides (mulberry32). */
export function dice(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
  };
}

const two = (value: number): string => String(value).padStart(2, '0');

/** A reading so many nanoseconds after midnight. */
function readingAt(ns: number): string {
  const s = Math.floor(ns / 1e9);
  const clock = [Math.floor(s / 3600), Math.floor(s / 60) % 60, s % 60].map(two).join(':');
  return `${DAY}${clock}.${String(Math.floor(ns - s * 1e9)).padStart(9, '0')}`;
}

const recordAt = (sequence: number, ns: number): SiteRecord => ({
  series: '',
  sequence: String(sequence),
  kind: '',
  reading: readingAt(ns),
  readingForm: 'iso',
  sigmaNs: String(SIGMA_NS),
  amplitude: '',
});

/**
 * What a site sends, decided by a seed: triggers in the order of time, of which some come late, some come again as they were, some come again
 * with other content, and some are malformed.
 *
 * @param site 0 for the first: all sites see the same wavefronts
 */
export function* recordsOf(seed: number, site: number): Generator<SentRecord> {
  const roll = dice(seed * 101 + site);
  const sent: { sequence: number; ns: number }[] = [];
  const late: { step: number; sequence: number; ns: number }[] = [];
  for (let step = 0; step < DAY_STEPS; step++) {
    const completeTo = instantAt(Math.max(0, step - LATE_STEPS) * STEP_NS);
    const isFront = step % FRONT_EVERY === 0;
    const ns = step * STEP_NS + Math.floor(isFront ? roll() * FRONT_SPREAD_NS : roll() * STEP_NS);
    const chance = roll();
    if (chance < 0.05) late.push({ step: step + LATE_STEPS, sequence: step, ns });
    else {
      sent.push({ sequence: step, ns });
      yield { record: recordAt(step, ns), completeTo };
    }
    if (late[0] && late[0].step <= step) {
      const { sequence, ns: lateNs } = late.shift()!;
      yield { record: recordAt(sequence, lateNs), completeTo };
    }
    const former = sent[Math.floor(roll() * sent.length)];
    if (former && chance > 0.97) yield { record: recordAt(former.sequence, former.ns), completeTo };
    else if (former && chance > 0.955) yield { record: recordAt(former.sequence, former.ns + 1_000), completeTo };
    else if (chance > 0.945) yield { record: { ...recordAt(step, ns), sequence: `x${step}` }, completeTo };
    else if (chance > 0.935) yield { record: { ...recordAt(step + 10_000_000, ns), reading: `${step} o'clock` }, completeTo };
  }
}

const instantAt = (ns: number): Instant => ({ taiS: DAY_TAI_S + Math.floor(ns / 1e9), ps: Math.floor(ns % 1e9) * 1_000 });

/** So many plain triggers of a site, so long one after the other, without the faults of `recordsOf`. */
export const plainRecord = (sequence: number, ns: number): SiteRecord => recordAt(sequence, ns);
