import { type PairsOfSet, USUAL_SIGMAS } from '#shared/contract/pair-routes';
import { type Claim, type ClaimKind } from '#shared/review/claims';
import { conflict, unusable } from '../api/refusal';
import { type Db } from '../db';
import { setInFull } from '../pairs/set-in-full';
import { candidateEventsOf, candidateFramesOf, type CandidateRow } from './candidate-rows';

/** A claim by the ids of its events and frame, as it is stored and sent. */
export interface ClaimById {
  readonly kind: ClaimKind;
  readonly a: number | null;
  readonly b: number | null;
  readonly frameId: number | null;
}

/** The numbers of a candidate's events that count, and the way from ids to places and codes. */
export interface ClaimGround {
  readonly set: PairsOfSet;
  /** @throws Refusal where an event or frame is not one of the candidate's */
  readonly claimOf: (claim: ClaimById) => Claim;
  readonly byId: (claim: Claim) => ClaimById;
  /** Whether a claim speaks of events and a frame that still are the candidate's. */
  readonly isOf: (claim: ClaimById) => boolean;
}

/**
 * Computes what a candidate's claims rest on, by what is stored now.
 *
 * @throws Refusal where an event that counts does not stand
 */
export function claimGroundOf(db: Db, { id, networkId }: Pick<CandidateRow, 'id' | 'networkId'>): ClaimGround {
  const events = candidateEventsOf(db, id).filter(({ isIn }) => isIn);
  const lost = events.find(({ at }) => at === null);
  if (lost) throw conflict(`${lost.name} does not stand any more: leave it out, or decide what became of its record.`);
  const frames = candidateFramesOf(db, id);
  const set = setInFull(db, {
    networkId,
    eventIds: events.map(({ eventId }) => eventId),
    frames: frames.map(({ code }) => code),
    sigmas: USUAL_SIGMAS,
  });
  const placeOf = new Map(set.events.map((event, at) => [event.id, at + 1]));
  const place = (eventId: number | null, where: string): number | null => {
    if (eventId === null) return null;
    const found = placeOf.get(eventId);
    if (found === undefined) throw unusable({ where, text: `is ${eventId}; it must be an event that counts in this candidate` });
    return found;
  };
  const codeOf = (frameId: number | null): string | null => {
    if (frameId === null) return null;
    const frame = frames.find((one) => one.frameId === frameId);
    if (!frame)
      throw unusable({ where: 'frameId', text: `is ${frameId}; it must be a frame of this candidate, or null for the geocentric one` });
    return frame.code;
  };
  const eventAt = (at: number | null): number | null => (at === null ? null : (set.events[at - 1]?.id ?? null));
  return {
    set,
    claimOf: ({ kind, a, b, frameId }) => ({ kind, a: place(a, 'a'), b: place(b, 'b'), frame: codeOf(frameId) }),
    byId: ({ kind, a, b, frame }) => ({
      kind,
      a: eventAt(a),
      b: eventAt(b),
      frameId: frames.find(({ code }) => code === frame)?.frameId ?? null,
    }),
    isOf: ({ a, b, frameId }) =>
      [a, b].every((id) => id === null || placeOf.has(id)) && (frameId === null || frames.some((one) => one.frameId === frameId)),
  };
}
