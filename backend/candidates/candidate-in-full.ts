import { asc, eq } from 'drizzle-orm';
import { type CandidateInFull } from '#shared/contract/candidate-routes';
import { candidateEditors, people } from '#schema/schema';
import { type PersonCalling } from '../api/caller';
import { type Db } from '../db';
import { networkRow } from '../networks/network-rows';
import { candidateEventsOf, candidateFramesOf, candidateRow, candidateSetsOf } from './candidate-rows';
import { lastStepOf } from './candidate-steps';
import { claimsOf } from './claim-rows';
import { movesOf } from './relations';
import { reviewersOf, signaturesOf, snapshotHeadOf, somebody } from './review-rows';

/** A candidate with everything, as one person may have it. */
export function candidateOfId(db: Pick<Db, 'select' | '$client'>, candidateId: number, caller: PersonCalling): CandidateInFull {
  const row = candidateRow(db, candidateId);
  const { id, networkId, number, title, about, state, authorId, outOfDateAt, version, createdAt, updatedAt, submittedAt } = row;
  return {
    ...{ id, networkId, number, title, about, state, outOfDateAt, version, createdAt, updatedAt, submittedAt },
    author: somebody(db, authorId),
    editors: db
      .select({ id: people.id, name: people.name })
      .from(candidateEditors)
      .innerJoin(people, eq(people.id, candidateEditors.personId))
      .where(eq(candidateEditors.candidateId, candidateId))
      .orderBy(asc(candidateEditors.since), asc(people.id))
      .all(),
    coincidences: candidateSetsOf(db, candidateId),
    events: candidateEventsOf(db, candidateId),
    frames: candidateFramesOf(db, candidateId),
    claims: claimsOf(db, candidateId),
    snapshot: snapshotHeadOf(db, row.snapshotId),
    neededSignatures: networkRow(db, networkId).neededSignatures,
    reviewers: reviewersOf(db, candidateId),
    signatures: signaturesOf(db, candidateId),
    lastStep: lastStepOf(db, candidateId),
    moves: movesOf(db, row, caller),
  };
}
