import * as z from 'zod';
import { idsText, MOST_IDS, partAt, partQuery, wordText } from './list-query';
import { idText } from './page';
import { oneOf, record, text } from './leaves';
import { utc, version } from './people';
import { route } from './routes';

/** Why a record is set aside: what the batch command says, and what only a stream, an upload or a platform can meet. */
export const SET_ASIDE_REASONS = [
  'columns',
  'site',
  'sequence',
  'series',
  'kind',
  'reading-empty',
  'reading-form',
  'date',
  'time-of-day',
  'no-leap-second',
  'before-1972',
  'sigma',
  'amplitude',
  'before-clock-record',
  'outside-run',
  'conflict',
  'future',
  'outside-ephemeris',
  'ambiguous',
  'unreadable',
  'too-long',
] as const;

export const SET_ASIDE_STATES = ['open', 'accepted', 'dismissed'] as const;

const networkParams = z.strictObject({ networkId: idText });
const setAsideParams = z.strictObject({ setAsideId: idText });

/** A record that could not be accepted, verbatim, with the reason and what was decided. */
export const setAside = z.strictObject({
  id: z.int(),
  /** Null where the record's site is not known. */
  siteId: z.int().nullable(),
  site: z.string().nullable(),
  /** `*` where it could not be read. */
  series: z.string(),
  /** Null where it could not be read. */
  sequence: z.string().nullable(),
  reason: z.enum(SET_ASIDE_REASONS),
  /** What was wrong and what would be right. */
  detail: z.string(),
  verbatim: z.string(),
  receivedAtMs: z.int(),
  /** The upload and the line on which the record starts; null for what was streamed. */
  intakeId: z.int().nullable(),
  line: z.int().nullable(),
  /** The record as one of the known ones, where it could be read as such. */
  eventId: z.int().nullable(),
  state: z.enum(SET_ASIDE_STATES),
  retryAtMs: z.int().nullable(),
  decidedAt: utc().nullable(),
  /** Null where the program decided: a clock record or a run now holds it. */
  decidedBy: z.strictObject({ id: z.int(), name: z.string() }).nullable(),
  decision: z.string(),
  version: z.int(),
});

/** One content of an identity. */
const content = z.strictObject({
  /** Its id as a record. */
  eventId: z.int(),
  variant: z.int(),
  kind: z.string(),
  reading: z.string(),
  readingForm: z.string(),
  sigma: z.string(),
  amplitude: z.string(),
  extra: z.record(z.string(), z.string()),
  receivedAtMs: z.int(),
  /** Whether it is the one that stands as the event. */
  stands: z.boolean(),
});

const MOST_FIELD_CHARACTERS = 400;
const MOST_WHY_CHARACTERS = 2_000;
const MOST_EXTRA_FIELDS = 100;
const field = () =>
  text(`a text of at most ${MOST_FIELD_CHARACTERS} characters`).refine(
    (given) => given.length <= MOST_FIELD_CHARACTERS,
    `a text of at most ${MOST_FIELD_CHARACTERS} characters`,
  );
const WHY_RIGHT = `why it is decided so: at most ${MOST_WHY_CHARACTERS} characters`;
const why = () => text(WHY_RIGHT).refine((given) => given.length <= MOST_WHY_CHARACTERS, WHY_RIGHT);
const reasoned = () => why().refine((given) => given.trim() !== '', `${WHY_RIGHT}, and not empty`);

/** A record as it should have been, as texts. */
const mendedRecord = record({
  series: field(),
  sequence: field(),
  kind: field(),
  reading: field(),
  readingForm: oneOf('iso', 'tai-pair'),
  sigmaNs: field(),
  amplitude: field(),
  extra: z
    .record(z.string(), field(), { error: `an object of texts, ${MOST_EXTRA_FIELDS} at most` })
    .refine((given) => Object.keys(given).length <= MOST_EXTRA_FIELDS, `an object of texts, ${MOST_EXTRA_FIELDS} at most`)
    .optional(),
});

const setAsideInFull = setAside.extend({
  networkId: z.int(),
  /** The event that it was mended to, which names it as `mendedFromId`; null where it was not. */
  mendedEventId: z.int().nullable(),
  contents: z.array(content),
});

/** What could not be accepted: an operator sees that of their own sites, and nobody's that names no site. */
export const SET_ASIDE_ROUTES = {
  listSetAsides: route('GET', '/networks/:networkId/set-asides', {
    policy: 'set-aside:list',
    params: networkParams,
    query: record({
      ...partQuery,
      /** Absent for the open ones. */
      state: wordText(...SET_ASIDE_STATES, 'all'),
      reason: wordText(...SET_ASIDE_REASONS),
      siteIds: idsText(MOST_IDS).optional(),
    }),
    answer: partAt(setAside),
  }),
  /** With all contents of its identity where it could be read as a record: of a conflict, which may stand. */
  readSetAside: route('GET', '/set-asides/:setAsideId', {
    policy: 'set-aside:read',
    params: setAsideParams,
    answer: setAsideInFull,
  }),
  /** Lets it stand, as it came or mended; of a conflict this content, and the others are dismissed. */
  acceptSetAside: route('POST', '/set-asides/:setAsideId/accept', {
    policy: 'set-aside:decide',
    params: setAsideParams,
    body: record({ version: version(), why: why(), record: mendedRecord.optional() }),
    answer: setAsideInFull,
  }),
  /** Leaves it set aside for good. */
  dismissSetAside: route('POST', '/set-asides/:setAsideId/dismiss', {
    policy: 'set-aside:decide',
    params: setAsideParams,
    body: record({ version: version(), why: reasoned() }),
    answer: setAsideInFull,
  }),
  /** Of a conflict no content stands. */
  dismissConflict: route('POST', '/set-asides/:setAsideId/dismiss-conflict', {
    policy: 'set-aside:decide',
    params: setAsideParams,
    body: record({ version: version(), why: reasoned() }),
    answer: setAsideInFull,
  }),
};

export type SetAsideInFull = z.infer<typeof setAsideInFull>;
export type SetAside = z.infer<typeof setAside>;
export type SetAsideContent = z.infer<typeof content>;
export type SetAsideAccepting = z.infer<(typeof SET_ASIDE_ROUTES)['acceptSetAside']['body']>;
