import { eq } from 'drizzle-orm';
import { type ClaimDecided, type ClaimGiven, MOST_CLAIMS } from '#shared/contract/candidate-routes';
import { numbersOf, proposedClaims, whyNotSupported } from '#shared/review/claims';
import { claims, comments } from '#schema/schema';
import { conflict } from '../api/refusal';
import { type Db } from '../db';
import { utcText } from '../ground';
import { makerOf, type Making } from '../networks/note-setup';
import { candidateRow } from './candidate-rows';
import { type ClaimById, type ClaimGround, claimGroundOf } from './claim-ground';
import { type ClaimRow } from './claim-rows';

type StoredClaim = Pick<ClaimRow, 'kind' | 'aTriggerId' | 'bTriggerId' | 'frameId'>;

const byIdOf = ({ kind, aTriggerId, bTriggerId, frameId }: StoredClaim): ClaimById => ({ kind, a: aTriggerId, b: bTriggerId, frameId });
const columnsOf = ({ kind, a, b, frameId }: ClaimById): StoredClaim => ({ kind, aTriggerId: a, bTriggerId: b, frameId });
/** What makes two claims the same one. */
const keyOf = ({ kind, a, b, frameId }: ClaimById): string => [kind, a, b, frameId].join(' ');
const storedKey = (claim: StoredClaim): string => keyOf(byIdOf(claim));

/**
 * Puts what the program proposes now in the place of what it proposed before and nobody has decided on; what was claimed of an event or frame
 * that is the candidate's no more is dropped.
 */
export function proposeAnew({ tx, actor, nowMs }: Making, db: Db, candidateId: number): void {
  const ground = claimGroundOf(db, candidateRow(tx, candidateId));
  const stored = tx.select().from(claims).where(eq(claims.candidateId, candidateId)).all();
  const proposed = new Map(proposedClaims(ground.set).map((claim) => [keyOf(ground.byId(claim)), claim]));
  for (const claim of stored) {
    const again = proposed.get(storedKey(claim));
    proposed.delete(storedKey(claim));
    if (claim.state === 'proposed' && again)
      tx.update(claims)
        .set({ numbers: JSON.stringify(numbersOf(ground.set, again)) })
        .where(eq(claims.id, claim.id))
        .run();
    else if (claim.state === 'proposed' && !isSpokenOf(tx, claim.id)) tx.delete(claims).where(eq(claims.id, claim.id)).run();
    else if (claim.state === 'proposed' || (claim.state !== 'dropped' && !ground.isOf(byIdOf(claim))))
      tx.update(claims)
        .set({ state: 'dropped', editedBy: makerOf(actor), editedAt: utcText(nowMs) })
        .where(eq(claims.id, claim.id))
        .run();
  }
  for (const claim of proposed.values())
    tx.insert(claims)
      .values({ candidateId, ...columnsOf(ground.byId(claim)), state: 'proposed', numbers: JSON.stringify(numbersOf(ground.set, claim)) })
      .run();
}

/** Whether someone has commented on a claim, which then stays. */
const isSpokenOf = (tx: Making['tx'], claimId: number): boolean =>
  tx.select({ id: comments.id }).from(comments).where(eq(comments.claimId, claimId)).get() !== undefined;

/**
 * Claims something that the program has not proposed.
 *
 * @throws Refusal where it is claimed already, or the numbers do not carry it
 */
export function addClaim({ tx, actor, nowMs }: Making, db: Db, candidateId: number, { note = '', ...given }: ClaimGiven): void {
  const known = tx.select().from(claims).where(eq(claims.candidateId, candidateId)).all();
  if (known.length >= MOST_CLAIMS) throw conflict(`The candidate has ${MOST_CLAIMS} claims, which is the most.`);
  refuseSame(known, given);
  const numbers = carriedNumbers(claimGroundOf(db, candidateRow(tx, candidateId)), given);
  tx.insert(claims)
    .values({ candidateId, ...columnsOf(given), state: 'accepted', numbers, note, editedBy: makerOf(actor), editedAt: utcText(nowMs) })
    .run();
}

/**
 * Accepts a claim as it stands, weakens it to another, or drops it.
 *
 * @throws Refusal where the numbers do not carry what would be claimed, or another claim says it already
 */
export function decideClaim({ tx, actor, nowMs }: Making, db: Db, claim: ClaimRow, { state, as, note }: ClaimDecided): void {
  const claimed = as ?? byIdOf(claim);
  const others = tx
    .select()
    .from(claims)
    .where(eq(claims.candidateId, claim.candidateId))
    .all()
    .filter(({ id }) => id !== claim.id);
  if (as) refuseSame(others, as);
  const numbers = state === 'dropped' ? claim.numbers : carriedNumbers(claimGroundOf(db, candidateRow(tx, claim.candidateId)), claimed);
  tx.update(claims)
    .set({
      ...columnsOf(claimed),
      state,
      numbers,
      ...(note !== undefined && { note }),
      editedBy: makerOf(actor),
      editedAt: utcText(nowMs),
    })
    .where(eq(claims.id, claim.id))
    .run();
}

function refuseSame(known: readonly ClaimRow[], given: ClaimById): void {
  const same = known.find((claim) => storedKey(claim) === keyOf(given));
  if (same) throw conflict(`Claim ${same.id} says the same, and is ${same.state}: decide on that one.`);
}

/** The numbers of a claim, as JSON; refused where they do not carry it. */
function carriedNumbers(ground: ClaimGround, given: ClaimById): string {
  const claim = ground.claimOf(given);
  const why = whyNotSupported(ground.set, claim);
  if (why !== undefined) throw conflict(`The numbers do not carry the claim: ${why}.`);
  return JSON.stringify(numbersOf(ground.set, claim));
}
