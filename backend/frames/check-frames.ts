import { and, eq, isNull } from 'drizzle-orm';
import { type NetworkFile, type StatedVelocity } from '#shared/contract/network-file';
import { frameDefinitions } from '#shared/contract/network-frames';
import { GEOCENTRIC_CODE, orderFrames } from '#shared/relativity/frame-definition';
import { frames, frameVersions, sites } from '#schema/schema';
import { unusable } from '../api/refusal';
import { type Db } from '../db';

/** Fields of network files and of the API, which a problem's path is turned from and into. */
const FIELDS: readonly (readonly [RegExp, string])[] = [
  [/^velocity\.beta$/, 'motion.betaC'],
  [/^velocity\.speed_c$/, 'motion.speedC'],
  [/^velocity\.speed_km_s$/, 'motion.speedKmS'],
  [/^velocity\.rapidity$/, 'motion.rapidity'],
  [/^velocity\.toward\.baseline\[0\]$/, 'motion.fromSiteId'],
  [/^velocity\.toward\.baseline\[1\]$/, 'motion.toSiteId'],
  [/^parent$/, 'parentId'],
  [/^code$/, 'code'],
];

type FileFrame = NonNullable<NetworkFile['frames']>[number];

/**
 * Refuses the frames of a network when they cannot be as a whole once one of them was stated: parents in a circle, a parent that its kind
 * cannot have, a speed of c, rapidities that add up to too much.
 *
 * @param frameId which one was stated; what goes wrong is told by its fields
 */
export function refuseImpossible(db: Pick<Db, 'select'>, networkId: number, frameId: number): void {
  const rows = db
    .select({ id: frames.id, code: frames.code, version: frameVersions })
    .from(frames)
    .innerJoin(frameVersions, and(eq(frameVersions.frameId, frames.id), isNull(frameVersions.supersededAt)))
    .where(eq(frames.networkId, networkId))
    .orderBy(frames.id)
    .all();
  const codes = new Map(rows.map(({ id, code }) => [id, code]));
  const siteCodes = new Map(
    db
      .select({ id: sites.id, code: sites.code })
      .from(sites)
      .where(eq(sites.networkId, networkId))
      .all()
      .map(({ id, code }) => [id, code]),
  );
  const stated = rows.map(({ code, version }) => fileFrame(code, version, codes, siteCodes));
  const definitions = frameDefinitions({ frames: stated });
  const ordered = definitions.ok ? orderFrames(definitions.value, new Set(siteCodes.values())) : definitions;
  if (ordered.ok) return;
  const { where, text } = ordered.problem;
  const [, index = '', path = ''] = /^frames\[(\d+)\]\.?(.*)$/.exec(where) ?? [];
  const faulty = rows[Number(index)];
  if (faulty && faulty.id !== frameId) throw unusable({ where: 'motion', text: `would make the frame ${faulty.code} impossible: ${text}` });
  throw unusable({ where: FIELDS.find(([form]) => form.test(path))?.[1] ?? 'motion', text: `cannot be: ${text.replace(/^is /, '')}` });
}

type Codes = ReadonlyMap<number, string>;

function fileFrame(code: string, version: typeof frameVersions.$inferSelect, codes: Codes, siteCodes: Codes): FileFrame {
  const { parentId, kind, at, definition, fromSiteId, toSiteId } = version;
  const parent = parentId === null ? GEOCENTRIC_CODE : (codes.get(parentId) ?? '');
  if (kind === 'barycentric') return { code, parent, at, kind };
  const velocity = JSON.parse(definition) as StatedVelocity; // written by velocityStated from what a schema had read
  const siteCode = (id: number | null): string => siteCodes.get(id ?? 0) ?? '';
  const toward = kind === 'toward-baseline' ? { toward: { baseline: [siteCode(fromSiteId), siteCode(toSiteId)] as const } } : {};
  return { code, parent, at, velocity: { ...velocity, ...toward } };
}
