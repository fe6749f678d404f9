import { and, asc, eq } from 'drizzle-orm';
import { claimNumbers } from '#shared/contract/certificate';
import { type CandidateClaim } from '#shared/contract/candidate-routes';
import { claims, frames, people } from '#schema/schema';
import { absent } from '../api/refusal';
import { type Db } from '../db';

export type ClaimRow = typeof claims.$inferSelect;

/** The row of a claim of a candidate; refused as absent when there is none. */
export function claimRow(db: Pick<Db, 'select'>, candidateId: number, claimId: number): ClaimRow {
  const row = db
    .select()
    .from(claims)
    .where(and(eq(claims.id, claimId), eq(claims.candidateId, candidateId)))
    .get();
  if (!row) throw absent();
  return row;
}

/** The claims of a candidate in the order in which they came. */
export const claimsOf = (db: Pick<Db, 'select'>, candidateId: number): CandidateClaim[] =>
  db
    .select({
      id: claims.id,
      kind: claims.kind,
      a: claims.aTriggerId,
      b: claims.bTriggerId,
      frameId: claims.frameId,
      frame: frames.code,
      state: claims.state,
      numbers: claims.numbers,
      note: claims.note,
      editedById: claims.editedBy,
      editedByName: people.name,
      editedAt: claims.editedAt,
    })
    .from(claims)
    .leftJoin(frames, eq(frames.id, claims.frameId))
    .leftJoin(people, eq(people.id, claims.editedBy))
    .where(eq(claims.candidateId, candidateId))
    .orderBy(asc(claims.id))
    .all()
    .map(({ numbers, editedById, editedByName, ...row }) => ({
      ...row,
      numbers: claimNumbers.parse(JSON.parse(numbers)),
      editedBy: editedById === null ? null : { id: editedById, name: editedByName ?? '' },
    }));
