import { createHash } from 'node:crypto';
import { type Certificate, type FrozenInputs, type FrozenSignature } from '#shared/contract/certificate';
import { recomputed } from '#shared/contract/recompute';
import { type SignedPart, signatureSha256 } from '#shared/contract/signature-hash';
import { canonicalJson } from '#shared/review/canonical';
import { numbersOf, proposedClaims } from '#shared/review/claims';
import { earthBarycentricVelocityMS } from '../../backend/frames/ephemeris';

export const sha256 = (text: string): string => createHash('sha256').update(text).digest('hex');

/** A certificate with every hash made anew, as somebody would who wants to hide what they altered. */
export function resealed(certificate: Certificate): Certificate {
  const ofSnapshot = sha256(canonicalJson(certificate.snapshot));
  const signatures: FrozenSignature[] = [];
  for (const signature of certificate.signatures) {
    const signed = { ...signature, snapshotSha256: ofSnapshot, previousSha256: signatures.at(-1)?.sha256 ?? null };
    signatures.push({ ...signed, sha256: signatureSha256(signed, sha256) });
  }
  const last = signatures.at(-1);
  const standing = signatures.map((signature) =>
    signature.supersededBy === null || !last ? signature : { ...signature, supersededBy: last.sha256 },
  );
  return { ...certificate, sha256: ofSnapshot, signatures: standing, signaturesSha256: sha256(canonicalJson(standing)) };
}

const signed = (name: string, decision: 'confirm' | 'dispute', minute: number, claims: SignedPart['claims']): FrozenSignature => ({
  ...{ name, decision, claims },
  reason: decision === 'dispute' ? 'the clock of A jumped' : '',
  signedAt: `2026-03-02T10:0${minute}:00.000Z`,
  ...{ snapshotSha256: '', previousSha256: null, sha256: '', withdrawnAt: null, supersededBy: null },
});

/** A certificate of frozen inputs: every claim that is proposed, and three signatures, of which the last supersedes the first and the second is withdrawn. */
export function certificateOf(inputs: FrozenInputs): Certificate {
  const results = recomputed(inputs, earthBarycentricVelocityMS);
  if (!results.ok) throw new Error(`${results.problem.where}: ${results.problem.text}`);
  const set = { ...results.value, sigmas: inputs.sigmas };
  const claims = proposedClaims(set).map((claim) => ({ ...claim, state: 'accepted' as const, note: '', numbers: numbersOf(set, claim) }));
  const ofFirst = (decision: 'confirm' | 'dispute') =>
    claims.length > 0 ? [{ claim: 1, decision, reason: decision === 'dispute' ? 'see above' : '' }] : [];
  return resealed({
    format: 'skewline-certificate',
    version: 1,
    snapshot: {
      network: { code: 'axes', name: inputs.network.network },
      candidate: { number: 7, title: 'A short burst', about: 'Seen by \u201call\u201d sites', author: 'Ada Moreau' },
      snapshot: 1,
      createdAt: '2026-03-02T09:00:00.000Z',
      program: '0.1.0',
      inputs,
      results: results.value,
      claims,
    },
    sha256: '',
    signatures: [
      { ...signed('Vera Novak', 'dispute', 1, ofFirst('dispute')), supersededBy: 'the last' },
      { ...signed('Ilya Brandt', 'confirm', 2, ofFirst('confirm')), withdrawnAt: '2026-03-02T10:05:00.000Z' },
      signed('Vera Novak', 'confirm', 6, ofFirst('confirm')),
    ],
    signaturesSha256: '',
  });
}
