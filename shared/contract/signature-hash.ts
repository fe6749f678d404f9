import { canonicalJson } from '../review/canonical';
import { type FrozenSignature } from './certificate';

/** Hashes a text's UTF-8 bytes to 64 lower-case hex digits. */
export type Sha256 = (text: string) => string;

/** What a signature's hash covers: all of it but the hash itself and what became of it later. */
export type SignedPart = Omit<FrozenSignature, 'sha256' | 'withdrawnAt' | 'supersededBy'>;

/**
 * The hash of a signature, which the candidate's next one names: over who decided what, when, on which snapshot, and the hash of the signature
 * before it.
 */
export function signatureSha256(signature: SignedPart, sha256: Sha256): string {
  const { name, decision, reason, claims, signedAt, snapshotSha256, previousSha256 } = signature;
  return sha256(canonicalJson({ name, decision, reason, claims, signedAt, snapshotSha256, previousSha256 }));
}
