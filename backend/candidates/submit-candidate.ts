import { eq, max } from 'drizzle-orm';
import { type FrozenClaim, type SnapshotBody } from '#shared/contract/certificate';
import { canonicalJson } from '#shared/review/canonical';
import { numbersOf, whyNotSupported } from '#shared/review/claims';
import { claims, snapshotEvents, snapshots } from '#schema/schema';
import { newSecret } from '../accounts/secret-token';
import { conflict } from '../api/refusal';
import { type Db } from '../db';
import { utcText } from '../ground';
import { networkRow } from '../networks/network-rows';
import { type CandidateRow } from './candidate-rows';
import { claimsOf } from './claim-rows';
import { type FrozenNumbers, frozenNumbers } from './frozen-numbers';
import { type Moved, type Moving } from './moved';
import { somebody } from './review-rows';
import { sha256 } from './sha256';

const REPORT_CODE_BITS = 120;

/** A candidate's claims as they are frozen, with their ids in the same order. */
interface ClaimsFrozen {
  readonly ids: readonly number[];
  readonly claims: readonly FrozenClaim[];
}

/** What is claimed, by the numbers of now; refused where they do not carry it, or nothing is claimed. */
function frozenClaims(db: Db, { id }: CandidateRow, { inputs, results, events }: FrozenNumbers): ClaimsFrozen {
  const set = { sigmas: inputs.sigmas, ...results };
  const placeOf = new Map(events.map((event, at) => [event.id, at + 1]));
  const claimed = claimsOf(db, id).filter(({ state }) => state === 'accepted' || state === 'weakened');
  if (claimed.length === 0) throw conflict('Nothing is claimed yet: accept or weaken at least one of the claims.');
  const frozen = claimed.map(({ id: claimId, kind, a, b, frame, state, note }): FrozenClaim => {
    const claim = { kind, a: a === null ? null : (placeOf.get(a) ?? 0), b: b === null ? null : (placeOf.get(b) ?? 0), frame };
    const why = whyNotSupported(set, claim);
    if (why !== undefined) throw conflict(`The numbers do not carry claim ${claimId} any more: ${why}. Weaken or drop it.`);
    return { ...claim, state, note, numbers: numbersOf(set, claim) };
  });
  return { ids: claimed.map((claim) => claim.id), claims: frozen };
}

/**
 * Freezes what a candidate's claims rest on under one hash, and asks for review: signatures on a former snapshot stand as they are, and count
 * no more.
 *
 * @param db the writing connection
 * @param program the version that computes it
 * @throws Refusal where nothing is claimed, the numbers do not carry a claim, or they are being computed anew
 */
export function submitCandidate(db: Db, program: string, { making: { tx, nowMs }, row, caller }: Moving): Moved {
  const numbers = frozenNumbers(db, row);
  const { ids, claims: frozen } = frozenClaims(db, row, numbers);
  for (const [at, claim] of frozen.entries())
    tx.update(claims)
      .set({ numbers: JSON.stringify(claim.numbers) })
      .where(eq(claims.id, ids[at] ?? 0))
      .run();
  const [last] = tx
    .select({ number: max(snapshots.number) })
    .from(snapshots)
    .where(eq(snapshots.candidateId, row.id))
    .all();
  const number = (last?.number ?? 0) + 1;
  const createdAt = utcText(nowMs);
  const { code, name } = networkRow(tx, row.networkId);
  const body: SnapshotBody = {
    network: { code, name },
    candidate: { number: row.number, title: row.title, about: row.about, author: somebody(tx, row.authorId).name },
    snapshot: number,
    createdAt,
    program,
    inputs: numbers.inputs,
    results: numbers.results,
    claims: [...frozen],
  };
  const text = canonicalJson(body);
  const { id: snapshotId } = tx
    .insert(snapshots)
    .values({
      candidateId: row.id,
      number,
      sha256: sha256(text),
      body: text,
      program,
      createdAt,
      createdBy: caller.personId,
      reportCode: newSecret(REPORT_CODE_BITS),
    })
    .returning({ id: snapshots.id })
    .get();
  for (const { id: triggerId, version: eventVersion } of numbers.events)
    tx.insert(snapshotEvents).values({ snapshotId, triggerId, eventVersion }).run();
  return {
    action: 'submitted',
    frozen: { snapshotId, claimIds: ids },
    changed: { state: 'in-review', snapshotId, outOfDateAt: null, submittedAt: createdAt },
  };
}
