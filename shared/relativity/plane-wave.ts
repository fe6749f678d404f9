import { C_M_S } from '../constants';
import { type Outcome, problemOf, valueOf } from '../outcome';
import { add, cross, dot, norm, scale, subtract, type Vec3 } from './vector';

/** Sine of the angle between two baselines below which rounding decides the plane. */
const IN_LINE = 1e-12;

/**
 * How much later a plane wave at speed c reaches one place than another.
 *
 * @param toSource unit vector to the source
 * @param dxM step from the first place to the second, metres, same axes; both places taken at rest while the wave passes
 * @returns seconds from the first arrival to the second, -n . dx / c; negative when the second is nearer the source
 * @remarks source: Fairhurst 2009, New J. Phys. 11, 123006, sect. 2
 */
export function planeWaveDelayS(toSource: Vec3, dxM: Vec3): number {
  return -dot(toSource, dxM) / C_M_S;
}

/** The directions from which a plane wave can have come, seen from two sites: a ring about the baseline from the first to the second. */
export interface Ring {
  readonly halfAngleRad: number;
  /** Standard error to first order; Infinity for a ring of angle 0 or pi, where first order says nothing. */
  readonly sigmaRad: number;
}

/**
 * The ring of directions of a plane wave that two sites recorded.
 *
 * @param dtS arrival at the second site less arrival at the first, seconds, with its standard error
 * @param distanceM between the sites, metres, with its standard error
 * @returns half-angle arccos(-c dt / d) from the direction first to second site, and its standard error; or the problem `no-plane-wave`
 * when |c dt| exceeds the distance
 * @remarks source: Fairhurst 2009, New J. Phys. 11, 123006, sect. 2; the error by linear propagation
 */
export function ringOf(dtS: number, distanceM: number, sigmaDtS = 0, sigmaDistanceM = 0): Outcome<Ring> {
  const ctM = C_M_S * dtS;
  if (!(Math.abs(ctM) <= distanceM) || distanceM === 0) return noPlaneWave(`${ctM} m of light-time along a baseline of ${distanceM} m`);
  const acrossM = Math.sqrt((distanceM - ctM) * (distanceM + ctM));
  const sigmaM = Math.hypot(C_M_S * sigmaDtS, (ctM / distanceM) * sigmaDistanceM);
  return valueOf({ halfAngleRad: Math.atan2(acrossM, -ctM), sigmaRad: sigmaM === 0 ? 0 : sigmaM / acrossM });
}

/** The step to another site, and how much later the wave reached it. */
export interface Arrival {
  readonly dxM: Vec3;
  readonly dtS: number;
}

/**
 * The two directions from which a plane wave can have come, seen from three sites: mirror images in the plane of the sites.
 *
 * @param second step (metres) and delay (seconds) from the first site to the second
 * @param third the same to the third
 * @returns unit vectors to the source; the first on the side of second x third. Or the problem `no-plane-wave` when the delays fit no plane
 * wave at speed c, `sites-in-line` when the three sites lie on one line
 * @remarks source: Fairhurst 2009, New J. Phys. 11, 123006, sect. 2: the part in the plane solves n . dx = -c dt for both baselines
 */
export function directionsOfThreeSites(second: Arrival, third: Arrival): Outcome<readonly [Vec3, Vec3]> {
  const normal = cross(second.dxM, third.dxM);
  const area = norm(normal);
  if (area <= IN_LINE * norm(second.dxM) * norm(third.dxM)) {
    return problemOf('sites-in-line', 'sites', 'three sites on one line; three sites that span a plane are needed');
  }
  const up = scale(1 / area, normal);
  const inPlane = scale(-C_M_S / area, add(scale(second.dtS, cross(third.dxM, up)), scale(third.dtS, cross(up, second.dxM))));
  const length = norm(inPlane);
  if (!(length <= 1)) return noPlaneWave(`delays that ask for a direction of length ${length} in the plane of the sites`);
  const height = scale(Math.sqrt((1 - length) * (1 + length)), up);
  return valueOf([add(inPlane, height), subtract(inPlane, height)]);
}

function noPlaneWave(found: string): Outcome<never> {
  return problemOf('no-plane-wave', 'dt', `${found}; a plane wave at the speed of light delays by at most the distance over c`);
}
