import { and, asc, eq, gt, inArray, isNull, or } from 'drizzle-orm';
import { type Colleague } from '#shared/contract/review-routes';
import { rolesAt } from '#shared/contract/roles';
import { people, reviewers, roles, signatures } from '#schema/schema';
import { holdsAt, rolesOf } from '../accounts/roles-of';
import { absent, conflict, unusable } from '../api/refusal';
import { type Db } from '../db';
import { utcText } from '../ground';
import { type Moved, type Moving } from './moved';
import { hasEdited } from './relations';
import { somebody } from './review-rows';

const SEE_CANDIDATES = ['coordinator', 'analyst', 'reviewer'] as const;

/** Those who see candidates of a network, in the order in which they came, from behind an id on. */
export const colleaguesOf = (
  db: Pick<Db, 'select' | 'selectDistinct'>,
  networkId: number,
  { afterId, most, nowMs }: { readonly afterId: number; readonly most: number; readonly nowMs: number },
): Colleague[] =>
  db
    .selectDistinct({ id: people.id, name: people.name })
    .from(roles)
    .innerJoin(people, eq(people.id, roles.personId))
    .where(
      and(
        inArray(roles.role, SEE_CANDIDATES),
        or(eq(roles.networkId, networkId), isNull(roles.networkId)),
        holdsAt(nowMs),
        isNull(people.disabledAt),
        gt(people.id, afterId),
      ),
    )
    .orderBy(asc(people.id))
    .limit(most)
    .all()
    .map((person) => {
      const held = rolesAt(rolesOf(db, person.id, nowMs), { kind: 'network', networkId });
      return { ...person, roles: SEE_CANDIDATES.filter((role) => held.includes(role)) };
    });

/**
 * Asks people to review a candidate.
 *
 * @throws Refusal where one is no reviewer of the network, or wrote or edited the candidate
 */
export function nameReviewers({ making: { tx, nowMs }, row, caller }: Moving, personIds: readonly number[]): Moved {
  for (const [at, personId] of personIds.entries()) {
    const [found] = colleaguesOf(tx, row.networkId, { afterId: personId - 1, most: 1, nowMs });
    if (found?.id !== personId || !found.roles.includes('reviewer'))
      throw unusable({ where: `personIds[${at}]`, text: `is ${personId}; it must be the id of a reviewer of this network` });
    if (hasEdited(tx, row, personId)) throw conflict(`${found.name} wrote or edited the candidate: nobody reviews their own work.`);
    const asked = { namedAt: utcText(nowMs), namedBy: caller.personId, releasedAt: null };
    tx.insert(reviewers)
      .values({ candidateId: row.id, personId, ...asked })
      .onConflictDoUpdate({ target: [reviewers.candidateId, reviewers.personId], set: asked })
      .run();
  }
  return { action: 'reviewers-named' };
}

/**
 * Asks someone no more.
 *
 * @throws Refusal where they are not asked, or a signature of theirs on the present snapshot stands
 */
export function releaseReviewer({ making: { tx, nowMs }, row }: Moving, personId: number): Moved {
  const signed = tx
    .select({ id: signatures.id })
    .from(signatures)
    .where(
      and(
        eq(signatures.snapshotId, row.snapshotId ?? 0),
        eq(signatures.personId, personId),
        isNull(signatures.withdrawnAt),
        isNull(signatures.supersededById),
      ),
    )
    .get();
  if (signed) throw conflict(`${somebody(tx, personId).name} has signed the snapshot: the signature stands.`);
  const released = tx
    .update(reviewers)
    .set({ releasedAt: utcText(nowMs) })
    .where(and(eq(reviewers.candidateId, row.id), eq(reviewers.personId, personId), isNull(reviewers.releasedAt)))
    .run();
  if (released.changes === 0) throw absent();
  return { action: 'reviewer-released' };
}
