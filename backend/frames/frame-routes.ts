import { FRAME_ROUTES } from '#shared/contract/frame-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { actorOf } from '../accounts/actor';
import { pageFrom } from '../api/page';
import { stale, unusable } from '../api/refusal';
import { serve, type Asked, type Served } from '../api/serve';
import { change } from '../audit/change';
import { type Db } from '../db';
import { type Ground } from '../ground';
import { placeOfNetwork } from '../networks/network-rows';
import { type Making } from '../networks/note-setup';
import { frameOfId, frameRow, framesAfter, placeOfFrame } from './frame-rows';
import { changeFrame, closeFrame, makeFrame } from './make-frame';

/** The frames of a network, each with what it moves like as seen from the geocentric one. */
export const frameRoutes = (): Served[] => [
  serve(FRAME_ROUTES.listFrames, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, query: { cursor = 0, limit = USUAL_ITEMS } }, { db }) =>
      pageFrom(framesAfter(db, networkId, cursor, limit + 1), limit, ({ id }) => id),
  }),
  serve(FRAME_ROUTES.readFrame, {
    placeOf: ({ params: { frameId } }, { db }) => placeOfFrame(db, frameId),
    handle: ({ params: { frameId } }, { db }) => frameOfId(db, frameId),
  }),
  serve(FRAME_ROUTES.makeFrame, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: (asked, ground) => {
      const actor = actorOf(asked);
      const { networkId } = asked.params;
      return change(ground, actor, (tx, note) => {
        const id = makeFrame({ tx, note, actor, nowMs: ground.nowMs() }, { networkId, ...asked.body });
        return resolvedFrame(ground.db, id);
      });
    },
  }),
  serve(FRAME_ROUTES.changeFrame, {
    placeOf: ({ params: { frameId } }, { db }) => placeOfFrame(db, frameId),
    handle: (asked, ground) => {
      const { name, pinned, parentId, at, motion } = asked.body;
      return changed(asked, ground, (making, frameId) => {
        changeFrame(making, frameId, { name, pinned, parentId, at, motion });
        return resolvedFrame(ground.db, frameId);
      });
    },
  }),
  serve(FRAME_ROUTES.closeFrame, {
    placeOf: ({ params: { frameId } }, { db }) => placeOfFrame(db, frameId),
    handle: (asked, ground) =>
      changed(asked, ground, (making, frameId) => {
        closeFrame(making, frameId);
        return frameOfId(ground.db, frameId);
      }),
  }),
];

/** A frame that was just stated: one that cannot be resolved, such as along a baseline without length, is refused after all. */
function resolvedFrame(db: Db, frameId: number) {
  const frame = frameOfId(db, frameId);
  if (frame.problem !== null) throw unusable({ where: 'motion', text: `cannot be: ${frame.problem}` });
  return frame;
}

type FrameAsked = Asked<{ readonly frameId: number }, unknown, { readonly version: number }>;

/** A change of a frame that was seen at its version. The transaction and the ground have one connection. */
function changed<T>(asked: FrameAsked, ground: Ground, work: (making: Making, frameId: number) => T): T {
  const actor = actorOf(asked);
  const { frameId } = asked.params;
  return change(ground, actor, (tx, note) => {
    if (frameRow(tx, frameId).version !== asked.body.version) throw stale();
    return work({ tx, note, actor, nowMs: ground.nowMs() }, frameId);
  });
}
