import { and, asc, eq, gt } from 'drizzle-orm';
import { type Comment } from '#shared/contract/comment-routes';
import { type Place } from '#shared/contract/roles';
import { candidates, comments, mentions, people } from '#schema/schema';
import { absent } from '../api/refusal';
import { type Db } from '../db';
import { somebody } from './review-rows';

type Rows = Pick<Db, 'select'>;
export type CommentRow = typeof comments.$inferSelect;

/** The row of a comment; refused as absent when there is none. */
export function commentRow(db: Rows, commentId: number): CommentRow {
  const row = db.select().from(comments).where(eq(comments.id, commentId)).get();
  if (!row) throw absent();
  return row;
}

/** Where a comment lies; undefined when there is none of this id. */
export function placeOfComment(db: Rows, commentId: number): Place | undefined {
  const row = db
    .select({ networkId: candidates.networkId })
    .from(comments)
    .innerJoin(candidates, eq(candidates.id, comments.candidateId))
    .where(eq(comments.id, commentId))
    .get();
  return row && { kind: 'network', networkId: row.networkId };
}

/** Who is named in a comment. */
export const mentionsOf = (db: Rows, commentId: number): Comment['mentions'] =>
  db
    .select({ id: people.id, name: people.name })
    .from(mentions)
    .innerJoin(people, eq(people.id, mentions.personId))
    .where(eq(mentions.commentId, commentId))
    .orderBy(asc(people.id))
    .all();

/** A comment as it is shown. */
export function commentShown(db: Rows, { candidateId: _of, aTriggerId, bTriggerId, authorId, ...row }: CommentRow): Comment {
  return { ...row, a: aTriggerId, b: bTriggerId, author: somebody(db, authorId), mentions: mentionsOf(db, row.id) };
}

/** The comments on a candidate, the oldest first, from behind an id on. */
export const commentsAfter = (db: Rows, candidateId: number, afterId: number, most: number): Comment[] =>
  db
    .select()
    .from(comments)
    .where(and(eq(comments.candidateId, candidateId), gt(comments.id, afterId)))
    .orderBy(asc(comments.id))
    .limit(most)
    .all()
    .map((row) => commentShown(db, row));
