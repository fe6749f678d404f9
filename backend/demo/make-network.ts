import { type FrameMotionStated } from '#shared/contract/frame-routes';
import { type NetworkFile } from '#shared/contract/network-file';
import { type RuleWindowGiven } from '#shared/contract/rule-routes';
import { type Instant } from '#shared/time/instant';
import { addSegment, makeClock } from '../clocks/make-clock';
import { makeEmitter } from '../clocks/make-emitter';
import { makeReference } from '../clocks/make-reference';
import { makeFrame } from '../frames/make-frame';
import { makeNetwork } from '../networks/make-network';
import { makeRun } from '../networks/make-run';
import { type Making } from '../networks/note-setup';
import { makeRule, setActive } from '../rules/make-rule';
import { makeSite } from '../sites/make-site';
import { timeReader } from '../tables/times-given';
import { demoNetworkFile, emitterOf, NAMES, NETWORK_CODE, PINNED_FRAMES, RULES, type DemoRule } from './scenario';

/** What the demo's people and keys are for. */
export interface DemoNetwork {
  readonly networkId: number;
  /** The ids of the sites by their codes. */
  readonly siteIds: ReadonlyMap<string, number>;
}

type Codes = ReadonlyMap<string, number>;

/**
 * Makes the demo's network and all that it is set up from, by what the API makes them with.
 *
 * @param firstTaiS the first second of its stream
 */
export function makeDemoNetwork(making: Making, firstTaiS: number): DemoNetwork {
  const file = demoNetworkFile(firstTaiS);
  const { read } = timeReader(making.tx);
  const origin = read(file.origin?.time ?? file.run.from, 'origin.time');
  const networkId = makeNetwork(making, { code: NETWORK_CODE, name: file.network, origin });
  makeRun(making, { networkId, code: 'first', name: file.run.name, from: read(file.run.from, 'run.from'), to: null });
  const references = idsOf(file.references ?? [], ({ code, sigma_ns }) =>
    makeReference(making, { networkId, code, name: NAMES[code], sigmaNs: sigma_ns ?? 0 }),
  );
  const clocks = idsOf(file.clocks ?? [], ({ code, segments }) => {
    const clockId = makeClock(making, { networkId, code, name: NAMES[code] });
    for (const segment of segments) addSegment(making, clockId, segmentValues(segment, references, read));
    return clockId;
  });
  const siteIds = idsOf(
    file.sites,
    (site) => makeSite(making, { networkId, code: site.code, name: site.name, state: stateOf(site, clocks) }).id,
  );
  const { geodetic, reference, firstTaiS: pulseTaiS, periodS, ...emitter } = emitterOf(firstTaiS);
  makeEmitter(making, {
    ...emitter,
    networkId,
    place: geodetic,
    scale: 'TAI',
    schedule: { first: { taiS: pulseTaiS, ps: 0 }, periodS },
    referenceId: idOf(references, reference),
  });
  const frames = new Map<string, number>();
  for (const frame of file.frames ?? []) {
    const { code, name, parent } = frame;
    const pinned = PINNED_FRAMES.findIndex((one) => one === code) + 1;
    const parentId = parent === undefined ? null : idOf(frames, parent);
    frames.set(
      code,
      makeFrame(making, { networkId, code, name, parentId, pinned: pinned === 0 ? null : pinned, motion: motionOf(frame, siteIds) }),
    );
  }
  for (const { code, name, minimum_fold: minimumFold, sigmas, window, sites } of RULES) {
    const state = { minimumFold, sigmas, window: windowOf(window), siteIds: sites?.map((site) => idOf(siteIds, site)) };
    setActive(making, makeRule(making, { networkId, code, name, state }), true);
  }
  return { networkId, siteIds };
}

const idsOf = <T extends { readonly code: string }>(things: readonly T[], make: (thing: T) => number): Codes =>
  new Map(things.map((thing) => [thing.code, make(thing)]));

function idOf(ids: Codes, code: string): number {
  const id = ids.get(code);
  if (id === undefined) throw new Error(`the demo has no ${code}`);
  return id;
}

type FileSegment = NonNullable<NetworkFile['clocks']>[number]['segments'][number];

function segmentValues(segment: FileSegment, references: Codes, read: (text: string, where: string) => Instant) {
  return {
    from: read(segment.from, 'from'),
    at: read(segment.at ?? segment.from, 'at'),
    offsetNs: segment.offset_ns,
    offsetSigmaNs: segment.offset_sigma_ns,
    rateNsPerDay: segment.rate_ns_per_day ?? 0,
    rateSigmaNsPerDay: segment.rate_sigma_ns_per_day ?? 0,
    covarianceNs2PerDay: segment.covariance_ns2_per_day,
    referenceId: segment.reference === undefined ? null : idOf(references, segment.reference),
    origin: 'certificate' as const,
    note: 'Of the demo',
  };
}

function stateOf(site: NetworkFile['sites'][number], clocks: Codes) {
  const { geodetic } = site.position;
  if (!geodetic) throw new Error(`the demo's site ${site.code} has no geodetic place`);
  const { latitude_deg: latitudeDeg, longitude_deg: longitudeDeg, height_m: heightM = 0 } = geodetic;
  return {
    from: null,
    scale: site.scale,
    clockId: idOf(clocks, site.clock),
    exactClock: false,
    position: { geodetic: { latitudeDeg, longitudeDeg, heightM } },
    positionSigmaM: site.position_sigma_m ?? 0,
    delayNs: site.delay_ns ?? 0,
    delaySigmaNs: site.delay_sigma_ns ?? 0,
    readingSigmaNs: site.reading_sigma_ns ?? null,
    origin: 'survey' as const,
    note: '',
  };
}

type FileFrame = NonNullable<NetworkFile['frames']>[number];

function motionOf({ velocity }: FileFrame, siteIds: Codes): FrameMotionStated {
  if (!velocity) return { kind: 'barycentric' };
  const { beta, speed_c: speedC, speed_km_s: speedKmS, rapidity, toward } = velocity;
  if (beta) return { kind: 'velocity', betaC: beta };
  if (toward?.baseline) {
    const [from, to] = toward.baseline;
    return { kind: 'toward-baseline', speedC, speedKmS, rapidity, fromSiteId: idOf(siteIds, from), toSiteId: idOf(siteIds, to) };
  }
  return { kind: 'velocity', speedC, speedKmS, rapidity, toward: { raDeg: toward?.ra_deg ?? 0, decDeg: toward?.dec_deg ?? 0 } };
}

function windowOf(window: DemoRule['window']): RuleWindowGiven {
  if (window.kind === 'light-time') return { kind: 'light-time', speedC: window.speed_c, marginNs: window.margin_ns };
  return { kind: 'fixed', widthNs: window.width_ns };
}
