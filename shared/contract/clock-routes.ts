import * as z from 'zod';
import { code, instant, listOf, oneOf, record } from './leaves';
import { networkParams } from './network-routes';
import { idText, pageOf, pageQuery } from './page';
import { utc, version, versionSeen } from './people';
import { route } from './routes';
import { edit, between, idOf, nameOrEmpty, setupNote, timeGiven, withWarnings } from './setup-leaves';

const MOST_OFFSET_NS = 1e15; // 11 days
const MOST_RATE_NS_PER_DAY = 8.64e12; // a tenth
const MOST_COVARIANCE = 1e28;
/** Most stretches of one clock that are in force at a time. */
export const MOST_SEGMENTS = 1_000;
const ORIGINS = ['certificate', 'by-hand', 'fit', 'import'] as const;

const clockParams = z.strictObject({ clockId: idText });
const segmentParams = clockParams.extend({ segment: idText });

/** One stretch of a clock record as it was stated, for good; in force while `supersededAt` is null. */
export const clockSegment = z.strictObject({
  id: z.int(),
  /** Which stretch of the clock, and which statement of it. */
  segment: z.int(),
  number: z.int(),
  from: instant(),
  /** The instant at which the clock was ahead by exactly the offset. */
  at: instant(),
  /** Positive when the clock is ahead. */
  offsetNs: z.number(),
  offsetSigmaNs: z.number(),
  rateNsPerDay: z.number(),
  rateSigmaNsPerDay: z.number(),
  covarianceNs2PerDay: z.number(),
  referenceId: z.int().nullable(),
  origin: z.enum(ORIGINS),
  note: z.string(),
  createdAt: utc(),
  createdBy: z.int().nullable(),
  supersededAt: utc().nullable(),
});

/** A clock of a network. */
const clockBrief = z.strictObject({
  id: z.int(),
  networkId: z.int(),
  code: z.string(),
  name: z.string(),
  version: z.int(),
  createdAt: utc(),
  /** The sites that keep time by it at present. */
  siteIds: z.array(z.int()),
  /** How many stretches are in force. */
  segmentCount: z.int(),
});

/** A clock and its record in force: each stretch from its beginning to the next one's, `until` null for the last. */
export const clock = clockBrief.extend({ record: z.array(clockSegment.extend({ until: instant().nullable() })) });

const segmentFields = {
  from: timeGiven(),
  /** Absent for `from`. */
  at: timeGiven().optional(),
  offsetNs: between(-MOST_OFFSET_NS, MOST_OFFSET_NS, 'nanoseconds'),
  offsetSigmaNs: between(0, MOST_OFFSET_NS, 'nanoseconds'),
  rateNsPerDay: between(-MOST_RATE_NS_PER_DAY, MOST_RATE_NS_PER_DAY, 'nanoseconds a day'),
  rateSigmaNsPerDay: between(0, MOST_RATE_NS_PER_DAY, 'nanoseconds a day'),
  covarianceNs2PerDay: between(-MOST_COVARIANCE, MOST_COVARIANCE, 'ns^2 a day').optional(),
  /** What the clock was compared with; null for nothing that others share. */
  referenceId: idOf('a time reference of this network, or null').nullable().optional(),
  origin: oneOf('certificate', 'by-hand', 'import'),
  note: setupNote().optional(),
};

interface Errors {
  readonly offsetSigmaNs: number;
  readonly rateSigmaNsPerDay: number;
  readonly covarianceNs2PerDay?: number | undefined;
}
const ROUNDING = 1 + 1e-9; // of a correlation of exactly 1
const correlates = ({ offsetSigmaNs, rateSigmaNsPerDay, covarianceNs2PerDay = 0 }: Errors) =>
  Math.abs(covarianceNs2PerDay) <= offsetSigmaNs * rateSigmaNsPerDay * ROUNDING;
const COVARIANCE_RIGHT = { path: ['covarianceNs2PerDay'], error: 'at most offsetSigmaNs x rateSigmaNsPerDay in size' };

export const segmentGiven = record(segmentFields).refine(correlates, COVARIANCE_RIGHT);
const segmentAsked = record({ ...segmentFields, version: version() }).refine(correlates, COVARIANCE_RIGHT);

/** What a change of a record does to the times for which it speaks, a sentence each. */
const explained = { ...withWarnings, effects: z.array(z.string()) };

/**
 * A clock record has no overlaps and no gaps: each stretch holds until the next begins, the last for good, and before the first there is
 * none. `effects` says what an addition, edit or end does. An operator has the clocks of their own sites.
 */
export const CLOCK_ROUTES = {
  listClocks: route('GET', '/networks/:networkId/clocks', {
    policy: 'clock:list',
    params: networkParams,
    query: record(pageQuery),
    answer: pageOf(clockBrief),
  }),
  readClock: route('GET', '/clocks/:clockId', { policy: 'clock:read', params: clockParams, answer: clock }),
  /** Every statement that was ever made of the clock, latest first. */
  listSegments: route('GET', '/clocks/:clockId/segments', {
    policy: 'clock:read-history',
    params: clockParams,
    query: record(pageQuery),
    answer: pageOf(clockSegment),
  }),
  makeClock: route('POST', '/networks/:networkId/clocks', {
    policy: 'clock:make',
    params: networkParams,
    body: record({
      code: code().refine((given) => given !== 'exact', 'a code other than "exact", which means no clock at all'),
      name: nameOrEmpty().optional(),
      segments: listOf(segmentGiven, 'clock segments').max(100, 'a list of at most 100 clock segments').optional(),
    }),
    answer: clock.extend(explained),
    makes: true,
  }),
  changeClock: route('PATCH', '/clocks/:clockId', {
    policy: 'clock:change',
    params: clockParams,
    body: record({ name: nameOrEmpty(), version: version() }),
    answer: clock,
  }),
  addSegment: route('POST', '/clocks/:clockId/segments', {
    policy: 'clock-segment:add',
    params: clockParams,
    body: segmentAsked,
    answer: clock.extend(explained),
    makes: true,
  }),
  /** States a stretch in force anew, whole. */
  editSegment: route('POST', '/clocks/:clockId/segments/:segment/edit', {
    policy: 'clock-segment:edit',
    params: segmentParams,
    body: segmentAsked,
    answer: clock.extend(explained),
  }),
  /** Takes a stretch out of the record: the one before it goes on. */
  endSegment: route('POST', '/clocks/:clockId/segments/:segment/end', {
    policy: 'clock-segment:end',
    params: segmentParams,
    body: versionSeen(),
    answer: clock.extend(explained),
  }),
};

/** What clocks are compared with; `versions` latest first, the one in force not superseded. */
export const timeReference = z.strictObject({
  id: z.int(),
  networkId: z.int(),
  code: z.string(),
  name: z.string(),
  version: z.int(),
  createdAt: utc(),
  sigmaNs: z.number(),
  versions: z.array(
    z.strictObject({
      id: z.int(),
      number: z.int(),
      sigmaNs: z.number(),
      note: z.string(),
      createdAt: utc(),
      createdBy: z.int().nullable(),
      supersededAt: utc().nullable(),
    }),
  ),
});

const sigmaNs = () => between(0, MOST_OFFSET_NS, 'nanoseconds');

/** A reference's error is common to every clock segment that names it. */
export const REFERENCE_ROUTES = {
  listReferences: route('GET', '/networks/:networkId/references', {
    policy: 'time-reference:list',
    params: networkParams,
    query: record(pageQuery),
    answer: pageOf(timeReference),
  }),
  makeReference: route('POST', '/networks/:networkId/references', {
    policy: 'time-reference:make',
    params: networkParams,
    body: record({ code: code(), name: nameOrEmpty().optional(), sigmaNs: sigmaNs(), note: setupNote().optional() }),
    answer: timeReference,
    makes: true,
  }),
  /** Another error is another version; what is absent stays as it is. */
  changeReference: route('PATCH', '/references/:referenceId', {
    policy: 'time-reference:change',
    params: z.strictObject({ referenceId: idText }),
    body: edit({ name: nameOrEmpty().optional(), sigmaNs: sigmaNs().optional(), note: setupNote().optional() }),
    answer: timeReference,
  }),
};

export type Clock = z.infer<typeof clock>;
export type ClockSegmentShown = z.infer<typeof clockSegment>;
export type TimeReference = z.infer<typeof timeReference>;
