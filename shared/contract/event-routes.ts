import * as z from 'zod';
import { KINDS, SIGMA_SOURCES } from '../reconcile/record';
import { coincidenceBrief } from './coincidence';
import { instant, record } from './leaves';
import { idsText, isUsableSpan, MOST_IDS, partAt, partOf, partQuery, SPAN_FAULT, spanQuery, wordText } from './list-query';
import { idText } from './page';
import { utc } from './people';
import { route } from './routes';

const vector = () => z.tuple([z.number(), z.number(), z.number()]);
const networkParams = z.strictObject({ networkId: idText });
const eventParams = z.strictObject({ eventId: idText });

/** How a reading can be written. */
export const READING_FORMS = ['iso', 'tai-pair', 'gps-week', 'mjd', 'unix'] as const;

/** An event as it stands in lists and pictures. Its id is that of its record; its name is `SITE:17`, or with a series `SITE:b:17`. */
export const eventBrief = z.strictObject({
  id: z.int(),
  name: z.string(),
  siteId: z.int(),
  site: z.string(),
  kind: z.enum(KINDS),
  at: instant(),
  /** Geocentric inertial (GCRS axes), at the event. */
  placeM: vector(),
  /** All time errors together. */
  sigmaNs: z.number(),
  amplitude: z.number().nullable(),
});

/** What the site wrote, character for character. */
export const eventRecord = z.strictObject({
  series: z.string(),
  sequence: z.string(),
  /** 0 for the first content under this identity, then 1, 2, ... */
  variant: z.int(),
  reading: z.string(),
  readingForm: z.enum(READING_FORMS),
  sigma: z.string(),
  amplitude: z.string(),
  extra: z.record(z.string(), z.string()),
  receivedAtMs: z.int(),
  /** The upload that brought it; null for what was streamed. */
  intakeId: z.int().nullable(),
  /** The set-aside that it was mended from; null for what came so. */
  mendedFromId: z.int().nullable(),
});

const stated = { id: z.int(), number: z.int(), createdAt: utc(), supersededAt: utc().nullable() };

/** What an event rests on; what is superseded since says when. */
export const grounding = z.strictObject({
  site: z.strictObject({
    ...stated,
    scale: z.enum(['UTC', 'TAI', 'GPS', 'TT', 'proper']),
    delayNs: z.number(),
    delaySigmaNs: z.number(),
    /** Earth-fixed; null for a platform. */
    itrsM: vector().nullable(),
    positionSigmaM: z.number(),
    origin: z.string(),
  }),
  /** Null for an exact clock. */
  segment: z
    .strictObject({
      ...stated,
      clock: z.string(),
      segment: z.int(),
      from: instant(),
      at: instant(),
      offsetNs: z.number(),
      offsetSigmaNs: z.number(),
      rateNsPerDay: z.number(),
      rateSigmaNsPerDay: z.number(),
      covarianceNs2PerDay: z.number(),
      origin: z.string(),
    })
    .nullable(),
  reference: z.strictObject({ ...stated, code: z.string(), sigmaNs: z.number() }).nullable(),
  run: z.string(),
  leapSeconds: z.strictObject({ id: z.int(), updatedTaiS: z.int(), expiresTaiS: z.int(), isInForce: z.boolean() }),
  orientation: z.strictObject({ id: z.int(), firstMjd: z.int(), lastMjd: z.int(), isInForce: z.boolean() }).nullable(),
});

/** One independent part of an event's time error. */
export const errorTerm = z.strictObject({ name: z.enum(['reading', 'delay', 'clock', 'reference']), sigmaNs: z.number() });

/**
 * From what the site wrote to the event, step by step: the reading on the time axis (its scale taken off), less the delay, less the clock's
 * error there (offset, and rate times the days since the segment's epoch), gives the instant; with the place it is the event.
 */
export const correction = z.strictObject({
  written: z.string(),
  scale: z.enum(['UTC', 'TAI', 'GPS', 'TT', 'proper']),
  /** The reading on the axis of TAI, nothing taken off yet. */
  readAt: instant(),
  delayNs: z.number(),
  offsetNs: z.number(),
  sinceEpochDays: z.number(),
  driftNs: z.number(),
  /** Delay, offset and drift together, as the instants differ: whole picoseconds. */
  takenOffNs: z.number(),
  at: instant(),
  itrsM: vector().nullable(),
  placeM: vector(),
});

/** An event as it was computed once: in force while `endedChange` is null. */
export const eventVersion = z.strictObject({
  version: z.int(),
  at: instant(),
  placeM: vector(),
  sigmaNs: z.number(),
  sigmaOrigin: z.enum(SIGMA_SOURCES),
  amplitude: z.number().nullable(),
  changeNumber: z.int(),
  endedChange: z.int().nullable(),
  terms: z.array(errorTerm),
  /** Null where the reading's scale or form is not one that is read here. */
  correction: correction.nullable(),
  grounding,
});

/** One event with everything that it rests on. */
export const eventInFull = z.strictObject({
  id: z.int(),
  networkId: z.int(),
  name: z.string(),
  siteId: z.int(),
  site: z.string(),
  kind: z.enum(KINDS),
  record: eventRecord,
  /** Null for a record that does not stand: set aside, or withdrawn. */
  current: eventVersion.nullable(),
  /** What it was before, the newest first. */
  former: z.array(eventVersion),
});

/** Events: an operator sees those of their own sites. */
export const EVENT_ROUTES = {
  listEvents: route('GET', '/networks/:networkId/events', {
    policy: 'event:list',
    params: networkParams,
    query: record({ ...partQuery, ...spanQuery, siteIds: idsText(MOST_IDS).optional(), kind: wordText(...KINDS) }).refine(
      isUsableSpan,
      SPAN_FAULT,
    ),
    answer: partAt(eventBrief),
  }),
  readEvent: route('GET', '/events/:eventId', { policy: 'event:read', params: eventParams, answer: eventInFull }),
  /** Those in force that hold it, in time order. */
  listCoincidencesOfEvent: route('GET', '/events/:eventId/coincidences', {
    policy: 'coincidence:list',
    params: eventParams,
    query: record(partQuery),
    answer: partOf(coincidenceBrief),
  }),
};

export type EventBrief = z.infer<typeof eventBrief>;
export type EventInFull = z.infer<typeof eventInFull>;
export type EventVersion = z.infer<typeof eventVersion>;
export type Grounding = z.infer<typeof grounding>;
export type Correction = z.infer<typeof correction>;
