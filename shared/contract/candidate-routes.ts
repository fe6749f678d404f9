import * as z from 'zod';
import { CLAIM_KINDS } from '../review/claims';
import { CANDIDATE_STATES, MOVE_NAMES } from './candidate-moves';
import { CLAIM_STATES, claimNumbers } from './certificate';
import { instant, listOf, oneOf, record, text } from './leaves';
import { partAt, partQuery, wordText } from './list-query';
import { idText, pageOf, pageQuery } from './page';
import { MOST_EVENTS_PAIRED } from './pair-routes';
import { line, utc, version, versionSeen } from './people';
import { route } from './routes';
import { edit, flag, idOf } from './setup-leaves';

const MOST_TITLE_CHARACTERS = 200;
const MOST_ABOUT_CHARACTERS = 20_000;
const MOST_REASON_CHARACTERS = 1_000;

/** Most frames in which a candidate's order is stated. */
export const MOST_CANDIDATE_FRAMES = 20;

/** Most events that a candidate may ever have counted in or left out. */
export const MOST_CANDIDATE_EVENTS = 4 * MOST_EVENTS_PAIRED;

/** Most claims of a candidate: a few of each pair. */
export const MOST_CLAIMS = 5_000;

const networkParams = z.strictObject({ networkId: idText });
export const candidateParams = z.strictObject({ candidateId: idText });

/** Text of some lines, perhaps empty. */
export const passage = (most: number) => {
  const right = `a text of at most ${most} characters`;
  return text(right).refine((given) => given.length <= most && !/[^\P{Cc}\n\t]|\p{Cs}/u.test(given), right);
};

const title = () => line(MOST_TITLE_CHARACTERS);
const about = () => passage(MOST_ABOUT_CHARACTERS);
const differentIds = (what: string, most: number) => {
  const right = `a list of at most ${most} different ids of ${what}s`;
  return listOf(idOf(`a ${what} of this network`), `ids of ${what}s`)
    .max(most, right)
    .refine((ids) => new Set(ids).size === ids.length, right);
};
const frameIds = () => differentIds('frame', MOST_CANDIDATE_FRAMES);

/** An event counted in, or left out for a reason. */
const eventGiven = record({
  eventId: idOf('an event of this network'),
  isIn: flag('true for an event that counts, false for one that is left out'),
  reason: passage(MOST_REASON_CHARACTERS),
}).refine(({ isIn, reason }) => isIn || reason.trim() !== '', { path: ['reason'], error: 'a reason, since the event is left out' });

const claimedEvent = () => idOf('an event that counts in this candidate, or null for the whole').nullable();

/** What is claimed: of a pair (a first, or not caused by b), or with both null of the whole. */
const claimFields = {
  kind: oneOf(...CLAIM_KINDS),
  a: claimedEvent(),
  b: claimedEvent(),
  /** Of "before-in-frame"; null there means the geocentric one. */
  frameId: idOf('a frame of this candidate, or null').nullable(),
};

interface PairGiven {
  readonly a: number | null;
  readonly b: number | null;
}

const isPairOrWhole = ({ a, b }: PairGiven): boolean => (a === null) === (b === null) && (a === null || a !== b);
const PAIR_FAULT = { path: ['b'], error: 'another event than "a", or null where "a" is null' };
const claimNote = () => passage(MOST_REASON_CHARACTERS);

/** Somebody as others who work on the same candidate see them. */
export const somebody = z.strictObject({ id: z.int(), name: z.string() });

/** A candidate as it stands in lists. */
export const candidateBrief = z.strictObject({
  id: z.int(),
  /** 1, 2, 3, ... of the network. */
  number: z.int(),
  title: z.string(),
  state: z.enum(CANDIDATE_STATES),
  author: somebody,
  /** From when what its snapshot was computed from has changed; null while it has not. */
  outOfDateAt: utc().nullable(),
  /** Events that count. */
  events: z.int(),
  version: z.int(),
  createdAt: utc(),
  updatedAt: utc(),
  submittedAt: utc().nullable(),
});

const candidateEvent = z.strictObject({
  eventId: z.int(),
  name: z.string(),
  site: z.string(),
  /** Null for one that does not stand now: set aside, in conflict, or withdrawn. */
  at: instant().nullable(),
  isIn: z.boolean(),
  reason: z.string(),
});

/** A claim, by the ids of its events. */
const candidateClaim = z.strictObject({
  id: z.int(),
  kind: z.enum(CLAIM_KINDS),
  a: z.int().nullable(),
  b: z.int().nullable(),
  frameId: z.int().nullable(),
  frame: z.string().nullable(),
  state: z.enum(CLAIM_STATES),
  /** As they were when it was proposed or decided on. */
  numbers: claimNumbers,
  note: z.string(),
  /** Null while it is as the program proposed it. */
  editedBy: somebody.nullable(),
  editedAt: utc().nullable(),
});

/** One step of a candidate's history; nobody's where the program took it. */
const step = { version: z.int(), at: utc(), by: somebody.nullable(), action: z.string() };

/** A reviewer's decision on a snapshot, as it was signed. */
const signature = z.strictObject({
  id: z.int(),
  /** The number of the snapshot. */
  snapshot: z.int(),
  person: somebody,
  decision: z.enum(['confirm', 'dispute']),
  reason: z.string(),
  /** By their places in the snapshot. */
  claims: z.array(z.strictObject({ claim: z.int(), decision: z.enum(['confirm', 'dispute']), reason: z.string() })),
  signedAt: utc(),
  withdrawnAt: utc().nullable(),
  /** The later signature that stands in its place. */
  supersededById: z.int().nullable(),
  sha256: z.string(),
});

/** A candidate with everything; `moves` are those that the one who asks may make now. */
export const candidateInFull = candidateBrief.omit({ events: true }).extend({
  networkId: z.int(),
  about: z.string(),
  /** Whoever wrote it or edited it: none of them reviews it. */
  editors: z.array(somebody),
  /** The coincidences that it was built from, by the hashes under which they are found when they are computed anew. */
  coincidences: z.array(z.strictObject({ name: z.string(), setHash: z.string() })),
  /** In the order of time, those that do not stand at the end. */
  events: z.array(candidateEvent),
  frames: z.array(z.strictObject({ frameId: z.int(), code: z.string(), name: z.string() })),
  claims: z.array(candidateClaim),
  /** What is or was reviewed last; null before it was ever submitted. */
  snapshot: z.strictObject({ number: z.int(), sha256: z.string(), createdAt: utc(), createdBy: somebody }).nullable(),
  /** How many signatures confirm it. */
  neededSignatures: z.int(),
  reviewers: z.array(somebody.extend({ namedAt: utc(), namedBy: somebody })),
  /** On every snapshot, in their order. */
  signatures: z.array(signature),
  lastStep: z.strictObject(step),
  moves: z.array(z.enum(MOVE_NAMES)),
});

/** What a step changed: at a path such as `events.FRZ:17.isIn`, as text; null where there was or is nothing. */
const difference = z.strictObject({ where: z.string(), before: z.string().nullable(), after: z.string().nullable() });

/** One step of a candidate's history, with what it changed. */
const candidateStep = z.strictObject({ ...step, differences: z.array(difference) });

/** Candidates: statements about the order of events that analysts build and reviewers sign. */
export const CANDIDATE_ROUTES = {
  /** The last touched first, unless `order` is up. */
  listCandidates: route('GET', '/networks/:networkId/candidates', {
    policy: 'candidate:list',
    params: networkParams,
    query: record({
      ...partQuery,
      state: wordText(...CANDIDATE_STATES),
      authorId: idText.optional(),
      outOfDate: wordText('yes', 'no'),
    }),
    answer: partAt(candidateBrief),
  }),
  /** From the events of coincidences, single events, or both. */
  makeCandidate: route('POST', '/networks/:networkId/candidates', {
    policy: 'candidate:make',
    params: networkParams,
    body: record({
      title: title(),
      about: about().optional(),
      coincidenceIds: differentIds('coincidence', MOST_EVENTS_PAIRED).optional(),
      eventIds: differentIds('event', MOST_EVENTS_PAIRED).optional(),
      frameIds: frameIds().optional(),
    }),
    answer: candidateInFull,
    makes: true,
  }),
  readCandidate: route('GET', '/candidates/:candidateId', {
    policy: 'candidate:read',
    params: candidateParams,
    answer: candidateInFull,
  }),
  /** Of events those that are named, the others staying as they are; of frames the whole list. */
  changeCandidate: route('PATCH', '/candidates/:candidateId', {
    policy: 'candidate:change',
    params: candidateParams,
    body: edit({
      title: title().optional(),
      about: about().optional(),
      events: listOf(eventGiven, 'events').max(MOST_CANDIDATE_EVENTS, `a list of at most ${MOST_CANDIDATE_EVENTS} events`).optional(),
      frameIds: frameIds().optional(),
    }),
    answer: candidateInFull,
    mostBodyBytes: 512 * 1024,
  }),
  /** Computes the program's proposals anew, as after readings were computed anew; what was decided on stays. */
  proposeClaims: route('POST', '/candidates/:candidateId/claims/propose', {
    policy: 'claim:edit',
    params: candidateParams,
    body: versionSeen(),
    answer: candidateInFull,
  }),
  /** Claims what the program has not proposed; refused where the numbers do not carry it. */
  addClaim: route('POST', '/candidates/:candidateId/claims', {
    policy: 'claim:edit',
    params: candidateParams,
    body: record({ ...claimFields, note: claimNote().optional(), version: version() }).refine(isPairOrWhole, PAIR_FAULT),
    answer: candidateInFull,
    makes: true,
  }),
  /** Accepts a claim, weakens it to another that the numbers carry, or drops it; the version is the candidate's. */
  decideClaim: route('PATCH', '/candidates/:candidateId/claims/:claimId', {
    policy: 'claim:edit',
    params: z.strictObject({ candidateId: idText, claimId: idText }),
    body: record({
      state: oneOf('accepted', 'weakened', 'dropped'),
      /** What it is weakened to; there for "weakened" alone. */
      as: record(claimFields).refine(isPairOrWhole, PAIR_FAULT).optional(),
      note: claimNote().optional(),
      version: version(),
    }).refine(({ state, as }) => (state === 'weakened') === (as !== undefined), {
      path: ['as'],
      error: 'what the claim is weakened to, with "weakened" alone',
    }),
    answer: candidateInFull,
  }),
  /** For good; its author or a coordinator. */
  withdrawCandidate: route('POST', '/candidates/:candidateId/withdraw', {
    policy: 'candidate:withdraw',
    params: candidateParams,
    body: versionSeen(),
    answer: candidateInFull,
  }),
  /** Every step, the latest first, at most 20 at once. */
  listCandidateSteps: route('GET', '/candidates/:candidateId/steps', {
    policy: 'candidate:read',
    params: candidateParams,
    query: record(pageQuery),
    answer: pageOf(candidateStep),
  }),
};

export type CandidateBrief = z.infer<typeof candidateBrief>;
export type CandidateInFull = z.infer<typeof candidateInFull>;
export type CandidateStep = z.infer<typeof candidateStep>;
export type CandidateSignature = z.infer<typeof signature>;
export type CandidateClaim = z.infer<typeof candidateClaim>;
export type ClaimGiven = Omit<z.infer<(typeof CANDIDATE_ROUTES)['addClaim']['body']>, 'version'>;
export type ClaimDecided = Omit<z.infer<(typeof CANDIDATE_ROUTES)['decideClaim']['body']>, 'version'>;
export type CandidateEdit = z.infer<(typeof CANDIDATE_ROUTES)['changeCandidate']['body']>;
export type CandidateMaking = z.infer<(typeof CANDIDATE_ROUTES)['makeCandidate']['body']>;
