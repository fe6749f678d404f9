import { claims, comments, reviewers } from '#schema/schema';
import { change } from '../../backend/audit/change';
import { makeCandidate } from '../../backend/candidates/make-candidate';
import { type RunningApp } from './app';
import { type World } from './world';

/** A draft of the first network's analyst, which its reviewer is asked to review, and its one claim, by id. */
export interface StoredCandidate {
  readonly candidate: number;
  readonly claim: number;
  /** The author's. */
  readonly comment: number;
}

/** Makes a candidate of two events of the first network. */
export function storeCandidate({ ground }: RunningApp, world: World, eventIds: readonly [number, number]): StoredCandidate {
  const authorId = world.people.analyst;
  const actor = { kind: 'person', id: authorId, requestId: null } as const;
  return change(ground, actor, (tx, note) => {
    const given = { title: 'Two of a kind', eventIds: [...eventIds] };
    const candidate = makeCandidate({ tx, note, actor, nowMs: ground.nowMs() }, ground.db, {
      networkId: world.networks.first,
      authorId,
      given,
    });
    tx.insert(reviewers)
      .values({ candidateId: candidate, personId: world.people.reviewer, namedAt: '2026-01-01T00:00:00.000Z', namedBy: authorId })
      .run();
    const comment = tx
      .insert(comments)
      .values({ candidateId: candidate, isQuestion: false, authorId, body: 'Both?', createdAt: '2026-01-01T00:00:00.000Z' })
      .returning({ id: comments.id })
      .get();
    return { candidate, comment: comment.id, claim: tx.select({ id: claims.id }).from(claims).get()!.id };
  });
}
