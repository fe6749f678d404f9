import { type Outcome, problemOf, valueOf } from '../outcome';
import { MOST_RAPIDITY, type Speed } from './speed';
import { type FourVelocity, rapidity } from './velocity';

/** The code of the frame that always exists and in which all chains end. */
export const GEOCENTRIC_CODE = 'geocentric';

/**
 * How a frame moves in its parent: as the solar-system barycentre does (parent geocentric only), at a given velocity, or along the line
 * from one site to another as it lies at the instant (parent geocentric only).
 */
export type FrameMotion =
  | { readonly kind: 'barycentric' }
  | { readonly kind: 'velocity'; readonly velocity: FourVelocity }
  | { readonly kind: 'toward-baseline'; readonly speed: Speed; readonly from: string; readonly to: string };

/** A frame as its user defines it; the velocity is measured in the parent and in the parent's axes. */
export interface FrameDefinition {
  readonly code: string;
  readonly name: string;
  /** Code of the parent, `geocentric` or another definition's. */
  readonly parent: string;
  /** Whether the link to the parent is taken at the event that the frame is applied to, or once at the origin event. */
  readonly at: 'event' | 'origin';
  readonly motion: FrameMotion;
}

/**
 * Checks a list of frames as a whole.
 *
 * @param definitions in any order
 * @param siteCodes codes that baselines may name
 * @returns the same definitions, parents before their children; or the first problem, its place as a path such as `frames[2].parent`:
 * `frame-code` (given twice, or geocentric), `frame-parent` (unknown, in a circle, or one that this kind cannot have), `frame-baseline`
 * (unknown site, or one site twice), `frame-speed` (rapidities along a chain above 300 in sum)
 */
export function orderFrames(definitions: readonly FrameDefinition[], siteCodes: ReadonlySet<string>): Outcome<readonly FrameDefinition[]> {
  const codes = new Set([GEOCENTRIC_CODE]);
  for (const [index, { code }] of definitions.entries()) {
    if (codes.has(code)) {
      const why = code === GEOCENTRIC_CODE ? 'always exists and cannot be defined' : 'is defined twice';
      return problemOf('frame-code', `frames[${index}].code`, `the frame ${code} ${why}; each frame needs a code of its own`);
    }
    codes.add(code);
  }
  for (const [index, definition] of definitions.entries()) {
    const fault = faultOfLink(definition, `frames[${index}]`, codes, siteCodes);
    if (fault !== undefined) return fault;
  }
  return parentsFirst(definitions);
}

function faultOfLink(
  { parent, motion }: FrameDefinition,
  where: string,
  codes: ReadonlySet<string>,
  siteCodes: ReadonlySet<string>,
): ReturnType<typeof problemOf> | undefined {
  if (!codes.has(parent)) {
    return problemOf('frame-parent', `${where}.parent`, `no frame ${parent}; a parent is ${GEOCENTRIC_CODE} or one of the frames listed`);
  }
  if (motion.kind === 'velocity') return undefined;
  if (parent !== GEOCENTRIC_CODE) {
    const kind = motion.kind === 'barycentric' ? 'a barycentric frame' : 'a frame along a baseline';
    return problemOf('frame-parent', `${where}.parent`, `the parent ${parent} of ${kind}; its parent can only be ${GEOCENTRIC_CODE}`);
  }
  if (motion.kind === 'barycentric') return undefined;
  const baseline = `${where}.velocity.toward.baseline`;
  for (const [end, site] of [motion.from, motion.to].entries()) {
    if (!siteCodes.has(site))
      return problemOf('frame-baseline', `${baseline}[${end}]`, `no site ${site}; a baseline joins two of the sites`);
  }
  if (motion.from === motion.to) {
    return problemOf('frame-baseline', `${baseline}[1]`, `the site ${motion.to} at both ends; a baseline joins two different sites`);
  }
  return undefined;
}

/** Goes down from the geocentric frame; what it does not reach hangs on a circle of parents. */
function parentsFirst(definitions: readonly FrameDefinition[]): Outcome<readonly FrameDefinition[]> {
  const indexOf = new Map(definitions.map((definition, index) => [definition.code, index]));
  const childrenOf = new Map<string, FrameDefinition[]>();
  for (const definition of definitions) {
    const siblings = childrenOf.get(definition.parent);
    if (siblings === undefined) childrenOf.set(definition.parent, [definition]);
    else siblings.push(definition);
  }
  const rapidityOf = new Map([[GEOCENTRIC_CODE, 0]]);
  const ordered: FrameDefinition[] = [];
  let level = childrenOf.get(GEOCENTRIC_CODE) ?? [];
  while (level.length > 0) {
    for (const definition of level) {
      const sum = (rapidityOf.get(definition.parent) ?? 0) + rapidityOfLink(definition.motion);
      if (sum > MOST_RAPIDITY) {
        const text = `rapidities of ${sum} in sum from ${GEOCENTRIC_CODE} to ${definition.code}; a chain may have ${MOST_RAPIDITY} at most`;
        return problemOf('frame-speed', `frames[${indexOf.get(definition.code) ?? 0}].velocity`, text);
      }
      rapidityOf.set(definition.code, sum);
      ordered.push(definition);
    }
    level = level.flatMap(({ code }) => childrenOf.get(code) ?? []);
  }
  const lost = definitions.find(({ code }) => !rapidityOf.has(code));
  if (lost === undefined) return valueOf(ordered);
  const circle = circleAbove(lost, new Map(definitions.map((definition) => [definition.code, definition.parent])));
  const text = `the parents ${circle.join(' > ')} go round in a circle; a chain of parents must end at ${GEOCENTRIC_CODE}`;
  return problemOf('frame-parent', `frames[${indexOf.get(circle[0] ?? '') ?? 0}].parent`, text);
}

/** The codes of the circle at which the parents of a frame arrive, its first code again at the end. */
function circleAbove(lost: FrameDefinition, parentOf: ReadonlyMap<string, string>): readonly string[] {
  const path: string[] = [];
  let code = lost.code;
  while (!path.includes(code)) {
    path.push(code);
    code = parentOf.get(code) ?? GEOCENTRIC_CODE;
  }
  return [...path.slice(path.indexOf(code)), code];
}

/** A link's part in the sum of rapidities; the Earth's barycentric motion, 1e-4, is not worth counting. */
function rapidityOfLink(motion: FrameMotion): number {
  if (motion.kind === 'velocity') return rapidity(motion.velocity);
  return motion.kind === 'barycentric' ? 0 : Math.asinh(Math.abs(motion.speed.gammaBeta));
}
