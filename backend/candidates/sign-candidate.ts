import { and, desc, eq, isNull, sql } from 'drizzle-orm';
import { stateBySignatures } from '#shared/contract/candidate-moves';
import { type Signing } from '#shared/contract/review-routes';
import { signatureSha256 } from '#shared/contract/signature-hash';
import { claimDecisions, signatures, snapshots } from '#schema/schema';
import { absent, conflict, Refusal, unusable } from '../api/refusal';
import { type Tx } from '../audit/change';
import { utcText } from '../ground';
import { networkRow } from '../networks/network-rows';
import { type CandidateRow } from './candidate-rows';
import { type Moved, type Moving } from './moved';
import { frozenClaimIds, somebody } from './review-rows';
import { sha256 } from './sha256';

/** For so long a signature can be withdrawn. */
const WITHDRAWABLE_MS = 10 * 60_000;

type Decision = Omit<Signing, 'password' | 'version'>;

/**
 * Signs the present snapshot of a candidate, in place of what the same person signed of it before.
 *
 * @throws Refusal 409 where the hash is not the present snapshot's, 400 where the decisions on claims do not fit the whole
 */
export function signCandidate({ making: { tx, nowMs }, row, caller }: Moving, given: Decision): Moved {
  const { snapshotId } = row;
  const snapshot = snapshotId === null ? undefined : tx.select().from(snapshots).where(eq(snapshots.id, snapshotId)).get();
  if (!snapshot) throw conflict('The candidate has no snapshot yet.');
  if (snapshot.sha256 !== given.snapshotSha256)
    throw new Refusal(
      409,
      'Changed meanwhile',
      `You saw another snapshot: the present one is number ${snapshot.number}. Read it, and decide anew.`,
      {
        where: 'snapshotSha256',
      },
    );
  const claimIds = frozenClaimIds(tx, row.id, snapshot.id);
  refuseUnfit(given, claimIds.length);
  const claims = given.claims.toSorted((a, b) => a.claim - b.claim);
  const last = tx.select().from(signatures).orderBy(desc(signatures.id)).limit(1).get();
  const before = tx.select().from(signatures).where(eq(signatures.candidateId, row.id)).orderBy(desc(signatures.id)).limit(1).get();
  const signed = {
    name: somebody(tx, caller.personId).name,
    decision: given.decision,
    reason: given.reason,
    signedAt: utcText(nowMs),
    snapshotSha256: snapshot.sha256,
    previousSha256: before?.sha256 ?? null,
  };
  const id = (last?.id ?? 0) + 1;
  // One signature of each person stands, so the former must give way before the later is there for it to name.
  tx.run(sql`PRAGMA defer_foreign_keys = ON`);
  tx.update(signatures).set({ supersededById: id }).where(standing(snapshot.id, caller.personId)).run();
  tx.insert(signatures)
    .values({
      id,
      candidateId: row.id,
      snapshotId: snapshot.id,
      personId: caller.personId,
      ...signed,
      sha256: signatureSha256({ ...signed, claims }, sha256),
    })
    .run();
  for (const { claim, decision, reason } of claims)
    tx.insert(claimDecisions)
      .values({ signatureId: id, claimId: claimIds[claim - 1] ?? 0, decision, reason })
      .run();
  return { action: 'signed', changed: { state: stateNow(tx, row) } };
}

const standing = (snapshotId: number, personId: number) =>
  and(
    eq(signatures.snapshotId, snapshotId),
    eq(signatures.personId, personId),
    isNull(signatures.withdrawnAt),
    isNull(signatures.supersededById),
  );

function refuseUnfit({ decision, claims }: Decision, count: number): void {
  const places = new Set<number>();
  for (const [at, { claim, decision: ofClaim }] of claims.entries()) {
    if (claim > count) throw unusable({ where: `claims[${at}].claim`, text: `is ${claim}; the snapshot has the claims 1 to ${count}` });
    if (places.has(claim))
      throw unusable({ where: `claims[${at}].claim`, text: `is ${claim} for the second time; each must be decided once` });
    if (decision === 'confirm' && ofClaim === 'dispute')
      throw unusable({ where: 'decision', text: `is "confirm"; it must be "dispute" where a claim is disputed, as claim ${claim} is` });
    places.add(claim);
  }
  if (decision === 'confirm' && places.size < count)
    throw unusable({ where: 'claims', text: `decides on ${places.size} of ${count} claims; who confirms the whole must confirm each` });
}

/** What a candidate is by the signatures on its present snapshot. */
function stateNow(tx: Tx, { networkId, snapshotId }: CandidateRow): CandidateRow['state'] {
  const decided = tx
    .select()
    .from(signatures)
    .where(eq(signatures.snapshotId, snapshotId ?? 0))
    .all()
    .map(({ decision, withdrawnAt, supersededById }) => ({
      decision,
      isWithdrawn: withdrawnAt !== null,
      isSuperseded: supersededById !== null,
    }));
  return stateBySignatures(decided, networkRow(tx, networkId).neededSignatures);
}

/**
 * Takes back one's own signature on the present snapshot.
 *
 * @throws Refusal 404 where it is not one's own there, 409 when ten minutes are over or it does not stand
 */
export function withdrawSignature({ making: { tx, nowMs }, row, caller }: Moving, signatureId: number): Moved {
  const signature = tx.select().from(signatures).where(eq(signatures.id, signatureId)).get();
  if (signature?.candidateId !== row.id || signature.personId !== caller.personId) throw absent();
  if (signature.snapshotId !== row.snapshotId) throw conflict('The signature is on a former snapshot, and stays there.');
  if (signature.withdrawnAt !== null || signature.supersededById !== null) throw conflict('The signature does not stand any more.');
  if (nowMs - Date.parse(signature.signedAt) > WITHDRAWABLE_MS)
    throw conflict('The ten minutes are over in which a signature can be withdrawn: sign anew, and the later one stands in its place.');
  tx.update(signatures)
    .set({ withdrawnAt: utcText(nowMs) })
    .where(eq(signatures.id, signatureId))
    .run();
  return { action: 'signature-withdrawn', changed: { state: stateNow(tx, row) } };
}
