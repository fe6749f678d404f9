import * as z from 'zod';
import { candidateInFull, candidateParams, MOST_CLAIMS, passage, somebody } from './candidate-routes';
import { CANDIDATE_STATES } from './candidate-moves';
import { snapshotBody } from './certificate';
import { listOf, oneOf, record, text } from './leaves';
import { idText, pageOf, pageQuery } from './page';
import { givenPassword, utc, version, versionSeen } from './people';
import { route } from './routes';
import { idOf, wholeNumber } from './setup-leaves';

const MOST_REVIEWERS = 20;
const MOST_REASON_CHARACTERS = 8_000;
const SHA256_RIGHT = 'the sha256 of the snapshot that you saw, 64 hex digits';
const REVIEWERS_RIGHT = `a list of 1 to ${MOST_REVIEWERS} ids of people`;

const reason = () => passage(MOST_REASON_CHARACTERS);
const decision = () => oneOf('confirm', 'dispute');
interface Decision {
  readonly decision: 'confirm' | 'dispute';
  readonly reason: string;
}
const hasReason = ({ decision: decided, reason: why }: Decision): boolean => decided === 'confirm' || why.trim() !== '';
const REASON_FAULT = { path: ['reason'], error: 'a reason, since it is disputed' };

/** A snapshot as it was frozen, under the hash of its canonical JSON. */
const snapshotInFull = z.strictObject({
  number: z.int(),
  sha256: z.string(),
  createdAt: utc(),
  createdBy: somebody,
  body: snapshotBody,
});

/** Why a snapshot went out of date. */
const CAUSES = ['clock-record', 'site', 'rule', 'frame', 'time-table', 'earth-table', 'late-record', 'conflict'] as const;

/** What is another now, at a path such as `FRZ:17 BRW:4.marginSigma`. */
const numberChanged = z.strictObject({
  where: z.string(),
  was: z.union([z.number(), z.string()]).nullable(),
  is: z.union([z.number(), z.string()]).nullable(),
});

/** That a snapshot was found to be computed from what is another now, and what that changed. */
const outOfDate = z.strictObject({
  id: z.int(),
  /** The number of the snapshot. */
  snapshot: z.int(),
  at: utc(),
  cause: z.enum(CAUSES),
  differences: z.array(numberChanged),
});

/** Someone who sees candidates of a network, with the roles by which they do. */
const colleague = somebody.extend({ roles: z.array(z.enum(['coordinator', 'analyst', 'reviewer'])) });

/** A candidate that someone is asked to review. */
const asked = z.strictObject({
  id: z.int(),
  networkId: z.int(),
  number: z.int(),
  title: z.string(),
  state: z.enum(CANDIDATE_STATES),
  author: somebody,
  outOfDateAt: utc().nullable(),
  submittedAt: utc().nullable(),
  /** Since when they are asked. */
  since: utc(),
  /** Whether it waits for their signature. */
  isWaiting: z.boolean(),
});

/** The review of candidates: snapshots, who is asked, what they sign, and what anyone can check again. */
export const REVIEW_ROUTES = {
  /** Freezes a snapshot and asks for review; refused where the numbers of now do not carry a claim. */
  submitCandidate: route('POST', '/candidates/:candidateId/submit', {
    policy: 'candidate:submit',
    params: candidateParams,
    body: versionSeen(),
    answer: candidateInFull,
  }),
  /** Those who see candidates of the network, by what they may be: named as reviewers, mentioned in comments. */
  listColleagues: route('GET', '/networks/:networkId/colleagues', {
    policy: 'candidate:read',
    params: z.strictObject({ networkId: idText }),
    query: record(pageQuery),
    answer: pageOf(colleague),
  }),
  nameReviewers: route('POST', '/candidates/:candidateId/reviewers', {
    policy: 'reviewer:name',
    params: candidateParams,
    body: record({
      personIds: listOf(idOf('a reviewer of this network'), 'ids of people').min(1, REVIEWERS_RIGHT).max(MOST_REVIEWERS, REVIEWERS_RIGHT),
      version: version(),
    }),
    answer: candidateInFull,
  }),
  releaseReviewer: route('POST', '/candidates/:candidateId/reviewers/:personId/release', {
    policy: 'reviewer:name',
    params: z.strictObject({ candidateId: idText, personId: idText }),
    body: versionSeen(),
    answer: candidateInFull,
  }),
  /** Asks for the password again; a later signature on the same snapshot stands in the place of the former. */
  signCandidate: route('POST', '/candidates/:candidateId/signatures', {
    policy: 'candidate:sign',
    params: candidateParams,
    body: record({
      snapshotSha256: text(SHA256_RIGHT).refine((given) => /^[0-9a-f]{64}$/.test(given), SHA256_RIGHT),
      decision: decision(),
      reason: reason(),
      /** By their places in the snapshot: all of them, each confirmed, where the whole is confirmed. */
      claims: listOf(
        record({ claim: wholeNumber(1, MOST_CLAIMS), decision: decision(), reason: reason() }).refine(hasReason, REASON_FAULT),
        'decisions on claims',
      ).max(MOST_CLAIMS, `a list of at most ${MOST_CLAIMS} decisions on claims`),
      password: givenPassword(),
      version: version(),
    }).refine(hasReason, REASON_FAULT),
    answer: candidateInFull,
    makes: true,
    mostBodyBytes: 2 * 1024 * 1024,
  }),
  /** One's own, within ten minutes. */
  withdrawSignature: route('POST', '/candidates/:candidateId/signatures/:signatureId/withdraw', {
    policy: 'candidate:sign',
    params: z.strictObject({ candidateId: idText, signatureId: idText }),
    body: versionSeen(),
    answer: candidateInFull,
  }),
  /** By its number of the candidate, 1, 2, 3, ... */
  readSnapshot: route('GET', '/candidates/:candidateId/snapshots/:number', {
    policy: 'candidate:read',
    params: z.strictObject({ candidateId: idText, number: idText }),
    answer: snapshotInFull,
  }),
  /** The certificate of the last snapshot: `text` is what stands in the file, character for character. */
  readCertificate: route('GET', '/candidates/:candidateId/certificate', {
    policy: 'candidate:read',
    params: candidateParams,
    answer: z.strictObject({ fileName: z.string(), text: z.string() }),
  }),
  /** Each time that a snapshot of it went out of date, in their order. */
  listOutOfDates: route('GET', '/candidates/:candidateId/out-of-dates', {
    policy: 'candidate:read',
    params: candidateParams,
    query: record(pageQuery),
    answer: pageOf(outOfDate),
  }),
  /** What one is asked to review, in every network, the longest asked first. */
  listMyReviews: route('GET', '/me/reviews', { policy: 'my-reviews:read', query: record(pageQuery), answer: pageOf(asked) }),
};

export type SnapshotInFull = z.infer<typeof snapshotInFull>;
export type Colleague = z.infer<typeof colleague>;
export type NumberChanged = z.infer<typeof numberChanged>;
export type OutOfDate = z.infer<typeof outOfDate>;
export type ReviewAsked = z.infer<typeof asked>;
export type Signing = z.infer<(typeof REVIEW_ROUTES)['signCandidate']['body']>;
