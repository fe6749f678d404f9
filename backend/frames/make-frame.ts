import { and, eq, isNull } from 'drizzle-orm';
import { velocityStated, type FrameMotionStated } from '#shared/contract/frame-routes';
import { frames, frameVersions, rules, ruleVersions, sites } from '#schema/schema';
import { codeTaken, conflict, unusable } from '../api/refusal';
import { utcText } from '../ground';
import { openNetwork } from '../networks/network-rows';
import { makerOf, noteSetup, type Making } from '../networks/note-setup';
import { refuseImpossible } from './check-frames';
import { frameRow, frameStateOf } from './frame-rows';

const MOST_FRAMES = 200;
const MOST_STATES = 500;

/** How a frame moves, and in what. */
export interface FrameStateValues {
  /** Null for the geocentric frame. */
  readonly parentId: number | null;
  /** Taken at each event that it is applied to, or once at the network's origin. */
  readonly at: 'event' | 'origin';
  readonly motion: FrameMotionStated;
}

/** What a frame is made from. */
export interface FrameValues {
  readonly networkId: number;
  readonly code: string;
  readonly name?: string | undefined;
  readonly pinned?: number | null | undefined;
  readonly parentId?: number | null | undefined;
  readonly at?: 'event' | 'origin' | undefined;
  readonly motion: FrameMotionStated;
}

/** What of a frame is changed; what is absent stays as it is. */
export interface FrameEdit {
  readonly name?: string | undefined;
  readonly pinned?: number | null | undefined;
  readonly parentId?: number | null | undefined;
  readonly at?: 'event' | 'origin' | undefined;
  readonly motion?: FrameMotionStated | undefined;
}

/**
 * Makes a frame.
 *
 * @returns its id
 * @throws Refusal when the code is taken, its parent or sites are not of the network, or the frames as a whole cannot be with it
 */
export function makeFrame(making: Making, values: FrameValues): number {
  const { tx, note, actor, nowMs } = making;
  const { networkId, code, name = '', pinned = null, parentId = null, at = 'event', motion } = values;
  openNetwork(tx, networkId);
  const codes = tx.select({ code: frames.code }).from(frames).where(eq(frames.networkId, networkId)).all();
  if (codes.length >= MOST_FRAMES) throw conflict(`The network has ${MOST_FRAMES} frames, which is the most.`);
  if (codes.some((one) => one.code === code)) throw codeTaken(code, 'frame of the network');
  refusePinned(tx, networkId, pinned);
  const { id } = tx
    .insert(frames)
    .values({ networkId, code, name, pinned, createdAt: utcText(nowMs), createdBy: makerOf(actor) })
    .returning({ id: frames.id })
    .get();
  insertState(making, networkId, id, 1, { parentId, at, motion });
  note({ action: 'frame:made', subjectKind: 'frame', subjectId: id, networkId, details: { code } });
  noteSetup(tx, networkId, { what: 'frame', id }, nowMs);
  return id;
}

/** Two frames do not share a place in the tables. */
function refusePinned(tx: Making['tx'], networkId: number, pinned: number | null | undefined, ownId?: number): void {
  if (pinned === null || pinned === undefined) return;
  const taken = tx
    .select({ id: frames.id, code: frames.code })
    .from(frames)
    .where(and(eq(frames.networkId, networkId), eq(frames.pinned, pinned)))
    .all()
    .find(({ id }) => id !== ownId);
  if (taken) throw unusable({ where: 'pinned', text: `is ${pinned}, where ${taken.code} stands; it must be a place of its own, or null` });
}

/** Changes a frame: its motion, parent and instant by another version, the rest in place. Refuses as its making does. */
export function changeFrame(making: Making, frameId: number, { name, pinned, ...stated }: FrameEdit): void {
  const { tx, note, actor, nowMs } = making;
  const { networkId, version, closedAt } = frameRow(tx, frameId);
  openNetwork(tx, networkId);
  if (closedAt !== null) throw conflict('The frame is closed: it is changed no more.');
  const before = frameStateOf(tx, frameId);
  const { parentId = before.parentId, at = before.at, motion = before.motion } = stated;
  const isNew = stated.parentId !== undefined || stated.at !== undefined || stated.motion !== undefined;
  if (isNew) {
    if (!motion) throw unusable({ where: 'motion', text: 'is missing; it must be stated with the rest' });
    if (before.number >= MOST_STATES) throw conflict(`The frame was stated ${MOST_STATES} times, which is the most.`);
    tx.update(frameVersions)
      .set({ supersededAt: utcText(nowMs), supersededBy: makerOf(actor) })
      .where(eq(frameVersions.id, before.id))
      .run();
    insertState(making, networkId, frameId, before.number + 1, { parentId, at, motion });
  }
  refusePinned(tx, networkId, pinned, frameId);
  tx.update(frames)
    .set({ name, pinned, version: version + 1 })
    .where(eq(frames.id, frameId))
    .run();
  note({
    action: 'frame:changed',
    subjectKind: 'frame',
    subjectId: frameId,
    networkId,
    details: { number: isNew ? before.number + 1 : before.number },
  });
  noteSetup(tx, networkId, { what: 'frame', id: frameId }, nowMs);
}

/** Takes a frame out of the lists; refused while another frame moves in it or a rule counts in it. */
export function closeFrame({ tx, note, nowMs }: Making, frameId: number): void {
  const { networkId, version, closedAt } = frameRow(tx, frameId);
  openNetwork(tx, networkId);
  if (closedAt !== null) throw conflict('The frame is closed already.');
  const child = tx
    .select({ code: frames.code })
    .from(frameVersions)
    .innerJoin(frames, eq(frames.id, frameVersions.frameId))
    .where(and(eq(frameVersions.parentId, frameId), isNull(frameVersions.supersededAt), isNull(frames.closedAt)))
    .get();
  if (child) throw conflict(`The frame "${child.code}" moves in this one: give it another parent, or close it first.`);
  const rule = tx
    .select({ code: rules.code })
    .from(ruleVersions)
    .innerJoin(rules, eq(rules.id, ruleVersions.ruleId))
    .where(and(eq(ruleVersions.frameId, frameId), isNull(ruleVersions.supersededAt)))
    .get();
  if (rule) throw conflict(`The rule "${rule.code}" has its window in this frame: change that first.`);
  tx.update(frames)
    .set({ closedAt: utcText(nowMs), pinned: null, version: version + 1 })
    .where(eq(frames.id, frameId))
    .run();
  note({ action: 'frame:closed', subjectKind: 'frame', subjectId: frameId, networkId });
  noteSetup(tx, networkId, { what: 'frame', id: frameId }, nowMs);
}

function insertState(
  { tx, actor, nowMs }: Making,
  networkId: number,
  frameId: number,
  number: number,
  { parentId, at, motion }: FrameStateValues,
): void {
  if (parentId !== null) {
    const parent = tx
      .select({ id: frames.id })
      .from(frames)
      .where(and(eq(frames.id, parentId), eq(frames.networkId, networkId), isNull(frames.closedAt)))
      .get();
    if (!parent)
      throw unusable({
        where: 'parentId',
        text: `is ${parentId}; it must be the id of an open frame of this network, or null for the geocentric one`,
      });
    if (motion.kind !== 'velocity')
      throw unusable({
        where: 'parentId',
        text: `is ${parentId}; it must be null: a frame of kind "${motion.kind}" moves in the geocentric one alone`,
      });
    if (parentId === frameId) throw unusable({ where: 'parentId', text: `is ${parentId}, the frame itself; it must be another frame` });
  }
  const ends: Readonly<Record<string, number>> =
    motion.kind === 'toward-baseline' ? { fromSiteId: motion.fromSiteId, toSiteId: motion.toSiteId } : {};
  for (const [field, siteId] of Object.entries(ends)) {
    const known = tx
      .select({ id: sites.id })
      .from(sites)
      .where(and(eq(sites.id, siteId), eq(sites.networkId, networkId)))
      .get();
    if (!known) throw unusable({ where: `motion.${field}`, text: `is ${siteId}; it must be the id of a site of this network` });
  }
  tx.insert(frameVersions)
    .values({
      frameId,
      number,
      parentId,
      kind: motion.kind,
      at,
      definition: JSON.stringify(velocityStated(motion)),
      ...ends,
      createdAt: utcText(nowMs),
      createdBy: makerOf(actor),
    })
    .run();
  refuseImpossible(tx, networkId, frameId);
}
