/** What a candidate may be. */
export const CANDIDATE_STATES = ['draft', 'in-review', 'confirmed', 'disputed', 'withdrawn'] as const;
export type CandidateState = (typeof CANDIDATE_STATES)[number];

/**
 * What someone is to a candidate: its author; another analyst; one who is asked to review it and neither wrote nor edited it; any reviewer of
 * its network; a coordinator. One person may be several of them.
 */
export const RELATIONS = ['author', 'analyst', 'reviewer', 'reader', 'coordinator'] as const;
export type Relation = (typeof RELATIONS)[number];

/** Who may do something, and in which states: as long as the candidate's numbers stand, and once it is out of date. */
interface Move {
  readonly who: readonly Relation[];
  readonly from: readonly CandidateState[];
  readonly fromOutOfDate: readonly CandidateState[];
}

const ANY_BUT_WITHDRAWN = ['draft', 'in-review', 'confirmed', 'disputed'] as const;
const REVIEWED = ['in-review', 'confirmed', 'disputed'] as const;

/** Every move of a candidate: what is not here cannot be done. */
export const MOVES = {
  /** Title, events, frames, claims. What is reviewed stands as it is until its numbers no longer do. */
  edit: { who: ['author', 'analyst'], from: ['draft', 'disputed'], fromOutOfDate: ANY_BUT_WITHDRAWN },
  /** Freezes a snapshot and asks for review: the first, the answer to a dispute, or the one after the numbers changed. */
  submit: { who: ['author'], from: ['draft', 'disputed'], fromOutOfDate: ANY_BUT_WITHDRAWN },
  'name-reviewers': { who: ['author', 'coordinator'], from: ANY_BUT_WITHDRAWN, fromOutOfDate: ANY_BUT_WITHDRAWN },
  /** A decision on a snapshot, or another one in its place; none on numbers that no longer stand. */
  sign: { who: ['reviewer'], from: REVIEWED, fromOutOfDate: [] },
  /** Within ten minutes. */
  'withdraw-signature': { who: ['reviewer'], from: REVIEWED, fromOutOfDate: REVIEWED },
  comment: { who: RELATIONS, from: ANY_BUT_WITHDRAWN, fromOutOfDate: ANY_BUT_WITHDRAWN },
  /** For good. */
  withdraw: { who: ['author', 'coordinator'], from: ANY_BUT_WITHDRAWN, fromOutOfDate: ANY_BUT_WITHDRAWN },
} as const satisfies Readonly<Record<string, Move>>;

export type MoveName = keyof typeof MOVES;
export const MOVE_NAMES = Object.keys(MOVES).filter((name): name is MoveName => name in MOVES);

/** A candidate as its moves depend on it. */
export interface Standing {
  readonly state: CandidateState;
  readonly isOutOfDate: boolean;
}

/**
 * Judges a move by the table alone.
 *
 * @param name of the move
 * @param standing what the candidate is
 * @param relations what the person is to it
 * @returns 'not-theirs' when it is never theirs to make, 'not-now' when the candidate's state does not allow it
 */
export function judgeMove(
  name: MoveName,
  { state, isOutOfDate }: Standing,
  relations: readonly Relation[],
): 'allowed' | 'not-theirs' | 'not-now' {
  const { who, from, fromOutOfDate }: Move = MOVES[name];
  if (!relations.some((relation) => who.includes(relation))) return 'not-theirs';
  return (isOutOfDate ? fromOutOfDate : from).includes(state) ? 'allowed' : 'not-now';
}

/** A signature on the snapshot that is reviewed, as the state depends on it. */
export interface Decided {
  readonly decision: 'confirm' | 'dispute';
  readonly isWithdrawn: boolean;
  /** Whether its person has signed anew since. */
  readonly isSuperseded: boolean;
}

/**
 * What a submitted candidate is by the signatures on its snapshot: disputed by one dispute, even where its person has confirmed since (the
 * author answers it with a new snapshot), else confirmed by as many as are needed.
 */
export function stateBySignatures(signatures: readonly Decided[], needed: number): 'in-review' | 'confirmed' | 'disputed' {
  const counted = signatures.filter(({ isWithdrawn }) => !isWithdrawn);
  if (counted.some(({ decision }) => decision === 'dispute')) return 'disputed';
  return counted.filter(({ isSuperseded }) => !isSuperseded).length >= needed ? 'confirmed' : 'in-review';
}
