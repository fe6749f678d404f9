import { claims, reviewers } from '#schema/schema';
import { change } from '../../backend/audit/change';
import { makeCandidate } from '../../backend/candidates/make-candidate';
import { type RunningApp } from './app';
import { type World } from './world';

/** A draft of the first network's analyst, which its reviewer is asked to review, and its one claim, by id. */
export interface StoredCandidate {
  readonly candidate: number;
  readonly claim: number;
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
    return { candidate, claim: tx.select({ id: claims.id }).from(claims).get()!.id };
  });
}
