import * as z from 'zod';
import { candidateParams, passage, somebody } from './candidate-routes';
import { listOf, record } from './leaves';
import { idText, pageOf, pageQuery } from './page';
import { utc, version, versionSeen } from './people';
import { route } from './routes';
import { flag, idOf } from './setup-leaves';

const MOST_COMMENT_CHARACTERS = 8_000;
const MOST_MENTIONS = 20;
const MENTIONS_RIGHT = `a list of at most ${MOST_MENTIONS} ids of people who see the candidate`;

const commentText = () =>
  passage(MOST_COMMENT_CHARACTERS).refine((given) => given.trim() !== '', `a text of 1 to ${MOST_COMMENT_CHARACTERS} characters`);
const mentions = () => listOf(idOf('someone who sees the candidate'), 'ids of people').max(MOST_MENTIONS, MENTIONS_RIGHT);

/** What is said or asked of a candidate, of a claim, or of a pair. */
const comment = z.strictObject({
  id: z.int(),
  /** Null where it is of a pair or the whole. */
  claimId: z.int().nullable(),
  a: z.int().nullable(),
  b: z.int().nullable(),
  /** The comment that it answers. */
  answersId: z.int().nullable(),
  isQuestion: z.boolean(),
  author: somebody,
  /** Empty once it is taken back. */
  body: z.string(),
  mentions: z.array(somebody),
  createdAt: utc(),
  editedAt: utc().nullable(),
  takenBackAt: utc().nullable(),
  version: z.int(),
});

const commentParams = z.strictObject({ commentId: idText });

/** Comments on candidates: their authors alone edit them or take them back. */
export const COMMENT_ROUTES = {
  /** The oldest first. */
  listComments: route('GET', '/candidates/:candidateId/comments', {
    policy: 'candidate:read',
    params: candidateParams,
    query: record(pageQuery),
    answer: pageOf(comment),
  }),
  /** Of a claim, of a pair (a and b), or of the whole; whoever is mentioned is told by mail. */
  makeComment: route('POST', '/candidates/:candidateId/comments', {
    policy: 'comment:write',
    params: candidateParams,
    body: record({
      body: commentText(),
      claimId: idOf('a claim of this candidate, or null').nullable().optional(),
      a: idOf('an event of this candidate, or null').nullable().optional(),
      b: idOf('another event of this candidate, or null').nullable().optional(),
      answersId: idOf('a comment on this candidate, or null').nullable().optional(),
      isQuestion: flag('true for a question, else false').optional(),
      mentions: mentions().optional(),
    })
      .refine(({ a = null, b = null }) => (a === null) === (b === null) && (a === null || a !== b), {
        path: ['b'],
        error: 'another event than "a", or null where "a" is null',
      })
      .refine(({ a = null, claimId = null }) => a === null || claimId === null, {
        path: ['claimId'],
        error: 'null where the comment is of a pair',
      }),
    answer: comment,
    makes: true,
  }),
  changeComment: route('PATCH', '/comments/:commentId', {
    policy: 'comment:write',
    params: commentParams,
    body: record({ body: commentText(), mentions: mentions().optional(), version: version() }),
    answer: comment,
  }),
  takeCommentBack: route('POST', '/comments/:commentId/take-back', {
    policy: 'comment:write',
    params: commentParams,
    body: versionSeen(),
    answer: comment,
  }),
};

export type Comment = z.infer<typeof comment>;
export type CommentGiven = z.infer<(typeof COMMENT_ROUTES)['makeComment']['body']>;
