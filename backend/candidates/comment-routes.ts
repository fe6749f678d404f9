import { COMMENT_ROUTES, type Comment } from '#shared/contract/comment-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { actorOf } from '../accounts/actor';
import { rowOf } from '../accounts/people-rows';
import { tell } from '../accounts/tell';
import { pageFrom } from '../api/page';
import { forbidden, stale } from '../api/refusal';
import { personOf, serve, type Asked, type Served } from '../api/serve';
import { change } from '../audit/change';
import { type Ground } from '../ground';
import { mentioned } from '../mail/candidate-notices';
import { networkRow, openNetwork } from '../networks/network-rows';
import { type Making } from '../networks/note-setup';
import { candidateRow, placeOfCandidate, type CandidateRow } from './candidate-rows';
import { commentRow, type CommentRow, commentsAfter, commentShown, placeOfComment } from './comment-rows';
import { changeComment, makeComment, takeCommentBack, type Written } from './make-comment';
import { refuseMove } from './relations';

/** Comments on candidates, their claims and pairs. */
export const commentRoutes = (): Served[] => [
  serve(COMMENT_ROUTES.listComments, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: ({ params: { candidateId }, query: { cursor = 0, limit = USUAL_ITEMS } }, { db }) =>
      pageFrom(commentsAfter(db, candidateId, cursor, limit + 1), limit, ({ id }) => id),
  }),
  serve(COMMENT_ROUTES.makeComment, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, ground) =>
      written(asked, ground, asked.params.candidateId, (making, candidate) =>
        makeComment(making, candidate, personOf(asked).personId, asked.body),
      ),
  }),
  serve(COMMENT_ROUTES.changeComment, {
    placeOf: ({ params: { commentId } }, { db }) => placeOfComment(db, commentId),
    handle: (asked, ground) => ofOwn(asked, ground, (making, { networkId }, row) => changeComment(making, networkId, row, asked.body)),
  }),
  serve(COMMENT_ROUTES.takeCommentBack, {
    placeOf: ({ params: { commentId } }, { db }) => placeOfComment(db, commentId),
    handle: (asked, ground) => ofOwn(asked, ground, (making, { networkId }, row) => takeCommentBack(making, networkId, row)),
  }),
];

type AnyAsked = Asked<unknown, unknown, unknown>;
type CommentAsked = Asked<{ readonly commentId: number }, unknown, { readonly version: number }>;

/** What its author does with a comment that they saw at its version. */
const ofOwn = (asked: CommentAsked, ground: Ground, work: (making: Making, candidate: CandidateRow, row: CommentRow) => Written): Comment =>
  written(asked, ground, commentRow(ground.db, asked.params.commentId).candidateId, (making, candidate) => {
    const row = commentRow(making.tx, asked.params.commentId);
    if (row.authorId !== personOf(asked).personId) throw forbidden();
    if (row.version !== asked.body.version) throw stale();
    return work(making, candidate, row);
  });

/** Writes, and tells by mail whoever is mentioned and was not before, but not its author. */
function written(
  asked: AnyAsked,
  ground: Ground,
  candidateId: number,
  work: (making: Making, candidate: CandidateRow) => Written,
): Comment {
  const actor = actorOf(asked);
  const caller = personOf(asked);
  const {
    row,
    candidate,
    mentioned: named,
  } = change(ground, actor, (tx, note) => {
    const found = candidateRow(tx, candidateId);
    refuseMove('comment', tx, found, caller);
    openNetwork(tx, found.networkId);
    return { candidate: found, ...work({ tx, note, actor, nowMs: ground.nowMs() }, found) };
  });
  const by = rowOf(ground.db, caller.personId).name;
  const network = networkRow(ground.db, candidate.networkId).name;
  for (const personId of named)
    if (personId !== caller.personId)
      tell(ground, personId, (noticed) =>
        mentioned(noticed, { by, network, number: candidate.number, title: candidate.title, text: row.body }),
      );
  return commentShown(ground.db, row);
}
