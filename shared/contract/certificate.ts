import * as z from 'zod';
import { CLAIM_KINDS } from '../review/claims';
import { INTERVAL_CLASSES } from './coincidence';
import { code, listOf, numberThat, oneOf, record, text } from './leaves';
import { networkFileSchema } from './network-file';
import { eventOfSet, frameAtSet, MOST_EVENTS_PAIRED, pairInFull } from './pair-routes';
import { utc } from './people';
import { unbounded } from './unbounded';

/**
 * The certificate: a file with all that a candidate's claims rest on, what was computed from it, and who signed it, which anyone can compute
 * again. Described for others in `static/certificate.schema.json`.
 */

const SHA256 = /^[0-9a-f]{64}$/;

/** A SHA-256 as 64 lower-case hex digits. */
const sha256 = () =>
  z
    .custom<string>((value) => typeof value === 'string' && SHA256.test(value), { error: 'a SHA-256 as 64 lower-case hex digits' })
    .meta({ type: 'string', pattern: SHA256.source });
const whole = (least: number) => numberThat(`a whole number, at least ${least}`, (value) => Number.isSafeInteger(value) && value >= least);
const words = () => text('a text');

/** A record as its site sent it, character for character. */
const frozenRecord = record({
  site: code(),
  /** The entry of the network's sites by which it is read, where that is not the one of its site's own code: a site that changed meanwhile. */
  entry: code().optional(),
  series: words(),
  sequence: words(),
  kind: words(),
  reading: words(),
  readingForm: oneOf('iso', 'tai-pair'),
  sigmaNs: words(),
  amplitude: words(),
  /** Further columns; nothing is computed from them. */
  extra: z.record(z.string(), z.string()).optional(),
});

/** All that the numbers of a snapshot are computed from, and nothing else. */
const frozenInputs = record({
  /** A network file of the batch command: of it what these records rest on, with a rule where there is one. */
  network: networkFileSchema.extend({ rule: networkFileSchema.shape.rule.optional() }),
  records: listOf(frozenRecord, 'records')
    .min(1, 'a list of at least one record')
    .max(MOST_EVENTS_PAIRED, `a list of at most ${MOST_EVENTS_PAIRED} records`),
  /** The text of the IERS leap-second list. */
  leapSeconds: words(),
  /** The lines of the IERS finals2000A file that are used; null where the Earth's orientation was that of no table. */
  orientation: words().nullable(),
  /** How many standard errors make a decision. */
  sigmas: numberThat('a number of standard errors, 0 or more', (value) => value >= 0),
});

/** Every number of every pair. */
const frozenResults = record({
  /** In the order of events: time, then site, series, sequence. */
  events: z.array(eventOfSet.omit({ id: true, version: true })),
  /** Those of the network, the geocentric one first, as they are at the first event. */
  frames: z.array(frameAtSet),
  pairs: z.array(pairInFull),
});

const perClock = z.number().nullable();

/** The numbers that a claim states, of a pair or of the whole. */
export const claimNumbers = z.union(
  [
    z.strictObject({
      sigmas: z.number(),
      class: z.enum(INTERVAL_CLASSES),
      dtNs: z.number(),
      sigmaNs: z.number(),
      marginSigma: unbounded(),
      turningSpeedC: z.number().nullable(),
      undoneBy: z
        .strictObject({ changeNs: z.number(), inSigmasOf: z.strictObject({ a: perClock, b: perClock, rate: perClock }) })
        .nullable(),
    }),
    z.strictObject({
      sigmas: z.number(),
      pairs: z.int(),
      spacelikePairs: z.int(),
      marginSigma: unbounded().nullable(),
      leastTurningSpeedC: z.number().nullable(),
    }),
  ],
  { error: 'the numbers of a claim of a pair, or of one of the whole' },
);

/** What became of a claim that the program proposed. */
export const CLAIM_STATES = ['proposed', 'accepted', 'weakened', 'dropped'] as const;

/** A claim as it was submitted; `a` and `b` are places in the results' events. */
const frozenClaim = record({
  kind: oneOf(...CLAIM_KINDS),
  a: whole(1).nullable(),
  b: whole(1).nullable(),
  frame: code().nullable(),
  state: oneOf(...CLAIM_STATES),
  note: words(),
  numbers: claimNumbers,
});

/** Everything that was frozen when a candidate was submitted. */
export const snapshotBody = record({
  network: record({ code: code(), name: words() }),
  candidate: record({ number: whole(1), title: words(), about: words(), author: words() }),
  /** 1, 2, 3, ... of the candidate. */
  snapshot: whole(1),
  createdAt: utc(),
  /** Version of the program that computed it. */
  program: words(),
  inputs: frozenInputs,
  results: frozenResults,
  claims: listOf(frozenClaim, 'claims'),
});

const decision = () => oneOf('confirm', 'dispute');

/** A reviewer's decision on a snapshot; its hash covers all but what became of it later. */
const frozenSignature = record({
  name: words(),
  decision: decision(),
  reason: words(),
  /** Of each claim by its place in the snapshot, 1, 2, 3, ... */
  claims: listOf(record({ claim: whole(1), decision: decision(), reason: words() }), 'decisions on claims'),
  signedAt: utc(),
  snapshotSha256: sha256(),
  /** The hash of the candidate's signature before it; null for its first. */
  previousSha256: sha256().nullable(),
  sha256: sha256(),
  withdrawnAt: utc().nullable(),
  /** The hash of the later signature that stands in its place. */
  supersededBy: sha256().nullable(),
});

export const CERTIFICATE_FORMAT = 'skewline-certificate';

export const certificate = record({
  format: oneOf(CERTIFICATE_FORMAT),
  version: numberThat('1, the version of the format', (value) => value === 1),
  snapshot: snapshotBody,
  /** Of the canonical JSON of `snapshot`. */
  sha256: sha256(),
  /** All of the candidate, in the order in which they were given; those of other snapshots too, since each names the one before it. */
  signatures: listOf(frozenSignature, 'signatures'),
  /** Of the canonical JSON of `signatures`, with what became of each. */
  signaturesSha256: sha256(),
});

export type FrozenRecord = z.infer<typeof frozenRecord>;
export type FrozenInputs = z.infer<typeof frozenInputs>;
export type FrozenResults = z.infer<typeof frozenResults>;
export type FrozenClaim = z.infer<typeof frozenClaim>;
export type FrozenSignature = z.infer<typeof frozenSignature>;
export type SnapshotBody = z.infer<typeof snapshotBody>;
export type Certificate = z.infer<typeof certificate>;
