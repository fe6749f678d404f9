import { and, count, eq } from 'drizzle-orm';
import { type CommentGiven } from '#shared/contract/comment-routes';
import { judge, POLICIES } from '#shared/contract/policies';
import { candidateEvents, claims, comments, mentions, people } from '#schema/schema';
import { rolesOf } from '../accounts/roles-of';
import { conflict, unusable } from '../api/refusal';
import { type Tx } from '../audit/change';
import { utcText } from '../ground';
import { noteChange } from '../live/note-change';
import { type Making } from '../networks/note-setup';
import { type CandidateRow } from './candidate-rows';
import { type CommentRow, commentRow, mentionsOf } from './comment-rows';

const MOST_COMMENTS = 10_000;

/** A comment that was written, and who is mentioned in it and was not before. */
export interface Written {
  readonly row: CommentRow;
  readonly mentioned: readonly number[];
}

/**
 * Comments on a candidate.
 *
 * @throws Refusal where it is of a claim, event or comment of another candidate, or mentions who does not see the candidate
 */
export function makeComment(making: Making, { id: candidateId, networkId }: CandidateRow, authorId: number, given: CommentGiven): Written {
  const { tx, nowMs } = making;
  const { body, claimId = null, a = null, b = null, answersId = null, isQuestion = false, mentions: named = [] } = given;
  const [known] = tx.select({ n: count() }).from(comments).where(eq(comments.candidateId, candidateId)).all();
  if ((known?.n ?? 0) >= MOST_COMMENTS) throw conflict(`The candidate has ${MOST_COMMENTS} comments, which is the most.`);
  const isClaim =
    claimId === null ||
    tx
      .select()
      .from(claims)
      .where(and(eq(claims.id, claimId), eq(claims.candidateId, candidateId)))
      .get();
  if (!isClaim) throw unusable({ where: 'claimId', text: `is ${claimId}; it must be a claim of this candidate, or null` });
  for (const [where, eventId] of [
    ['a', a],
    ['b', b],
  ] as const)
    if (eventId !== null && !namesEvent(tx, candidateId, eventId))
      throw unusable({ where, text: `is ${eventId}; it must be an event of this candidate, or null` });
  if (answersId !== null && tx.select().from(comments).where(eq(comments.id, answersId)).get()?.candidateId !== candidateId)
    throw unusable({ where: 'answersId', text: `is ${answersId}; it must be a comment on this candidate, or null` });
  const row = tx
    .insert(comments)
    .values({ candidateId, claimId, aTriggerId: a, bTriggerId: b, answersId, isQuestion, authorId, body, createdAt: utcText(nowMs) })
    .returning()
    .get();
  putMentions(making, networkId, row.id, named);
  noteComment(making, networkId, row, 'made');
  return { row, mentioned: [...new Set(named)] };
}

/** Puts another text in the place of a comment's, and mentions others in the place of those that it mentioned. */
export function changeComment(
  making: Making,
  networkId: number,
  row: CommentRow,
  { body, mentions: named }: { readonly body: string; readonly mentions?: readonly number[] | undefined },
): Written {
  const { tx, nowMs } = making;
  if (row.takenBackAt !== null) throw conflict('The comment was taken back.');
  const before = new Set(mentionsOf(tx, row.id).map(({ id }) => id));
  if (named) putMentions(making, networkId, row.id, named);
  tx.update(comments)
    .set({ body, editedAt: utcText(nowMs), version: row.version + 1 })
    .where(eq(comments.id, row.id))
    .run();
  noteComment(making, networkId, row, 'changed');
  return { row: commentRow(tx, row.id), mentioned: [...new Set(named)].filter((personId) => !before.has(personId)) };
}

/** Takes a comment back: that there was one stays. */
export function takeCommentBack(making: Making, networkId: number, row: CommentRow): Written {
  const { tx, nowMs } = making;
  if (row.takenBackAt !== null) throw conflict('The comment was taken back already.');
  putMentions(making, networkId, row.id, []);
  tx.update(comments)
    .set({ body: '', takenBackAt: utcText(nowMs), version: row.version + 1 })
    .where(eq(comments.id, row.id))
    .run();
  noteComment(making, networkId, row, 'taken-back');
  return { row: commentRow(tx, row.id), mentioned: [] };
}

function namesEvent(tx: Tx, candidateId: number, eventId: number): boolean {
  const row = tx
    .select({ isIn: candidateEvents.isIn })
    .from(candidateEvents)
    .where(and(eq(candidateEvents.candidateId, candidateId), eq(candidateEvents.triggerId, eventId)))
    .get();
  return row !== undefined;
}

function putMentions({ tx, nowMs }: Making, networkId: number, commentId: number, named: readonly number[]): void {
  tx.delete(mentions).where(eq(mentions.commentId, commentId)).run();
  for (const [at, personId] of named.entries()) {
    const person = tx.select().from(people).where(eq(people.id, personId)).get();
    const held = rolesOf(tx, personId, nowMs);
    const sees = judge(POLICIES['candidate:read'], { kind: 'person', held }, { kind: 'network', networkId }) === 'allowed';
    if (person?.disabledAt !== null || !sees)
      throw unusable({ where: `mentions[${at}]`, text: `is ${personId}; it must be the id of someone who sees the candidate` });
    tx.insert(mentions).values({ commentId, personId }).onConflictDoNothing().run();
  }
}

function noteComment(
  { tx, note, nowMs }: Making,
  networkId: number,
  { id, candidateId }: CommentRow,
  done: 'made' | 'changed' | 'taken-back',
): void {
  note({ action: `comment:${done}`, subjectKind: 'comment', subjectId: id, networkId, details: { candidateId } });
  noteChange(tx, networkId, 'candidate', { what: 'commented', id: candidateId }, nowMs);
}
