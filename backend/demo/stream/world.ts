import { type NetworkFile } from '#shared/contract/network-file';
import { C_M_S } from '#shared/constants';
import { constantOrientation } from '#shared/earth/earth-orientation';
import { geodeticToItrs } from '#shared/earth/ellipsoid';
import { earthRotation } from '#shared/earth/rotation';
import { fixedSiteWorldline } from '#shared/earth/worldline';
import { norm, subtract, type Vec3 } from '#shared/relativity/vector';
import { type Worldline } from '#shared/relativity/worldline';
import { taiMinusUtcAt, type LeapSecondTable } from '#shared/time/leap-seconds';
import { type Scale } from '#shared/time/scales';
import { demoNetworkFile, emitterOf, type DemoEmitter } from '../scenario';
import { randomFrom } from './random';
import { trueClocks, type TrueClock } from './true-clock';

const TRUTH = 0; // which stream of draws the world is made from; the slices count from 1

/** A site as it truly is: off from what the network file states by draws of the errors that stand there. */
export interface TrueSite {
  readonly code: string;
  readonly scale: Scale;
  readonly itrsM: Vec3;
  readonly worldline: Worldline;
  readonly delayNs: number;
  readonly clock: TrueClock;
  /** Of a reading that states none; undefined where the resolution says it. */
  readonly readingSigmaNs: number | undefined;
}

/** What the demo's stream is made from. */
export interface World {
  readonly seed: number;
  readonly firstTaiS: number;
  readonly leapSeconds: LeapSecondTable;
  readonly sites: ReadonlyMap<string, TrueSite>;
  readonly emitter: DemoEmitter;
  readonly emitterWorldline: Worldline;
}

/**
 * Makes the world of a demo.
 *
 * @param seed a whole number; the same one makes the same world
 * @param firstTaiS the first second of the stream
 * @param leapSeconds for the sites that write UTC
 */
export function makeWorld(seed: number, firstTaiS: number, leapSeconds: LeapSecondTable): World {
  const file = demoNetworkFile(firstTaiS);
  const emitter = emitterOf(firstTaiS);
  const random = randomFrom(seed, TRUTH);
  const clockOf = trueClocks(file, leapSeconds, random);
  const rotation = earthRotation(constantOrientation(-taiMinusUtcAt(leapSeconds, { taiS: firstTaiS })));
  const worldlineAt = (itrsM: Vec3): Worldline => fixedSiteWorldline(itrsM, rotation);
  const sites = file.sites.map((site): TrueSite => {
    const sigmaM = site.position_sigma_m ?? 0;
    const [xM, yM, zM] = statedItrsM(site);
    const itrsM: Vec3 = [xM + sigmaM * random.normal(), yM + sigmaM * random.normal(), zM + sigmaM * random.normal()];
    return {
      code: site.code,
      scale: site.scale,
      itrsM,
      worldline: worldlineAt(itrsM),
      delayNs: (site.delay_ns ?? 0) + (site.delay_sigma_ns ?? 0) * random.normal(),
      clock: clockOf(site.clock),
      readingSigmaNs: site.reading_sigma_ns,
    };
  });
  return {
    seed,
    firstTaiS,
    leapSeconds,
    sites: new Map(sites.map((site) => [site.code, site])),
    emitter,
    emitterWorldline: worldlineAt(geodeticToItrs(emitter.geodetic)),
  };
}

/** Seconds that light takes from one site to another through the Earth. */
export const lightTimeS = (from: TrueSite, to: TrueSite): number => norm(subtract(to.itrsM, from.itrsM)) / C_M_S;

function statedItrsM({ position: { geodetic, itrs_m } }: NetworkFile['sites'][number]): Vec3 {
  if (!geodetic) return itrs_m ?? [0, 0, 0];
  return geodeticToItrs({ latitudeDeg: geodetic.latitude_deg, longitudeDeg: geodetic.longitude_deg, heightM: geodetic.height_m ?? 0 });
}
