import { type NetworkFile } from './network-file';
import { fixedSiteWorldline, separationBounds } from '../earth/worldline';
import { geodeticToItrs } from '../earth/ellipsoid';
import { type EarthRotation } from '../earth/rotation';
import { type CoincidenceRule } from '../coincidence/rule';
import { type Outcome, problemOf, type Problem, valueOf } from '../outcome';
import { type FrameDefinition, GEOCENTRIC_CODE } from '../relativity/frame-definition';
import { type FrameResolver, resolveFrames } from '../relativity/frame-resolver';
import { type Vec3 } from '../relativity/vector';
import { prepareClock } from '../time/correction';
import { EXACT_CLOCK } from '../time/clock-record';
import { compareInstants, type Instant } from '../time/instant';
import { type LeapSecondTable } from '../time/leap-seconds';
import { type Network, type NetworkSite } from '../reconcile/network';
import { compareText } from '../compare-text';
import { type ClockRows, errorTablesOf, readClocks } from './network-clocks';
import { frameDefinitions } from './network-frames';
import { timeAt } from './network-times';

/** What a network rests on besides its file. */
export interface NetworkGround {
  readonly leapSeconds: LeapSecondTable;
  /** Made for the start of the run, since UT1 - TAI is taken there where no table is loaded. */
  readonly rotationFor: (runFrom: Instant) => EarthRotation;
  /** Velocity of the Earth in the solar-system barycentric frame, ICRS axes, m/s. */
  readonly earthBarycentricVelocityMS: (instant: Instant) => Vec3;
}

/** The first code that stands twice in a list, as a problem at its second place. */
function twice(list: readonly { readonly code: string }[] | undefined, path: string): ReturnType<typeof problemOf> | undefined {
  const seen = new Set<string>();
  for (const [at, { code }] of (list ?? []).entries()) {
    if (seen.has(code))
      return problemOf('network-twice', `${path}[${at}].code`, `is "${code}" for the second time; it must be a code of its own`);
    seen.add(code);
  }
  return undefined;
}

/** The first event that stands twice in one selection. */
function eventNamedTwice(file: NetworkFile): ReturnType<typeof problemOf> | undefined {
  for (const [at, { events }] of (file.selections ?? []).entries()) {
    const again = events.findIndex((name, k) => events.indexOf(name) !== k);
    if (again >= 0)
      return problemOf(
        'network-twice',
        `selections[${at}].events[${again}]`,
        `is "${events[again] ?? ''}" for the second time; it must be an event that the selection does not name yet`,
      );
  }
  return undefined;
}

/** The run's times and the origin. */
function readRun(file: NetworkFile, table: LeapSecondTable): Outcome<{ from: Instant; to: Instant | undefined; origin: Instant }> {
  const warnings: Problem[] = [];
  const from = timeAt(file.run.from, 'run.from', table);
  if (!from.ok) return from;
  const to = file.run.to === undefined ? valueOf(undefined) : timeAt(file.run.to, 'run.to', table);
  if (!to.ok) return to;
  const origin = file.origin?.time === undefined ? from : timeAt(file.origin.time, 'origin.time', table);
  if (!origin.ok) return origin;
  if (to.value && compareInstants(to.value, from.value) < 0)
    return problemOf(
      'network-run',
      'run.to',
      `is ${JSON.stringify(file.run.to)}; it must be a time not before run.from (${file.run.from})`,
    );
  warnings.push(...from.warnings, ...to.warnings, ...origin.warnings);
  return valueOf({ from: from.value, to: to.value, origin: origin.value }, warnings);
}

function readSites(file: NetworkFile, clocks: ClockRows, rotation: EarthRotation): Outcome<readonly NetworkSite[]> {
  const sites: NetworkSite[] = [];
  for (const [at, site] of file.sites.entries()) {
    const record = site.clock === 'exact' ? { record: EXACT_CLOCK, firstRow: -1 } : clocks.byCode.get(site.clock);
    if (!record) {
      const known = ['exact', ...clocks.byCode.keys()].map((code) => `"${code}"`).join(', ');
      return problemOf('network-clock', `sites[${at}].clock`, `is "${site.clock}"; it must be one of ${known}`);
    }
    const { geodetic, itrs_m } = site.position;
    const itrsM: Vec3 = geodetic
      ? geodeticToItrs({ latitudeDeg: geodetic.latitude_deg, longitudeDeg: geodetic.longitude_deg, heightM: geodetic.height_m ?? 0 })
      : (itrs_m ?? [0, 0, 0]);
    sites.push({
      code: site.code,
      name: site.name ?? '',
      scale: site.scale,
      itrsM,
      worldline: fixedSiteWorldline(itrsM, rotation),
      readingSigmaNs: site.reading_sigma_ns,
      clock: prepareClock(record.record, site.delay_ns ?? 0),
      firstSegmentRow: record.firstRow,
    });
  }
  return valueOf(sites.sort((a, b) => compareText(a.code, b.code)));
}

function readRule(file: NetworkFile, frameCodes: ReadonlySet<string>): Outcome<CoincidenceRule> {
  const { code, minimum_fold, sigmas, window } = file.rule;
  if (window.kind === 'fixed' && window.frame !== undefined && !frameCodes.has(window.frame)) {
    const known = [...frameCodes].map((frame) => `"${frame}"`).join(', ');
    return problemOf('network-frame', 'rule.window.frame', `is "${window.frame}"; it must be one of ${known}`);
  }
  return valueOf({
    code,
    minimumFold: minimum_fold ?? 2,
    sigmas: sigmas ?? 3,
    window:
      window.kind === 'light-time'
        ? { kind: 'light-time', speedC: window.speed_c ?? 1, marginNs: window.margin_ns ?? 0 }
        : { kind: 'fixed', widthNs: window.width_ns, frame: window.frame ?? GEOCENTRIC_CODE },
  });
}

/**
 * Makes a network from its file: what the parts refer to is looked up, times are read, clocks, places and frames are made ready.
 *
 * @param file a file whose form is right
 * @param ground leap seconds, the Earth's rotation and its velocity
 * @returns the network, with warnings of expired tables; or the first problem, at the path of the field that caused it
 */
export function buildNetwork(file: NetworkFile, ground: NetworkGround): Outcome<Network> {
  const doubled =
    twice(file.references, 'references') ??
    twice(file.clocks, 'clocks') ??
    twice(file.sites, 'sites') ??
    twice(file.selections, 'selections');
  if (doubled) return doubled;
  const namedTwice = eventNamedTwice(file);
  if (namedTwice) return namedTwice;
  const run = readRun(file, ground.leapSeconds);
  if (!run.ok) return run;
  const clocks = readClocks(file, ground.leapSeconds);
  if (!clocks.ok) return clocks;
  const sites = readSites(file, clocks.value, ground.rotationFor(run.value.from));
  if (!sites.ok) return sites;
  const frames = readFrames(file, sites.value, run.value.origin, ground);
  if (!frames.ok) return frames;
  const rule = readRule(file, new Set(frames.value.codes));
  if (!rule.ok) return rule;
  return valueOf(
    {
      name: file.network,
      runName: file.run.name ?? '',
      ...run.value,
      sites: sites.value,
      errors: errorTablesOf(file, sites.value, clocks.value),
      frames: frames.value,
      rule: rule.value,
      separation: separationBounds,
      neighboursWithinNs: file.neighbours?.within_ns,
      selections: file.selections ?? [],
    },
    [...run.warnings, ...clocks.warnings],
  );
}

function readFrames(
  file: NetworkFile,
  sites: readonly NetworkSite[],
  originInstant: Instant,
  ground: NetworkGround,
): Outcome<FrameResolver> {
  const definitions: Outcome<readonly FrameDefinition[]> = frameDefinitions(file);
  if (!definitions.ok) return definitions;
  const byCode = new Map(sites.map((site) => [site.code, site]));
  return resolveFrames(definitions.value, {
    originInstant,
    siteCodes: new Set(byCode.keys()),
    placeAt: (code, instant) => byCode.get(code)?.worldline.placeAt(instant) ?? [0, 0, 0],
    earthBarycentricVelocityMS: ground.earthBarycentricVelocityMS,
  });
}
