import { type CandidateInFull } from '#shared/contract/candidate-routes';
import { type MoveName } from '#shared/contract/candidate-moves';
import { actorOf } from '../accounts/actor';
import { type PersonCalling } from '../api/caller';
import { personOf, type Asked } from '../api/serve';
import { change, type Tx } from '../audit/change';
import { type Ground } from '../ground';
import { openNetwork } from '../networks/network-rows';
import { type Making } from '../networks/note-setup';
import { candidateOfId } from './candidate-in-full';
import { candidateRow, type CandidateRow } from './candidate-rows';
import { keepStep, refuseStale, type Step, touch } from './candidate-steps';
import { refuseMove } from './relations';

/** A request for a move of a candidate that was seen at its version. */
export type MoveAsked = Asked<{ readonly candidateId: number }, unknown, { readonly version: number }>;

/** What is moved, and in what. */
export interface Moving {
  readonly making: Making;
  /** As it was before. */
  readonly row: CandidateRow;
  readonly caller: PersonCalling;
}

/** What a move did, for the history, and what it changed in the candidate's own row. */
export type Moved = Omit<Step, 'candidateId'> & { readonly changed?: Parameters<typeof touch>[2] };

/**
 * Makes a move of a candidate: whether it may be made is judged in the transaction that makes it, by what everyone is to the candidate then.
 *
 * @param callerIn who asks, with the roles that they hold in the transaction
 * @returns the candidate as it is after
 * @throws Refusal 403, 409 by the table of moves; 409 of a version that is not the last
 */
export function moveCandidate(
  asked: MoveAsked,
  ground: Ground,
  name: MoveName,
  work: (moving: Moving) => Moved,
  callerIn: (tx: Tx) => PersonCalling = () => personOf(asked),
): CandidateInFull {
  const { candidateId } = asked.params;
  const actor = actorOf(asked);
  return change(ground, actor, (tx, note) => {
    const making = { tx, note, actor, nowMs: ground.nowMs() };
    const caller = callerIn(tx);
    const row = candidateRow(tx, candidateId);
    refuseMove(name, tx, row, caller);
    openNetwork(tx, row.networkId);
    refuseStale(tx, candidateId, asked.body.version);
    const { changed, ...step } = work({ making, row, caller });
    touch(making, candidateId, changed);
    keepStep(making, ground.db, { candidateId, ...step });
    return candidateOfId(ground.db, candidateId, caller);
  });
}
