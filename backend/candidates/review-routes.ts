import { USUAL_ITEMS } from '#shared/contract/page';
import { REVIEW_ROUTES, type Signing } from '#shared/contract/review-routes';
import { rowOf } from '../accounts/people-rows';
import { rolesOf } from '../accounts/roles-of';
import { liveSession } from '../accounts/sessions';
import { countAttempt } from '../accounts/throttle';
import { pageFrom } from '../api/page';
import { Refusal, signInFirst, stale } from '../api/refusal';
import { personOf, serve, type Served } from '../api/serve';
import { type Ground } from '../ground';
import { placeOfNetwork } from '../networks/network-rows';
import { candidateRow, placeOfCandidate } from './candidate-rows';
import { certificateOf, snapshotOf } from './certificate-of';
import { moveCandidate, type MoveAsked } from './moved';
import { outOfDatesOf } from './out-of-date';
import { refuseMove } from './relations';
import { colleaguesOf, nameReviewers, releaseReviewer } from './reviewers';
import { reviewQueueOf } from './review-queue';
import { signCandidate, withdrawSignature } from './sign-candidate';
import { submitCandidate } from './submit-candidate';

/** The review of candidates: snapshots, reviewers, signatures, certificates, and each reviewer's queue. */
export const reviewRoutes = (): Served[] => [
  serve(REVIEW_ROUTES.submitCandidate, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, ground) => moveCandidate(asked, ground, 'submit', (moving) => submitCandidate(ground.db, ground.version, moving)),
  }),
  serve(REVIEW_ROUTES.listColleagues, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, query: { cursor = 0, limit = USUAL_ITEMS } }, { db, nowMs }) =>
      pageFrom(colleaguesOf(db, networkId, { afterId: cursor, most: limit + 1, nowMs: nowMs() }), limit, ({ id }) => id),
  }),
  serve(REVIEW_ROUTES.nameReviewers, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, ground) => moveCandidate(asked, ground, 'name-reviewers', (moving) => nameReviewers(moving, asked.body.personIds)),
  }),
  serve(REVIEW_ROUTES.releaseReviewer, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, ground) => moveCandidate(asked, ground, 'name-reviewers', (moving) => releaseReviewer(moving, asked.params.personId)),
  }),
  serve(REVIEW_ROUTES.signCandidate, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: sign,
  }),
  serve(REVIEW_ROUTES.withdrawSignature, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, ground) =>
      moveCandidate(asked, ground, 'withdraw-signature', (moving) => withdrawSignature(moving, asked.params.signatureId)),
  }),
  serve(REVIEW_ROUTES.readSnapshot, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: ({ params: { candidateId, number } }, { db }) => snapshotOf(db, candidateId, number),
  }),
  serve(REVIEW_ROUTES.readCertificate, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: ({ params: { candidateId } }, { db }) => db.transaction(() => certificateOf(db, candidateId)),
  }),
  serve(REVIEW_ROUTES.listOutOfDates, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: ({ params: { candidateId }, query: { cursor = 0, limit = USUAL_ITEMS } }, { db }) =>
      pageFrom(outOfDatesOf(db, candidateId, cursor, limit + 1), limit, ({ id }) => id),
  }),
  serve(REVIEW_ROUTES.listMyReviews, {
    handle: (asked, { db }) => {
      const { cursor = 0, limit = USUAL_ITEMS } = asked.query;
      const rows = reviewQueueOf(db, personOf(asked), cursor, limit + 1);
      return { items: rows.slice(0, limit), next: rows.length > limit ? String(cursor + limit) : null };
    },
  }),
];

type SignAsked = MoveAsked & { readonly body: Signing };

/** The password is checked first, which takes a while; then all that allows the signature is looked at anew, in its transaction. */
async function sign(asked: SignAsked, ground: Ground) {
  const { snapshotSha256, decision, reason, claims, password } = asked.body;
  const { db, nowMs, passwords } = ground;
  const { personId, sessionId, held } = personOf(asked);
  refuseMove('sign', db, candidateRow(db, asked.params.candidateId), { personId, held });
  const { email, passwordHash } = rowOf(db, personId);
  const giveBack = countAttempt(ground, { kind: 'account', of: email });
  try {
    if (!(await passwords.matches(passwordHash, password)))
      throw new Refusal(403, 'Not allowed', 'This is not the password.', { where: 'password' });
    giveBack();
  } catch (fault) {
    if (!(fault instanceof Refusal) || fault.status !== 403) giveBack();
    throw fault;
  }
  return moveCandidate(
    asked,
    ground,
    'sign',
    (moving) => signCandidate(moving, { snapshotSha256, decision, reason, claims }),
    (tx) => {
      if (!liveSession(ground, { sessionId, personId })) throw signInFirst();
      if (rowOf(tx, personId).passwordHash !== passwordHash) throw stale();
      return { kind: 'person', personId, sessionId, held: rolesOf(tx, personId, nowMs()) };
    },
  );
}
