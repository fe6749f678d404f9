import { and, eq, isNull } from 'drizzle-orm';
import { type CandidateState, judgeMove, MOVE_NAMES, type MoveName, type Relation, type Standing } from '#shared/contract/candidate-moves';
import { rolesAt } from '#shared/contract/roles';
import { candidateEditors, reviewers } from '#schema/schema';
import { type PersonCalling } from '../api/caller';
import { conflict, forbidden } from '../api/refusal';
import { type Db } from '../db';
import { type CandidateRow } from './candidate-rows';

type Rows = Pick<Db, 'select'>;

/** A candidate as its moves and who makes them depend on it. */
type Judged = Pick<CandidateRow, 'id' | 'networkId' | 'authorId' | 'state' | 'outOfDateAt'>;
type Calling = Pick<PersonCalling, 'personId' | 'held'>;

/** Whether someone wrote a candidate or ever edited it, and so never reviews it. */
export function hasEdited(db: Rows, { id, authorId }: Pick<Judged, 'id' | 'authorId'>, personId: number): boolean {
  if (personId === authorId) return true;
  const row = db
    .select({ since: candidateEditors.since })
    .from(candidateEditors)
    .where(and(eq(candidateEditors.candidateId, id), eq(candidateEditors.personId, personId)))
    .get();
  return row !== undefined;
}

function isAsked(db: Rows, candidateId: number, personId: number): boolean {
  const row = db
    .select({ namedAt: reviewers.namedAt })
    .from(reviewers)
    .where(and(eq(reviewers.candidateId, candidateId), eq(reviewers.personId, personId), isNull(reviewers.releasedAt)))
    .get();
  return row !== undefined;
}

/** What someone is to a candidate, by the roles that they hold now. */
function relationsOf(db: Rows, candidate: Judged, { personId, held }: Calling): Relation[] {
  const { id, networkId, authorId } = candidate;
  const roles = rolesAt(held, { kind: 'network', networkId });
  const relations: Relation[] = [];
  if (roles.includes('analyst')) relations.push(personId === authorId ? 'author' : 'analyst');
  if (roles.includes('reviewer') && isAsked(db, id, personId) && !hasEdited(db, candidate, personId)) relations.push('reviewer');
  if (roles.includes('reviewer')) relations.push('reader');
  if (roles.includes('coordinator')) relations.push('coordinator');
  return relations;
}

const standingOf = ({ state, outOfDateAt }: Judged): Standing => ({ state, isOutOfDate: outOfDateAt !== null });

/** The moves that someone may make now. */
export function movesOf(db: Rows, candidate: Judged, caller: Calling): MoveName[] {
  const relations = relationsOf(db, candidate, caller);
  return MOVE_NAMES.filter((name) => judgeMove(name, standingOf(candidate), relations) === 'allowed');
}

const STATE_WORDS: Readonly<Record<CandidateState, string>> = {
  draft: 'a draft',
  'in-review': 'in review',
  confirmed: 'confirmed',
  disputed: 'disputed',
  withdrawn: 'withdrawn',
};

/**
 * Refuses a move that is not in the table.
 *
 * @throws Refusal 403 where it is never theirs, 409 where it is not to be made now
 */
export function refuseMove(name: MoveName, db: Rows, candidate: Judged, caller: Calling): void {
  const verdict = judgeMove(name, standingOf(candidate), relationsOf(db, candidate, caller));
  if (verdict === 'not-theirs') throw forbidden();
  if (verdict === 'not-now')
    throw conflict(
      `The candidate is ${STATE_WORDS[candidate.state]}${candidate.outOfDateAt === null ? '' : ' and out of date'}: this cannot be done now.`,
    );
}
