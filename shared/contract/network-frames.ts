import { type NetworkFile, type StatedVelocity } from './network-file';
import { type Outcome, problemOf, valueOf } from '../outcome';
import { unitFromAngles } from '../relativity/direction';
import { type FrameDefinition, type FrameMotion, GEOCENTRIC_CODE } from '../relativity/frame-definition';
import { type Speed, speedFromC, speedFromKmS, speedFromRapidity } from '../relativity/speed';
import { velocityFromBeta, velocityToward } from '../relativity/velocity';

function speedOf(velocity: StatedVelocity, path: string): Outcome<Speed> {
  if (velocity.speed_c !== undefined) return speedFromC(velocity.speed_c, `${path}.speed_c`);
  if (velocity.speed_km_s !== undefined) return speedFromKmS(velocity.speed_km_s, `${path}.speed_km_s`);
  return speedFromRapidity(velocity.rapidity ?? 0, `${path}.rapidity`);
}

/**
 * The motion that a stated velocity means.
 *
 * @param path of the velocity, for the problem
 * @returns the motion; or the problem `frame-speed` of a speed of c or more
 */
export function motionOf(velocity: StatedVelocity, path: string): Outcome<FrameMotion> {
  if (velocity.beta) {
    const beta = velocityFromBeta(velocity.beta, `${path}.beta`);
    return beta.ok ? valueOf({ kind: 'velocity', velocity: beta.value }) : beta;
  }
  const speed = speedOf(velocity, path);
  if (!speed.ok) return speed;
  const { baseline, ra_deg = 0, dec_deg = 0 } = velocity.toward ?? {};
  if (baseline) return valueOf({ kind: 'toward-baseline', speed: speed.value, from: baseline[0], to: baseline[1] });
  return valueOf({
    kind: 'velocity',
    velocity: velocityToward(speed.value, unitFromAngles({ longitudeDeg: ra_deg, latitudeDeg: dec_deg })),
  });
}

/**
 * The frames of a network file as definitions; what they refer to is checked by the resolver.
 *
 * @returns definitions in the order of the file; or the first problem: a speed of c or more, or a parent that a kind cannot have
 */
export function frameDefinitions(file: Pick<NetworkFile, 'frames'>): Outcome<readonly FrameDefinition[]> {
  const definitions: FrameDefinition[] = [];
  for (const [at, frame] of (file.frames ?? []).entries()) {
    const motion = frame.velocity ? motionOf(frame.velocity, `frames[${at}].velocity`) : valueOf<FrameMotion>({ kind: 'barycentric' });
    if (!motion.ok) return problemOf(motion.problem.code, motion.problem.where, `is ${motion.problem.text}`);
    definitions.push({
      code: frame.code,
      name: frame.name ?? '',
      parent: frame.parent ?? GEOCENTRIC_CODE,
      at: frame.at ?? 'event',
      motion: motion.value,
    });
  }
  return valueOf(definitions);
}
