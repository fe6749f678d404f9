import { C_M_S } from '../constants';
import { type Outcome, problemOf, valueOf } from '../outcome';
import { compareInstants, type Instant } from '../time/instant';
import { frameFromSpinor, GEOCENTRIC, type InertialFrame } from './frame';
import { type FrameDefinition, GEOCENTRIC_CODE, orderFrames } from './frame-definition';
import { boostSpinor, product, type Spinor, velocityOf } from './spinor';
import { norm, scale, subtract, type Vec3 } from './vector';
import { type FourVelocity, velocityFromBeta, velocityToward } from './velocity';

/** What frames are made from besides their definitions; every answer must depend on the arguments alone, since answers are remembered. */
export interface FrameContext {
  /** The instant of the origin event. */
  readonly originInstant: Instant;
  readonly siteCodes: ReadonlySet<string>;
  /** Place of a site in the geocentric inertial frame (GCRS axes), metres. */
  placeAt(siteCode: string, instant: Instant): Vec3;
  /** Velocity of the Earth in the solar-system barycentric frame, ICRS axes, metres per second. */
  earthBarycentricVelocityMS(instant: Instant): Vec3;
}

/** The frames of a network, each as it is at an instant; `geocentric` is always among them. */
export interface FrameResolver {
  /** `geocentric`, then the codes as they were listed. */
  readonly codes: readonly string[];
  /**
   * A frame as taken at an event.
   *
   * @param code of the frame
   * @param instant of the event; each link of the chain is taken at it or at the origin, by its own `at`
   * @returns the frame; or the problem `frame-unknown`, or `frame-baseline` when its two sites are at one place
   */
  frameAt(code: string, instant: Instant): Outcome<InertialFrame>;
  /** The geocentric velocity of a frame as taken at an event: `frameAt` without matrix and axes, for use on every event. */
  velocityAt(code: string, instant: Instant): Outcome<FourVelocity>;
  /** Whether a frame is the same at every instant; its frame and velocity are computed once. False for a code that does not exist. */
  isConstant(code: string): boolean;
}

interface Chain {
  readonly isConstant: boolean;
  readonly spinorAt: (instant: Instant) => Outcome<Spinor>;
  readonly frameAt: (instant: Instant) => Outcome<InertialFrame>;
  readonly velocityAt: (instant: Instant) => Outcome<FourVelocity>;
}

/**
 * Makes the frames of a network from their definitions.
 *
 * @param definitions in any order
 * @param context places of sites and the Earth's motion
 * @returns the frames; or a problem of `orderFrames`, or `frame-baseline` for a baseline of no length at the origin
 */
export function resolveFrames(definitions: readonly FrameDefinition[], context: FrameContext): Outcome<FrameResolver> {
  const ordered = orderFrames(definitions, context.siteCodes);
  if (!ordered.ok) return ordered;
  const chains = new Map<string, Chain>([[GEOCENTRIC_CODE, geocentricChain()]]);
  for (const definition of ordered.value) {
    const where = `frames[${definitions.indexOf(definition)}]`;
    const atOrigin = velocityOfLink(definition, context, context.originInstant, where);
    if (!atOrigin.ok) return atOrigin;
    const parent = chains.get(definition.parent);
    if (parent !== undefined) chains.set(definition.code, chainOf(parent, definition, context, where));
  }
  const chainAt = (code: string): Outcome<Chain> => {
    const chain = chains.get(code);
    return chain === undefined
      ? problemOf('frame-unknown', 'frame', `no frame ${code}; the frames are ${[...chains.keys()].join(', ')}`)
      : valueOf(chain);
  };
  return valueOf({
    codes: [GEOCENTRIC_CODE, ...definitions.map(({ code }) => code)],
    frameAt: (code, instant) => {
      const chain = chainAt(code);
      return chain.ok ? chain.value.frameAt(instant) : chain;
    },
    velocityAt: (code, instant) => {
      const chain = chainAt(code);
      return chain.ok ? chain.value.velocityAt(instant) : chain;
    },
    isConstant: (code) => chains.get(code)?.isConstant ?? false,
  });
}

function geocentricChain(): Chain {
  const [spinor, frame, velocity] = [valueOf(GEOCENTRIC.spinor), valueOf(GEOCENTRIC), valueOf(GEOCENTRIC.velocity)];
  return { isConstant: true, spinorAt: () => spinor, frameAt: () => frame, velocityAt: () => velocity };
}

function chainOf(parent: Chain, definition: FrameDefinition, context: FrameContext, where: string): Chain {
  const isFixedLink = definition.motion.kind === 'velocity' || definition.at === 'origin';
  const isConstant = parent.isConstant && isFixedLink;
  const linkAt = remembered(isFixedLink, (instant) =>
    map(velocityOfLink(definition, context, isFixedLink ? context.originInstant : instant, where), boostSpinor),
  );
  const spinorAt = remembered(isConstant, (instant) => {
    const before = parent.spinorAt(instant);
    return before.ok ? map(linkAt(instant), (link) => product(link, before.value)) : before;
  });
  const frameAt = remembered(isConstant, (instant) => map(spinorAt(instant), frameFromSpinor));
  const velocityAt = remembered(isConstant, (instant) => map(spinorAt(instant), velocityOf));
  return { isConstant, spinorAt, frameAt, velocityAt };
}

function velocityOfLink({ motion }: FrameDefinition, context: FrameContext, instant: Instant, where: string): Outcome<FourVelocity> {
  switch (motion.kind) {
    case 'velocity':
      return valueOf(motion.velocity);
    case 'barycentric':
      return velocityFromBeta(scale(-1 / C_M_S, context.earthBarycentricVelocityMS(instant)), where);
    case 'toward-baseline': {
      const dxM = subtract(context.placeAt(motion.to, instant), context.placeAt(motion.from, instant));
      const lengthM = norm(dxM);
      return lengthM > 0
        ? valueOf(velocityToward(motion.speed, scale(1 / lengthM, dxM)))
        : problemOf(
            'frame-baseline',
            `${where}.velocity.toward.baseline`,
            `the sites ${motion.from} and ${motion.to} are at one place; a baseline joins two places`,
          );
    }
  }
}

/** A function that keeps its last answer, and for good where the answer never changes: children of one frame ask it at the same instant. */
function remembered<T>(isConstant: boolean, compute: (instant: Instant) => Outcome<T>): (instant: Instant) => Outcome<T> {
  let last: { readonly instant: Instant; readonly outcome: Outcome<T> } | undefined;
  return (instant) => {
    if (last !== undefined && (isConstant || compareInstants(last.instant, instant) === 0)) return last.outcome;
    const outcome = compute(instant);
    last = { instant, outcome };
    return outcome;
  };
}

function map<A, B>(outcome: Outcome<A>, change: (value: A) => B): Outcome<B> {
  return outcome.ok ? valueOf(change(outcome.value), outcome.warnings) : outcome;
}
