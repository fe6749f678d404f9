import { type ReviewAsked } from '#shared/contract/review-routes';
import { type HeldRole } from '#shared/contract/roles';
import { type Db } from '../db';
import { part, rowsOf, type Query } from '../search/query';

/** What someone is asked to review in some networks, the longest asked first. */
export const reviewQueueQuery = (personId: number, networkIds: readonly number[], after: number, most: number): Query =>
  part(
    `SELECT c.id, c.network_id AS networkId, c.number, c.title, c.state, c.author_id AS authorId, p.name AS authorName, c.out_of_date_at AS outOfDateAt,
       c.submitted_at AS submittedAt, r.named_at AS since,
       c.state = 'in-review' AND c.out_of_date_at IS NULL AND NOT EXISTS (SELECT 1 FROM signatures s WHERE s.snapshot_id = c.snapshot_id
         AND s.person_id = r.person_id AND s.withdrawn_at IS NULL AND s.superseded_by_id IS NULL) AS isWaiting
     FROM reviewers r CROSS JOIN candidates c ON c.id = r.candidate_id CROSS JOIN people p ON p.id = c.author_id
     WHERE r.released_at IS NULL AND r.person_id = ? AND c.state <> 'withdrawn' AND c.network_id IN (SELECT value FROM json_each(?))
     ORDER BY r.named_at LIMIT ? OFFSET ?`,
    personId,
    JSON.stringify(networkIds),
    most,
    after,
  );

interface QueueRow extends Omit<ReviewAsked, 'author' | 'isWaiting'> {
  readonly authorId: number;
  readonly authorName: string;
  readonly isWaiting: number;
}

/** What someone is asked to review where they are a reviewer now, so many on. */
export const reviewQueueOf = (
  db: Pick<Db, '$client'>,
  { personId, held }: { readonly personId: number; readonly held: readonly HeldRole[] },
  after: number,
  most: number,
): ReviewAsked[] => {
  const networkIds = held.flatMap(({ role, networkId }) => (role === 'reviewer' && networkId !== null ? [networkId] : []));
  return rowsOf<QueueRow>(db, reviewQueueQuery(personId, networkIds, after, most)).map(({ authorId, authorName, isWaiting, ...row }) => ({
    ...row,
    author: { id: authorId, name: authorName },
    isWaiting: isWaiting === 1,
  }));
};
