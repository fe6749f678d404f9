import { fixedSiteWorldline } from '#shared/earth/worldline';
import { constantOrientation } from '#shared/earth/earth-orientation';
import { earthRotation } from '#shared/earth/rotation';
import { emptyEvents, type ErrorTables, type EventColumns } from '#shared/relativity/events';
import { timeVarianceNs2 } from '#shared/relativity/time-error';
import { type Vec3 } from '#shared/relativity/vector';
import { type Worldline } from '#shared/relativity/worldline';
import { seededRandom } from '../makers/quiet-network';

/** Events of a quiet network as sorted columns, with what they refer to. */
export interface QuietColumns {
  readonly events: EventColumns;
  readonly errors: ErrorTables;
  readonly worldlines: readonly Worldline[];
}

const EARTH_RADIUS_M = 6_371_000;
/** 2026-01-01T00:00:37 TAI. */
const START_TAI_S = 1_767_225_637;

const site = (random: () => number): Vec3 => {
  const z = 2 * random() - 1;
  const longitude = 2 * Math.PI * random();
  const axisDistance = Math.sqrt(1 - z * z);
  return [EARTH_RADIUS_M * axisDistance * Math.cos(longitude), EARTH_RADIUS_M * axisDistance * Math.sin(longitude), EARTH_RADIUS_M * z];
};

/** Makes the columns: a Poisson process over all sites, each with a clock of its own against one reference. */
export function quietColumns(count: number, siteCount: number, rateHz: number, seed: number): QuietColumns {
  const random = seededRandom(seed);
  const rotation = earthRotation(constantOrientation(-37));
  const places = Array.from({ length: siteCount }, () => site(random));
  const perSite = (value: number): Float64Array => new Float64Array(siteCount).fill(value);
  const errors: ErrorTables = {
    siteDelaySigmaNs: perSite(1.5),
    sitePositionSigmaM: perSite(0.05),
    segmentOffsetSigmaNs: perSite(12),
    segmentRateSigmaNsPerDay: perSite(2),
    segmentCovarianceNs2PerDay: perSite(0),
    segmentReference: new Int32Array(siteCount),
    referenceSigmaNs: new Float64Array([4]),
  };
  const events = { ...emptyEvents(count), count };
  const place = new Float64Array(3);
  let atS = 0;
  for (let row = 0; row < count; row++) {
    atS -= Math.log(1 - random()) / rateHz;
    const at = Math.floor(random() * siteCount);
    const [x, y, z] = places[at] ?? [0, 0, 0];
    events.taiS[row] = START_TAI_S + Math.floor(atS);
    events.ps[row] = Math.floor((atS % 1) * 1e12);
    rotation.placeInto(x, y, z, events.taiS[row] ?? 0, events.ps[row] ?? 0, place, 0);
    events.xM[row] = place[0] ?? 0;
    events.yM[row] = place[1] ?? 0;
    events.zM[row] = place[2] ?? 0;
    events.site[row] = at;
    events.readingSigmaNs[row] = 20;
    events.segment[row] = at;
    events.sinceEpochDays[row] = atS / 86_400;
    events.sigmaNs[row] = Math.sqrt(timeVarianceNs2(events, errors, row));
  }
  return { events, errors, worldlines: places.map((itrsM) => fixedSiteWorldline(itrsM, rotation)) };
}
