import { and, eq } from 'drizzle-orm';
import { type Certificate, CERTIFICATE_FORMAT, snapshotBody } from '#shared/contract/certificate';
import { type SnapshotInFull } from '#shared/contract/review-routes';
import { canonicalJson } from '#shared/review/canonical';
import { snapshots } from '#schema/schema';
import { absent, conflict } from '../api/refusal';
import { type Db } from '../db';
import { candidateRow } from './candidate-rows';
import { frozenSignaturesOf, somebody } from './review-rows';
import { sha256 } from './sha256';

type Rows = Pick<Db, 'select'>;

/** A snapshot of a candidate by its number; refused as absent when there is none. */
export function snapshotOf(db: Rows, candidateId: number, number: number): SnapshotInFull {
  const row = db
    .select()
    .from(snapshots)
    .where(and(eq(snapshots.candidateId, candidateId), eq(snapshots.number, number)))
    .get();
  if (!row) throw absent();
  const { sha256: hash, createdAt, createdBy, body } = row;
  return { number, sha256: hash, createdAt, createdBy: somebody(db, createdBy), body: snapshotBody.parse(JSON.parse(body)) };
}

/** The certificate of a candidate's last snapshot, as it stands in its file. */
export function certificateOf(db: Rows, candidateId: number): { readonly fileName: string; readonly text: string } {
  const { snapshotId } = candidateRow(db, candidateId);
  const row = snapshotId === null ? undefined : db.select().from(snapshots).where(eq(snapshots.id, snapshotId)).get();
  if (!row) throw conflict('The candidate was never submitted: a certificate is of a snapshot.');
  const snapshot = snapshotBody.parse(JSON.parse(row.body));
  const signatures = frozenSignaturesOf(db, candidateId);
  const certificate: Certificate = {
    format: CERTIFICATE_FORMAT,
    version: 1,
    snapshot,
    sha256: row.sha256,
    signatures,
    signaturesSha256: sha256(canonicalJson(signatures)),
  };
  return { fileName: `${snapshot.network.code}-${snapshot.candidate.number}-${row.number}.json`, text: canonicalJson(certificate) };
}
