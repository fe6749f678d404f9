import { createHash } from 'node:crypto';
import { type audit } from '#schema/schema';

export type AuditRow = typeof audit.$inferSelect;

/** What the first row's hash covers in place of a row before it. */
export const NO_ROW_BEFORE = Buffer.alloc(32);

/**
 * The hash of an audit row: SHA-256 over the JSON array of its fields in this order, the hash of the row before it last, in hex.
 *
 * @param row all of it but its own hash
 */
export function rowHash(row: Omit<AuditRow, 'hash'>): Buffer {
  const { seq, at, actorKind, actorId, action, networkId, subjectKind, subjectId, details, requestId, previousHash } = row;
  const fields = [seq, at, actorKind, actorId, action, networkId, subjectKind, subjectId, details, requestId, previousHash.toString('hex')];
  return createHash('sha256').update(JSON.stringify(fields)).digest();
}
