import { and, asc, desc, eq, gt, inArray, isNull } from 'drizzle-orm';
import { frameMotion, type Frame, type FrameMotionStated, type FrameState } from '#shared/contract/frame-routes';
import { type Place } from '#shared/contract/roles';
import { type StatedVelocity } from '#shared/contract/network-file';
import { anglesOf } from '#shared/relativity/direction';
import { betaC, rapidity, shortOfLightC, speedC } from '#shared/relativity/velocity';
import { frames, frameVersions } from '#schema/schema';
import { absent } from '../api/refusal';
import { type Db } from '../db';
import { ErrorRows } from '../reconcile/error-rows';
import { framesInForce } from '../reconcile/frames-in-force';
import { networkInForce } from '../reconcile/network-in-force';

type Rows = Pick<Db, 'select'>;
type FrameRow = typeof frames.$inferSelect;
type VersionRow = typeof frameVersions.$inferSelect;

const DEG_PER_RAD = 180 / Math.PI;

/** The row of a frame; refused as absent when there is none. */
export function frameRow(db: Rows, frameId: number): FrameRow {
  const row = db.select().from(frames).where(eq(frames.id, frameId)).get();
  if (!row) throw absent();
  return row;
}

/** Where a frame lies; undefined when there is none of this id. */
export function placeOfFrame(db: Rows, frameId: number): Place | undefined {
  const row = db.select({ networkId: frames.networkId }).from(frames).where(eq(frames.id, frameId)).get();
  return row && { kind: 'network', networkId: row.networkId };
}

/** The state of a frame that is in force. */
export function frameStateOf(db: Rows, frameId: number): FrameState {
  const row = db
    .select()
    .from(frameVersions)
    .where(and(eq(frameVersions.frameId, frameId), isNull(frameVersions.supersededAt)))
    .get();
  if (!row) throw new Error(`frame ${frameId} has no version in force`);
  return stateOf(row);
}

/** A frame with every state that it ever had, latest first. */
export function frameOfId(db: Db, frameId: number) {
  const row = frameRow(db, frameId);
  const versions = db.select().from(frameVersions).where(eq(frameVersions.frameId, frameId)).orderBy(desc(frameVersions.number)).all();
  return { ...shown(row, versions, resolverOf(db, row.networkId)), versions: versions.map(stateOf) };
}

/** The frames of a network that are not closed, from behind an id on. */
export function framesAfter(db: Db, networkId: number, afterId: number, most: number): Frame[] {
  const rows = db
    .select()
    .from(frames)
    .where(and(eq(frames.networkId, networkId), gt(frames.id, afterId), isNull(frames.closedAt)))
    .orderBy(asc(frames.id))
    .limit(most)
    .all();
  const ids = rows.map(({ id }) => id);
  const versions = db
    .select()
    .from(frameVersions)
    .where(and(inArray(frameVersions.frameId, ids), isNull(frameVersions.supersededAt)))
    .all();
  const resolver = resolverOf(db, networkId);
  return rows.map((row) =>
    shown(
      row,
      versions.filter(({ frameId }) => frameId === row.id),
      resolver,
    ),
  );
}

type Resolved = Pick<Frame, 'resolved' | 'problem'>;

/** What each frame of a network moves like at the network's origin, or why that cannot be said. */
function resolverOf(db: Db, networkId: number): (code: string) => Resolved {
  const network = networkInForce(db, networkId, new ErrorRows(db));
  if (!network) throw absent();
  const inForce = framesInForce(db, network);
  if (!inForce.ok) return () => ({ resolved: null, problem: inForce.problem.text });
  const { resolver, leftOut } = inForce.value;
  return (code) => {
    const frame = resolver.frameAt(code, network.origin);
    if (!frame.ok) {
      const why = leftOut.find(({ where }) => where === `frames.${code}`);
      return { resolved: null, problem: why ? why.text : frame.problem.text };
    }
    const { velocity, wigner } = frame.value;
    const speed = speedC(velocity);
    const { longitudeDeg: raDeg, latitudeDeg: decDeg } = anglesOf(velocity.gammaBeta);
    const [x, y, z] = betaC(velocity);
    return {
      resolved: {
        isConstant: resolver.isConstant(code),
        at: network.origin,
        betaC: [x, y, z],
        speedC: speed,
        shortOfLightC: shortOfLightC(velocity),
        gamma: velocity.gamma,
        rapidity: rapidity(velocity),
        toward: speed === 0 ? null : { raDeg, decDeg },
        wignerDeg: wigner.angleRad * DEG_PER_RAD,
      },
      problem: null,
    };
  };
}

function shown({ createdBy: _by, ...row }: FrameRow, versions: readonly VersionRow[], resolver: (code: string) => Resolved): Frame {
  const now = versions.find(({ supersededAt }) => supersededAt === null);
  if (!now) throw new Error(`frame ${row.id} has no version in force`);
  return { ...row, now: stateOf(now), ...resolver(row.code) };
}

function stateOf(row: VersionRow): FrameState {
  const { id, number, parentId, at, createdAt, createdBy, supersededAt } = row;
  return { id, number, parentId, at, motion: motionOf(row), createdAt, createdBy, supersededAt };
}

/** The motion as it was stated; null for a kind that the API does not know. */
function motionOf({ kind, definition, fromSiteId, toSiteId }: VersionRow): FrameMotionStated | null {
  const { beta, speed_c, speed_km_s, rapidity: given, toward } = JSON.parse(definition) as Partial<StatedVelocity>;
  const sites = kind === 'toward-baseline' ? { fromSiteId, toSiteId } : {};
  const angles = toward && { toward: { raDeg: toward.ra_deg, decDeg: toward.dec_deg } };
  const stated = { kind, betaC: beta, speedC: speed_c, speedKmS: speed_km_s, rapidity: given, ...sites, ...angles };
  const read = frameMotion.safeParse(JSON.parse(JSON.stringify(stated)));
  return read.success ? read.data : null;
}
