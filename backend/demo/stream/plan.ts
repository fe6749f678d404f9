import { unitFromAngles } from '#shared/relativity/direction';
import { unitOf, type Vec3 } from '#shared/relativity/vector';
import { randomFrom, type Random } from './random';

/** The stream is made slice by slice, each from the seed and its number alone; nothing happens in two of them. */
export const SLICE_S = 10;

const EDGE_S = 0.05; // a front crosses the Earth within 43 ms, and not over a slice's end

/** Triggers a second that nothing else has to do with. */
const UNRELATED_HZ: Readonly<Record<string, number>> = {
  TRK: 0.25,
  TRL: 0.25,
  SVB: 0.25,
  SVH: 0.25,
  OMB: 0.25,
  ILC: 1.6, // the noisy one
  GIL: 0.25,
  KTS: 0.25,
};
const CODES = Object.keys(UNRELATED_HZ);

const FRONTS_A_SLICE = 1.3;
const GREAT_SHARE = 0.13; // of the fronts, about one a minute; hardly a site misses them
const SEEN_BY_A_SITE = 0.45;
const SEEN_WHEN_GREAT = 0.97;

/** Where fronts come from more often than by chance: right ascension, declination, their share. None is a place of the real sky. */
const SOURCES = [
  { name: 'the Lantern', toward: { longitudeDeg: 214, latitudeDeg: 38 }, share: 0.3 },
  { name: 'the Ford', toward: { longitudeDeg: 71, latitudeDeg: -52 }, share: 0.2 },
] as const;

const DISTURBANCES_A_SLICE = 0.6;
/** Between which sites something runs through the ground, and how fast. */
const NEIGHBOURS = [
  { from: 'TRK', to: 'TRL', leastC: 0.05, mostC: 0.3 },
  { from: 'SVB', to: 'SVH', leastC: 0.15, mostC: 0.7 },
] as const;

const PULSE_SEEN = 0.95;
const MALFORMED_SHARE = 0.08; // of the slices
const LATE_SHARE = 0.08;

/** A plane front at the speed of light. */
export interface Front {
  readonly kind: 'front';
  /** When it passes the geocentre, seconds of the slice. */
  readonly passesS: number;
  /** Unit vector to where it comes from, GCRS axes. */
  readonly toSource: Vec3;
  readonly seen: readonly { readonly site: string; readonly amplitude: number }[];
}

/** Something that runs from one site to its neighbour, slower than light. */
export interface Disturbance {
  readonly kind: 'disturbance';
  readonly startsS: number;
  readonly from: string;
  readonly to: string;
  readonly speedC: number;
  readonly amplitude: number;
}

/** A trigger by itself. */
export interface Unrelated {
  readonly kind: 'unrelated';
  readonly site: string;
  readonly atS: number;
  readonly amplitude: number;
}

/** A pulse of the emitter, by its number, where it is received. */
export interface Pulse {
  readonly kind: 'pulse';
  readonly number: number;
  readonly sites: readonly string[];
}

/** What is to happen in a slice. */
export interface Plan {
  readonly happenings: readonly (Front | Disturbance | Unrelated | Pulse)[];
  /** Which record of the slice is written badly, as a share of them, and how; absent for none. */
  readonly malformed?: { readonly which: number; readonly how: number };
  /** Which record of Kittsun Lake comes late, as a share of them, and by how much; absent for none. */
  readonly late?: { readonly which: number; readonly byS: number };
}

/**
 * Plans a slice of the stream.
 *
 * @param seed the demo's
 * @param slice its number, 0 the first
 * @param periodS between two pulses of the emitter
 */
export function planSlice(seed: number, slice: number, periodS: number): Plan {
  const random = randomFrom(seed, 1, slice);
  const malformed = random.even() < MALFORMED_SHARE ? { which: random.even(), how: random.even() } : undefined;
  const late = random.even() < LATE_SHARE ? { which: random.even(), byS: random.between(8, 20) } : undefined;
  return {
    happenings: [
      ...CODES.flatMap((site) => unrelated(site, random)),
      ...several(random.count(FRONTS_A_SLICE), () => front(random)),
      ...several(random.count(DISTURBANCES_A_SLICE), () => disturbance(random)),
      ...pulses(slice, periodS, random),
    ],
    ...(malformed && { malformed }),
    ...(late && { late }),
  };
}

const several = <T>(times: number, make: () => T): T[] => Array.from({ length: times }, make);

/** Many weak ones, few strong ones. */
const weak = (random: Random): number => 1 - 1.5 * Math.log(1 - random.even());

const unrelated = (site: string, random: Random): Unrelated[] =>
  several(random.count((UNRELATED_HZ[site] ?? 0) * SLICE_S), () => ({
    kind: 'unrelated',
    site,
    atS: random.between(0.001, SLICE_S - 0.001),
    amplitude: weak(random),
  }));

function front(random: Random): Front {
  const great = random.even() < GREAT_SHARE;
  const toSource = direction(random);
  const strength = great ? random.between(40, 120) : random.between(5, 30);
  return {
    kind: 'front',
    passesS: random.between(EDGE_S, SLICE_S - EDGE_S),
    toSource,
    seen: CODES.filter(() => random.even() < (great ? SEEN_WHEN_GREAT : SEEN_BY_A_SITE)).map((site) => ({
      site,
      amplitude: strength * random.between(0.7, 1.3),
    })),
  };
}

function direction(random: Random): Vec3 {
  let left = random.even();
  for (const { toward, share } of SOURCES) {
    if (left < share) return unitFromAngles(toward);
    left -= share;
  }
  return unitOf([random.normal(), random.normal(), random.normal()]);
}

function disturbance(random: Random): Disturbance {
  const { from, to, leastC, mostC } = NEIGHBOURS[random.even() < 0.5 ? 0 : 1];
  return {
    kind: 'disturbance',
    startsS: random.between(EDGE_S, SLICE_S - EDGE_S),
    from,
    to,
    speedC: random.between(leastC, mostC),
    amplitude: random.between(4, 15),
  };
}

function pulses(slice: number, periodS: number, random: Random): Pulse[] {
  if ((slice * SLICE_S) % periodS !== 0) return [];
  return [{ kind: 'pulse', number: (slice * SLICE_S) / periodS, sites: CODES.filter(() => random.even() < PULSE_SEEN) }];
}
