import { C_M_S } from '../constants';
import { galacticToIcrs, unitFromAngles } from './direction';
import { type FrameDefinition, GEOCENTRIC_CODE } from './frame-definition';
import { opposite, scale, type Vec3 } from './vector';
import { fourVelocity } from './velocity';

/**
 * The Sun's velocity against the cosmic microwave background: speed in km/s (standard error 0.11), galactic longitude and latitude of where
 * it goes, in degrees (0.011 and 0.005). Source: Planck Collaboration 2020, Astron. Astrophys. 641, A1, table 2.
 */
export const SUN_AGAINST_BACKGROUND = { speedKmS: 369.82, galacticLongitudeDeg: 264.021, galacticLatitudeDeg: 48.253 } as const;

/** Unit vector, ICRS, toward which the Sun moves against the background; the background's frame moves the other way. */
export const SUN_APEX: Vec3 = galacticToIcrs(
  unitFromAngles({ longitudeDeg: SUN_AGAINST_BACKGROUND.galacticLongitudeDeg, latitudeDeg: SUN_AGAINST_BACKGROUND.galacticLatitudeDeg }),
);

/** The ready-made frame of the solar-system barycentre, taken at each event. */
export const BARYCENTRIC_FRAME: FrameDefinition = {
  code: 'bary',
  name: 'Solar-system barycentre',
  parent: GEOCENTRIC_CODE,
  at: 'event',
  motion: { kind: 'barycentric' },
};

/**
 * The ready-made frame in which the cosmic background is at rest, a child of the barycentric one.
 *
 * The Sun's own 13 m/s about the barycentre is left out: it is less than the 110 m/s to which the velocity is known.
 */
export const BACKGROUND_FRAME: FrameDefinition = {
  code: 'cmb',
  name: 'Cosmic background at rest',
  parent: BARYCENTRIC_FRAME.code,
  at: 'event',
  motion: { kind: 'velocity', velocity: backgroundVelocity() },
};

function backgroundVelocity() {
  const beta = (1000 * SUN_AGAINST_BACKGROUND.speedKmS) / C_M_S;
  return fourVelocity(scale(beta / Math.sqrt((1 - beta) * (1 + beta)), opposite(SUN_APEX)));
}
