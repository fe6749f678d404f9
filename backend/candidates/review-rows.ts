import { and, asc, eq, isNull } from 'drizzle-orm';
import { type CandidateInFull, type CandidateSignature } from '#shared/contract/candidate-routes';
import { type FrozenSignature } from '#shared/contract/certificate';
import { candidateVersions, claimDecisions, people, reviewers, signatures, snapshots } from '#schema/schema';
import { type Db } from '../db';

type Rows = Pick<Db, 'select'>;

/** Somebody's name beside their id. */
export const somebody = (db: Rows, id: number): CandidateInFull['author'] => ({
  id,
  name: db.select({ name: people.name }).from(people).where(eq(people.id, id)).get()?.name ?? '',
});

/** A snapshot without its body; null for none. */
export function snapshotHeadOf(db: Rows, snapshotId: number | null): CandidateInFull['snapshot'] {
  if (snapshotId === null) return null;
  const row = db
    .select({ number: snapshots.number, sha256: snapshots.sha256, createdAt: snapshots.createdAt, createdBy: snapshots.createdBy })
    .from(snapshots)
    .where(eq(snapshots.id, snapshotId))
    .get();
  return row ? { ...row, createdBy: somebody(db, row.createdBy) } : null;
}

/** Who is asked to review a candidate. */
export const reviewersOf = (db: Rows, candidateId: number): CandidateInFull['reviewers'] =>
  db
    .select({ id: people.id, name: people.name, namedAt: reviewers.namedAt, namedBy: reviewers.namedBy })
    .from(reviewers)
    .innerJoin(people, eq(people.id, reviewers.personId))
    .where(and(eq(reviewers.candidateId, candidateId), isNull(reviewers.releasedAt)))
    .orderBy(asc(reviewers.namedAt), asc(people.id))
    .all()
    .map(({ namedBy, ...row }) => ({ ...row, namedBy: somebody(db, namedBy) }));

/** A signature with what it signs, as stored. */
type SignatureRow = typeof signatures.$inferSelect & { readonly snapshot: number };

const signatureRows = (db: Rows, candidateId: number): SignatureRow[] =>
  db
    .select({ signature: signatures, snapshot: snapshots.number })
    .from(signatures)
    .innerJoin(snapshots, eq(snapshots.id, signatures.snapshotId))
    .where(eq(signatures.candidateId, candidateId))
    .orderBy(asc(signatures.id))
    .all()
    .map(({ signature, snapshot }) => ({ ...signature, snapshot }));

/** The decisions of a signature, by the places of claims in the snapshot. */
function decisionsOf(db: Rows, { id, snapshotId, candidateId }: SignatureRow): CandidateSignature['claims'] {
  const placeOf = new Map(frozenClaimIds(db, candidateId, snapshotId).map((claimId, at) => [claimId, at + 1]));
  return db
    .select()
    .from(claimDecisions)
    .where(eq(claimDecisions.signatureId, id))
    .all()
    .map(({ claimId, decision, reason }) => ({ claim: placeOf.get(claimId) ?? 0, decision, reason }))
    .sort((a, b) => a.claim - b.claim);
}

/** All signatures of a candidate, in their order. */
export const signaturesOf = (db: Rows, candidateId: number): CandidateSignature[] =>
  signatureRows(db, candidateId).map((row) => {
    const { id, snapshot, personId, name, decision, reason, signedAt, withdrawnAt, supersededById, sha256 } = row;
    const person = { id: personId, name };
    return { id, snapshot, person, decision, reason, claims: decisionsOf(db, row), signedAt, withdrawnAt, supersededById, sha256 };
  });

/** The same as they stand in a certificate. */
export function frozenSignaturesOf(db: Rows, candidateId: number): FrozenSignature[] {
  const rows = signatureRows(db, candidateId);
  const hashOf = new Map(rows.map(({ id, sha256 }) => [id, sha256]));
  return rows.map((row) => {
    const { name, decision, reason, signedAt, snapshotSha256, previousSha256, sha256, withdrawnAt, supersededById } = row;
    const supersededBy = supersededById === null ? null : (hashOf.get(supersededById) ?? null);
    return {
      name,
      decision,
      reason,
      claims: decisionsOf(db, row),
      signedAt,
      snapshotSha256,
      previousSha256,
      sha256,
      withdrawnAt,
      supersededBy,
    };
  });
}

/** What a submission's step keeps beside the candidate, since its claims go on to change: which of them are the snapshot's, in its order. */
export interface Frozen {
  readonly snapshotId: number;
  readonly claimIds: readonly number[];
}

/** The ids of a snapshot's claims, in the snapshot's order. */
export function frozenClaimIds(db: Rows, candidateId: number, snapshotId: number): readonly number[] {
  const steps = db
    .select({ body: candidateVersions.body })
    .from(candidateVersions)
    .where(and(eq(candidateVersions.candidateId, candidateId), eq(candidateVersions.action, 'submitted')))
    .all();
  for (const { body } of steps) {
    const { frozen } = JSON.parse(body) as { readonly frozen?: Frozen };
    if (frozen?.snapshotId === snapshotId) return frozen.claimIds;
  }
  throw new Error(`the history of candidate ${candidateId} has no submission of snapshot ${snapshotId}`);
}
