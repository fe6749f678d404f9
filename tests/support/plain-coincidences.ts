import fc from 'fast-check';
import { C_M_S } from '#shared/constants';
import { coincidenceSweep } from '#shared/coincidence/batch-finder';
import { type KernelInput } from '#shared/coincidence/kernel';
import { type CoincidenceRule } from '#shared/coincidence/rule';
import { type SeparationBounds, windowBounds } from '#shared/coincidence/window-bounds';
import { type ErrorTables, type EventColumns } from '#shared/relativity/events';
import { type Worldline } from '#shared/relativity/worldline';

/** A site that moves in a straight line, its errors included. */
export interface PlainSite {
  readonly placeM: readonly number[];
  readonly velocityMS: readonly number[];
  readonly delaySigmaNs: number;
  readonly positionSigmaM: number;
}

export interface PlainSegment {
  readonly offsetSigmaNs: number;
  readonly rateSigmaNsPerDay: number;
  /** In [-1, 1]. */
  readonly correlation: number;
  readonly reference: number;
}

export interface PlainNetwork {
  readonly rule: CoincidenceRule;
  readonly limit: number;
  readonly sites: readonly PlainSite[];
  readonly segments: readonly PlainSegment[];
  readonly referenceSigmaNs: readonly number[];
  /** Gamma-betas of the window's frame at the base instant, and how much they change until `spreadPs`. */
  readonly frame: readonly number[];
  readonly frameChange: readonly number[];
  /** All events lie in [0, spreadPs] after the base instant. */
  readonly spreadPs: number;
}

export interface PlainEvent {
  readonly site: number;
  readonly series: string;
  readonly sequence: number;
  /** Whole picoseconds after the base instant. */
  readonly atPs: number;
  readonly readingSigmaNs: number;
  readonly segment: number;
  readonly sinceEpochDays: number;
}

/** What the finder should say: rows of the events in their order. */
export interface Findings {
  readonly sets: readonly (readonly number[])[];
  readonly crowds: readonly { event: number; sites: number; events: number; setsAtLeast: number }[];
}

export const BASE_S = 1_700_000_000;

export const placeOf = (site: PlainSite, atPs: number): number[] =>
  site.placeM.map((x, axis) => x + ((site.velocityMS[axis] ?? 0) * atPs) / 1e12);

/** The window's frame as taken at an event: gamma-betas. */
export const frameAt = (network: PlainNetwork, atPs: number): number[] =>
  network.frame.map((u, axis) => u + ((network.frameChange[axis] ?? 0) * atPs) / network.spreadPs);

/** Time, then site, series, sequence. */
export function inOrder(events: readonly PlainEvent[]): PlainEvent[] {
  return [...events].sort(
    (a, b) => a.atPs - b.atPs || a.site - b.site || (a.series < b.series ? -1 : a.series > b.series ? 1 : a.sequence - b.sequence),
  );
}

const covariance = (s: PlainSegment): number => s.correlation * s.offsetSigmaNs * s.rateSigmaNsPerDay;

/** The plain sum of an event's variances. */
export function sigmaNsOf(network: PlainNetwork, event: PlainEvent): number {
  const site = network.sites[event.site]!;
  const segment = network.segments[event.segment];
  let variance = event.readingSigmaNs ** 2 + site.delaySigmaNs ** 2;
  if (segment) {
    const days = event.sinceEpochDays;
    variance += Math.max(0, segment.offsetSigmaNs ** 2 + 2 * covariance(segment) * days + (segment.rateSigmaNsPerDay * days) ** 2);
    variance += (network.referenceSigmaNs[segment.reference] ?? 0) ** 2;
  }
  return Math.sqrt(variance);
}

export function errorTablesOf(network: PlainNetwork): ErrorTables {
  return {
    siteDelaySigmaNs: Float64Array.from(network.sites, (s) => s.delaySigmaNs),
    sitePositionSigmaM: Float64Array.from(network.sites, (s) => s.positionSigmaM),
    segmentOffsetSigmaNs: Float64Array.from(network.segments, (s) => s.offsetSigmaNs),
    segmentRateSigmaNsPerDay: Float64Array.from(network.segments, (s) => s.rateSigmaNsPerDay),
    segmentCovarianceNs2PerDay: Float64Array.from(network.segments, covariance),
    segmentReference: Int32Array.from(network.segments, (s) => s.reference),
    referenceSigmaNs: Float64Array.from(network.referenceSigmaNs),
  };
}

/** Columns of events that are in order. */
export function columnsOf(network: PlainNetwork, sorted: readonly PlainEvent[]): EventColumns {
  const places = sorted.map((e) => placeOf(network.sites[e.site]!, e.atPs));
  const axis = (k: number): Float64Array => Float64Array.from(places, (place) => place[k] ?? 0);
  return {
    count: sorted.length,
    taiS: Float64Array.from(sorted, (e) => BASE_S + Math.floor(e.atPs / 1e12)),
    ps: Float64Array.from(sorted, (e) => e.atPs % 1e12),
    xM: axis(0),
    yM: axis(1),
    zM: axis(2),
    site: Uint16Array.from(sorted, (e) => e.site),
    readingSigmaNs: Float64Array.from(sorted, (e) => e.readingSigmaNs),
    sigmaNs: Float64Array.from(sorted, (e) => sigmaNsOf(network, e)),
    segment: Int32Array.from(sorted, (e) => e.segment),
    sinceEpochDays: Float64Array.from(sorted, (e) => (e.segment < 0 ? 0 : e.sinceEpochDays)),
    sinceEpochRestDays: new Float64Array(sorted.length),
  };
}

const length = (v: readonly number[]): number => Math.hypot(...v);
const minus = (a: readonly number[], b: readonly number[]): number[] => a.map((x, k) => x - (b[k] ?? 0));

export const hasMovingFrame = (rule: CoincidenceRule): boolean => rule.window.kind === 'fixed' && rule.window.frame !== 'geocentric';

/** The sites' worldlines as far as bounds need them, and how far apart two can be. */
export function linesOf(network: PlainNetwork): {
  readonly worldlines: readonly Worldline[];
  readonly separation: (a: Worldline, b: Worldline) => SeparationBounds;
} {
  const spreadS = network.spreadPs / 1e12;
  const worldlines = network.sites.map((site) => ({
    placeAt: () => [0, 0, 0] as const,
    mostSpeedMS: length(site.velocityMS),
    mostRadiusM: length(site.placeM) + length(site.velocityMS) * spreadS + 1e-6,
  }));
  const siteOf = (line: Worldline): PlainSite => network.sites[worldlines.findIndex((l) => l === line)]!;
  return {
    worldlines,
    separation: (a, b) => {
      const [p, q] = [siteOf(a), siteOf(b)];
      const apart = length(minus(p.placeM, q.placeM));
      const change = length(minus(p.velocityMS, q.velocityMS)) * spreadS + 1e-6;
      return { leastM: Math.max(0, apart - change), mostM: apart + change };
    },
  };
}

export function boundsOf(network: PlainNetwork): KernelInput['bounds'] {
  const { worldlines, separation } = linesOf(network);
  return windowBounds(network.rule.window, worldlines, separation);
}

/** The kernel's input for events that are in order. */
export function kernelInputOf(network: PlainNetwork, sorted: readonly PlainEvent[]): KernelInput {
  const velocities = sorted.flatMap(({ atPs }) => {
    const frame = frameAt(network, atPs);
    return [Math.sqrt(1 + length(frame) ** 2), ...frame];
  });
  return {
    events: columnsOf(network, sorted),
    errors: errorTablesOf(network),
    rule: network.rule,
    bounds: boundsOf(network),
    windowVelocities: hasMovingFrame(network.rule) ? Float64Array.from(velocities) : undefined,
  };
}

/** What the batch finder says. */
export function batchFindings(network: PlainNetwork, sorted: readonly PlainEvent[]): Findings {
  const sets: number[][] = [];
  const crowds: Findings['crowds'][number][] = [];
  coincidenceSweep(kernelInputOf(network, sorted), network.limit)(0, sorted.length, {
    set: (rows, fold) => sets.push(Array.from(rows.subarray(0, fold))),
    crowd: (crowd) => crowds.push(crowd),
  });
  return { sets, crowds };
}

/** The variance of the time difference of two events, its terms summed one by one. */
function plainVarianceNs2(network: PlainNetwork, a: PlainEvent, b: PlainEvent): number {
  const [p, q] = [network.sites[a.site]!, network.sites[b.site]!];
  let variance = a.readingSigmaNs ** 2 + b.readingSigmaNs ** 2 + p.delaySigmaNs ** 2 + q.delaySigmaNs ** 2;
  if (a.segment >= 0 && a.segment === b.segment) {
    return variance + (network.segments[a.segment]!.rateSigmaNsPerDay * (a.sinceEpochDays - b.sinceEpochDays)) ** 2;
  }
  const references: number[] = [];
  for (const { segment, sinceEpochDays: days } of [a, b]) {
    if (segment < 0) continue;
    const s = network.segments[segment]!;
    variance += Math.max(0, s.offsetSigmaNs ** 2 + 2 * covariance(s) * days + (s.rateSigmaNsPerDay * days) ** 2);
    if (s.reference >= 0) references.push(s.reference);
  }
  if (references.length === 2 && references[0] === references[1]) return variance;
  return references.reduce((sum, reference) => sum + network.referenceSigmaNs[reference]! ** 2, variance);
}

/** The definition of near, word by word: `a` comes before `b` in the order of events. */
export function plainNear(network: PlainNetwork, a: PlainEvent, b: PlainEvent): boolean {
  if (a.site === b.site) return false;
  const { window, sigmas } = network.rule;
  const dtNs = (b.atPs - a.atPs) / 1e3;
  const [p, q] = [network.sites[a.site]!, network.sites[b.site]!];
  const dx = minus(placeOf(q, b.atPs), placeOf(p, a.atPs));
  if (window.kind === 'fixed') {
    if (!hasMovingFrame(network.rule)) return dtNs <= window.widthNs;
    const frame = frameAt(network, a.atPs);
    const gamma = Math.sqrt(1 + length(frame) ** 2);
    const along = frame.reduce((sum, u, axis) => sum + u * dx[axis]!, 0);
    return Math.abs(gamma * dtNs - (along / C_M_S) * 1e9) <= window.widthNs;
  }
  const positionNs2 = ((p.positionSigmaM ** 2 + q.positionSigmaM ** 2) * 1e18) / C_M_S ** 2;
  const sigmaNs = Math.sqrt(plainVarianceNs2(network, a, b) + positionNs2);
  return dtNs <= (length(dx) * 1e9) / (window.speedC * C_M_S) + window.marginNs + sigmas * sigmaNs;
}

/**
 * Every set of mutually near events, one by one, kept when no other event is near all of it. Nothing is skipped, so this is for some
 * dozens of events.
 */
export function plainFindings(network: PlainNetwork, sorted: readonly PlainEvent[]): Findings {
  const near = sorted.map((a, i) => sorted.map((b, j) => i !== j && (i < j ? plainNear(network, a, b) : plainNear(network, b, a))));
  const isNear = (i: number, j: number): boolean => near[i]![j]!;
  const rows = sorted.map((_, row) => row);
  const sets: number[][] = [];
  const crowds: Findings['crowds'][number][] = [];
  rows.forEach((first) => {
    const begun: number[][] = [];
    const extend = (members: number[]): void => {
      const fits = rows.filter((row) => members.every((member) => isNear(member, row)));
      if (fits.length === 0 && members.length >= network.rule.minimumFold) begun.push(members);
      for (const row of fits) if (row > members.at(-1)!) extend([...members, row]);
    };
    extend([first]);
    if (begun.length <= network.limit) {
      sets.push(...begun);
      return;
    }
    const around = rows.filter((row) => row === first || (row > first && isNear(first, row)));
    const sites = new Set(around.map((row) => sorted[row]!.site)).size;
    crowds.push({ event: first, sites, events: around.length, setsAtLeast: network.limit + 1 });
  });
  return { sets, crowds };
}

const spread = (min: number, max: number): fc.Arbitrary<number> =>
  fc.integer({ min: 0, max: 1e6 }).map((k) => min + ((max - min) * k) / 1e6);
const vector = (size: number): fc.Arbitrary<number[]> => fc.array(spread(-size, size), { minLength: 3, maxLength: 3 });

/** What kinds of networks are drawn, with the scales that make their windows overlap. */
interface Kind {
  readonly window: fc.Arbitrary<CoincidenceRule['window']>;
  readonly placeM: number;
  readonly speedMS: number;
  readonly windowNs: number;
}

const KINDS: readonly Kind[] = [
  // Detectors on the Earth under the light-time rule.
  {
    window: fc.record({ kind: fc.constant('light-time'), speedC: fc.constantFrom(1, 0.7), marginNs: fc.constantFrom(0, 5, 1e6) }),
    placeM: 4e6,
    speedMS: 500,
    windowNs: 2e7,
  },
  // A signal hardly faster than the platforms, and one that is slower than some.
  {
    window: fc.record({ kind: fc.constant('light-time'), speedC: fc.constantFrom(1e-5, 3e-5), marginNs: fc.constantFrom(0, 1e8) }),
    placeM: 3e3,
    speedMS: 1500,
    windowNs: 1e9,
  },
  // Neighbours in one hall, where clock errors decide.
  {
    window: fc.record({ kind: fc.constant('light-time'), speedC: fc.constant(1), marginNs: fc.constantFrom(0, 10) }),
    placeM: 3,
    speedMS: 0,
    windowNs: 100,
  },
  {
    window: fc.record({ kind: fc.constant('fixed'), widthNs: fc.constantFrom(0, 10, 1e5), frame: fc.constant('geocentric') }),
    placeM: 4e6,
    speedMS: 500,
    windowNs: 1e5,
  },
  {
    window: fc.record({ kind: fc.constant('fixed'), widthNs: fc.constantFrom(0, 1e4, 1e7), frame: fc.constant('moving') }),
    placeM: 3e6,
    speedMS: 500,
    windowNs: 1e7,
  },
];

/** Times on a grid, so that many coincide, and some a hair beside it. */
const STEPS = 24;
const BESIDE_PS = [0, 0, 0, 1, 777_000];

interface Draw {
  readonly least?: number;
  readonly most?: number;
  /** Widths of a window over which the events are spread. */
  readonly windows?: readonly number[];
  readonly readingSigmaNs?: readonly number[];
}

/** A random network and some events of it, in order, no two of one identity. */
export function networkAndEvents(draw: Draw = {}): fc.Arbitrary<{ network: PlainNetwork; events: PlainEvent[] }> {
  const { least = 5, most = 40, windows: widths = [1, 3, 10], readingSigmaNs = [0, 0, 1, 30] } = draw;
  return fc.tuple(fc.constantFrom(...KINDS), fc.constantFrom(...widths)).chain(([kind, windows]) => {
    const spreadPs = windows * kind.windowNs * 1e3;
    const still = fc.constant([0, 0, 0]);
    const site = fc.record({
      placeM: fc.oneof(still, vector(kind.placeM)),
      velocityMS: fc.oneof(still, vector(kind.speedMS)),
      delaySigmaNs: fc.constantFrom(0, 2),
      positionSigmaM: fc.constantFrom(0, 0.5),
    });
    // A fleet keeps its distances while it moves, so that its bounds are tight.
    const fleetMS = fc.option(vector(kind.speedMS));
    const network = fc.record({
      rule: fc.record({
        code: fc.constant('rule'),
        minimumFold: fc.integer({ min: 2, max: 4 }),
        sigmas: fc.constantFrom(0, 1, 3),
        window: kind.window,
      }),
      limit: fc.constantFrom(1, 2, 5, 30, 10_000),
      sites: fc
        .tuple(fc.array(site, { minLength: 2, maxLength: 6, size: 'max' }), fleetMS)
        .map(([sites, velocityMS]) => (velocityMS ? sites.map((one) => ({ ...one, velocityMS })) : sites)),
      segments: fc.array(
        fc.record({
          offsetSigmaNs: fc.constantFrom(0, 12),
          rateSigmaNsPerDay: fc.constantFrom(0, 5),
          correlation: fc.constantFrom(-1, 0, 0.5),
          reference: fc.integer({ min: -1, max: 1 }),
        }),
        { minLength: 3, maxLength: 3 },
      ),
      referenceSigmaNs: fc.constant([4, 0]),
      frame: fc.oneof(still, vector(1)),
      frameChange: fc.oneof(still, vector(0.5)),
      spreadPs: fc.constant(spreadPs + 1e6),
    });
    return network.chain((made) =>
      fc
        .uniqueArray(
          fc.record({
            site: fc.integer({ min: 0, max: made.sites.length - 1 }),
            series: fc.constantFrom('', 'b'),
            sequence: fc.integer({ min: 0, max: 120 }),
            atPs: fc
              .tuple(fc.integer({ min: 0, max: windows * STEPS }), fc.constantFrom(...BESIDE_PS))
              .map(([step, besidePs]) => Math.round((kind.windowNs / STEPS) * 1e3) * step + besidePs),
            readingSigmaNs: fc.constantFrom(...readingSigmaNs),
            segment: fc.integer({ min: -1, max: 2 }),
            sinceEpochDays: fc.constantFrom(0, 0.5, 3),
          }),
          { minLength: least, maxLength: most, size: 'max', selector: (e) => `${e.site}:${e.series}:${e.sequence}` },
        )
        .map((events) => ({ network: made, events: inOrder(events) })),
    );
  });
}
