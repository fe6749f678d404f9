import { type PairsOfSet } from '#shared/contract/pair-routes';
import { pairsOfSet } from '#shared/contract/pairs-of-set';
import { type FrameResolver } from '#shared/relativity/frame-resolver';
import { errorTerms } from '#shared/relativity/time-error';
import { type FourVelocity } from '#shared/relativity/velocity';
import { type Instant } from '#shared/time/instant';
import { absent, unusable } from '../api/refusal';
import { type Db } from '../db';
import { ErrorRows } from '../reconcile/error-rows';
import { eventColumnsOf } from '../reconcile/event-columns';
import { framesInForce } from '../reconcile/frames-in-force';
import { networkInForce } from '../reconcile/network-in-force';

/** A set of events that stand, and what is asked of it. */
export interface SetAsked {
  readonly networkId: number;
  readonly eventIds: readonly number[];
  /** Of frames; undefined for all of the network. */
  readonly frames?: readonly string[] | undefined;
  readonly sigmas: number;
}

/** The frames of a network as they are in force. */
function framesOf(db: Db, networkId: number): FrameResolver {
  const network = networkInForce(db, networkId, new ErrorRows(db));
  if (!network) throw absent();
  const frames = framesInForce(db, network);
  if (!frames.ok) throw new Error(`${frames.problem.where}: ${frames.problem.text}`);
  return frames.value.resolver;
}

/** The velocities of frames at an instant. */
function velocitiesAt(frames: FrameResolver, codes: readonly string[], instant: Instant): FourVelocity[] {
  return codes.map((code) => {
    const velocity = frames.velocityAt(code, instant);
    if (!velocity.ok) throw unusable({ where: 'frames', text: `must be codes of frames: ${velocity.problem.text}` });
    return velocity.value;
  });
}

/**
 * Every pair of any set of events with the events and the frames at its first one, by what is stored now.
 *
 * @throws Refusal 404 where no event stands, 400 where a frame cannot be resolved
 */
export function setInFull(db: Db, { networkId, eventIds, frames: asked, sigmas }: SetAsked): PairsOfSet {
  const { stored, events, errors, names, siteCodes } = eventColumnsOf(db, networkId, eventIds);
  const [first] = stored;
  if (!first) throw absent();
  const frames = framesOf(db, networkId);
  const codes = asked ?? frames.codes;
  const velocities = velocitiesAt(frames, codes, first);
  return {
    sigmas,
    events: stored.map(({ triggerId, site, taiS, ps, xM, yM, zM, sigmaNs, eventVersion }, row) => ({
      id: triggerId,
      name: names[row] ?? '',
      site: siteCodes[site] ?? '',
      at: { taiS, ps },
      placeM: [xM, yM, zM],
      sigmaNs,
      version: eventVersion,
      terms: [...errorTerms(events, errors, row)],
    })),
    frames: velocities.map(({ gamma, gammaBeta: [x, y, z] }, at) => ({ code: codes[at] ?? '', gamma, gammaBeta: [x, y, z] })),
    pairs: pairsOfSet({ events, errors, sigmas, velocities }),
  };
}
