import { frameDefinitions } from '#shared/contract/network-frames';
import { type NetworkFile, statedVelocity, type StatedVelocity } from '#shared/contract/network-file';
import { type Outcome, problemOf, type Problem, valueOf } from '#shared/outcome';
import { type FrameDefinition, GEOCENTRIC_CODE } from '#shared/relativity/frame-definition';
import { type FrameResolver, resolveFrames } from '#shared/relativity/frame-resolver';
import { type Db } from '../db';
import { earthBarycentricVelocityMS } from '../frames/ephemeris';
import { type NetworkInForce } from './network-in-force';

/** The frames of a network that can be resolved, and why others cannot. */
export interface FramesInForce {
  readonly resolver: FrameResolver;
  /** Codes by the id of the frame; only of those that are resolved. */
  readonly codeById: ReadonlyMap<number, string>;
  readonly leftOut: readonly Problem[];
}

interface FrameRow {
  id: number;
  code: string;
  name: string;
  parent: string | null;
  kind: string;
  at: 'event' | 'origin';
  definition: string;
  from_site: string | null;
  to_site: string | null;
}

const FRAMES_QUERY = `SELECT f.id, f.code, f.name, p.code AS parent, v.kind, v.at, v.definition, a.code AS from_site, b.code AS to_site
  FROM frames AS f JOIN frame_versions AS v ON v.frame_id = f.id AND v.superseded_at IS NULL
  LEFT JOIN frames AS p ON p.id = v.parent_id LEFT JOIN sites AS a ON a.id = v.from_site_id LEFT JOIN sites AS b ON b.id = v.to_site_id
  WHERE f.network_id = ? ORDER BY f.pinned IS NULL, f.pinned, f.id`;

const frameRows = (db: Db, networkId: number): FrameRow[] => db.$client.prepare<[number], FrameRow>(FRAMES_QUERY).all(networkId);

/** The velocity as the network file states it; the sites of a baseline stand in columns of their own. */
function velocityOf(row: FrameRow): Outcome<StatedVelocity | undefined> {
  if (row.kind === 'barycentric') return valueOf(undefined);
  const where = `frames.${row.code}`;
  if (row.kind !== 'velocity' && row.kind !== 'toward-baseline')
    return problemOf('frame-kind', where, `is of kind ${row.kind}, which is not computed yet; a velocity, a baseline or barycentric is`);
  const stated: unknown = JSON.parse(row.definition);
  const given = typeof stated === 'object' && stated !== null && !Array.isArray(stated) ? stated : {};
  const whole = row.kind === 'toward-baseline' ? { ...given, toward: { baseline: [row.from_site ?? '', row.to_site ?? ''] } } : given;
  const read = statedVelocity.safeParse(whole);
  return read.success
    ? valueOf(read.data)
    : problemOf('frame-velocity', where, `is stated as ${row.definition}; it must be a velocity as network files have it`);
}

/** A frame as network files state it. */
export type FileFrame = NonNullable<NetworkFile['frames']>[number];

function fileFrameOf(row: FrameRow): Outcome<FileFrame> {
  const velocity = velocityOf(row);
  if (!velocity.ok) return velocity;
  const { code, name, at } = row;
  const parent = row.parent ?? GEOCENTRIC_CODE;
  const motion = velocity.value ? { velocity: velocity.value } : { kind: 'barycentric' as const };
  return valueOf({ code, name, at, parent, ...motion });
}

/** The frames of a network that are in force, as network files state them, in the order of `framesInForce`; those that cannot be are left out. */
export const statedFrames = (db: Db, networkId: number): readonly FileFrame[] =>
  frameRows(db, networkId).flatMap((row) => {
    const frame = fileFrameOf(row);
    return frame.ok ? [frame.value] : [];
  });

function definitionOf(row: FrameRow): Outcome<FrameDefinition> {
  const frame = fileFrameOf(row);
  if (!frame.ok) return frame;
  const made = frameDefinitions({ frames: [frame.value] });
  if (!made.ok) return made;
  const [definition] = made.value;
  return definition ? valueOf(definition) : problemOf('frame-velocity', `frames.${row.code}`, 'has no definition');
}

/** Takes away what hangs on a parent that is not there, until nothing more falls. */
function withParents(definitions: readonly FrameDefinition[], leftOut: Problem[]): readonly FrameDefinition[] {
  const codes = new Set([GEOCENTRIC_CODE, ...definitions.map(({ code }) => code)]);
  const kept = definitions.filter(({ code, parent }) => {
    if (codes.has(parent)) return true;
    leftOut.push({ code: 'frame-parent', where: `frames.${code}`, text: `hangs on ${parent}, which cannot be resolved` });
    return false;
  });
  return kept.length === definitions.length ? kept : withParents(kept, leftOut);
}

/**
 * Resolves the frames of a network as they are in force: those that are pinned in their order, then the others.
 *
 * @param db any connection
 * @param network whose sites give the baselines
 * @returns the resolver; frames of a kind that cannot be computed, and what hangs on them, are left out and named. The problem is one of the
 *   frames as a whole, which the set-up should have refused
 */
export function framesInForce(db: Db, network: NetworkInForce): Outcome<FramesInForce> {
  const leftOut: Problem[] = [];
  const rows = frameRows(db, network.id);
  const definitions = rows.flatMap((row) => {
    const made = definitionOf(row);
    if (made.ok) return [made.value];
    leftOut.push(made.problem);
    return [];
  });
  const kept = withParents(definitions, leftOut);
  const rowByCode = new Map(network.sites.map(({ code, row }) => [code, row]));
  const resolver = resolveFrames(kept, {
    originInstant: network.origin,
    siteCodes: new Set(rowByCode.keys()),
    placeAt: (code, instant) => network.worldlines[rowByCode.get(code) ?? -1]?.placeAt(instant) ?? [0, 0, 0],
    earthBarycentricVelocityMS,
  });
  if (!resolver.ok) return resolver;
  const resolved = new Set(kept.map(({ code }) => code));
  return valueOf({
    resolver: resolver.value,
    codeById: new Map(rows.filter(({ code }) => resolved.has(code)).map(({ id, code }) => [id, code])),
    leftOut,
  });
}
