import { type CandidateBrief } from '#shared/contract/candidate-routes';
import { type CandidateState } from '#shared/contract/candidate-moves';
import { type Order } from '#shared/contract/list-query';
import { type Db } from '../db';
import { utcText } from '../ground';
import { orderedBy, type Position } from '../search/keyset';
import { joined, part, rowsOf, type Query } from '../search/query';

/** What a list of candidates is kept to. */
export interface CandidatesAsked {
  readonly networkId: number;
  readonly state?: CandidateState | undefined;
  readonly authorId?: number | undefined;
  readonly outOfDate?: 'yes' | 'no' | undefined;
  readonly order: Order;
  readonly after?: Position | undefined;
  readonly limit: number;
}

/** Where a row of the list stands. */
interface Listed {
  readonly id: number;
  readonly updatedAt: string;
}

/** When it was last touched, in ms, and its id. */
export const positionOf = ({ id, updatedAt }: Listed): Position => [Date.parse(updatedAt), id];

/** A list of candidates, the last touched first where the order is down: by its author's index, its state's, or the network's. */
export function candidateListQuery({ networkId, state, authorId, outOfDate, order, after, limit }: CandidatesAsked): Query {
  const [ms = 0, id = 0] = after ?? [];
  const conditions = [
    part(`${authorId === undefined ? '' : '+'}c.network_id = ?`, networkId),
    ...(authorId === undefined ? [] : [part('c.author_id = ?', authorId)]),
    ...(state === undefined ? [] : [part(`${authorId === undefined ? '' : '+'}c.state = ?`, state)]),
    ...(outOfDate === undefined ? [] : [part(`c.out_of_date_at IS ${outOfDate === 'yes' ? 'NOT NULL' : 'NULL'}`)]),
    ...(after ? [part(`(c.updated_at, c.id) ${order === 'up' ? '>' : '<'} (?, ?)`, utcText(ms), id)] : []),
  ];
  const where = joined(conditions, ' AND ');
  return part(
    `SELECT c.id, c.number, c.title, c.state, c.author_id AS authorId, p.name AS authorName, c.out_of_date_at AS outOfDateAt,
       (SELECT count(*) FROM candidate_events e WHERE e.candidate_id = c.id AND e.is_in = 1) AS events, c.version, c.created_at AS createdAt,
       c.updated_at AS updatedAt, c.submitted_at AS submittedAt
     FROM candidates c CROSS JOIN people p ON p.id = c.author_id WHERE ${where.sql} ${orderedBy(['c.updated_at', 'c.id'], order)} LIMIT ?`,
    ...where.values,
    limit + 1,
  );
}

interface BriefRow extends Omit<CandidateBrief, 'author'> {
  readonly authorId: number;
  readonly authorName: string;
}

/** The rows of a list of candidates, one more than it holds where there are more. */
export const candidatesListed = (db: Pick<Db, '$client'>, asked: CandidatesAsked): CandidateBrief[] =>
  rowsOf<BriefRow>(db, candidateListQuery(asked)).map(({ authorId, authorName, ...row }) => ({
    ...row,
    author: { id: authorId, name: authorName },
  }));
