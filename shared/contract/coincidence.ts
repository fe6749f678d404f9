import * as z from 'zod';
import { instant } from './leaves';
import { unbounded } from './unbounded';

export const INTERVAL_CLASSES = ['timelike', 'spacelike', 'undecided'] as const;
export const COINCIDENCE_CLASSES = [...INTERVAL_CLASSES, 'mixed'] as const;

/** Up to this fold a coincidence in brief has its pairs with it. */
export const MOST_FOLD_WITH_PAIRS = 4;

/** An event of a coincidence, as it was when the coincidence was computed. */
const memberBrief = z.strictObject({
  eventId: z.int(),
  site: z.string(),
  name: z.string(),
  /** From the first event on. */
  offsetNs: z.number(),
});

/** A pair by the places of its events, 1, 2, 3, ..., the earlier first. */
const pairBrief = z.strictObject({ a: z.int(), b: z.int(), class: z.enum(INTERVAL_CLASSES), marginSigma: unbounded() });

const numbers = {
  id: z.int(),
  /** The first 12 hex digits of the set's hash, as the batch command has it. */
  name: z.string(),
  rule: z.string(),
  state: z.enum(['open', 'final', 'former']),
  first: instant(),
  fold: z.int(),
  spanNs: z.number(),
  /** That of its pairs where they agree, else mixed. */
  class: z.enum(COINCIDENCE_CLASSES),
  pairsOf: z.strictObject({ timelike: z.int(), spacelike: z.int(), undecided: z.int() }),
  /** Of the pair nearest to the light cone; positive = timelike. */
  nearestMarginSigma: unbounded(),
  /** Null where no pair turns. */
  leastTurningSpeedC: z.number().nullable(),
  /** Sum of the events' amplitudes; null where none has one. */
  amplitude: z.number().nullable(),
  /** How many at least as strong unrelated triggers are expected to make in the run; null until it is known. */
  expectedByChance: z.number().nullable(),
  touchesGap: z.boolean(),
  sinceChange: z.int().nullable(),
};

/** A coincidence as it stands in a list. */
export const coincidenceBrief = z.strictObject({
  ...numbers,
  members: z.array(memberBrief),
  /** Null above a fold of `MOST_FOLD_WITH_PAIRS`. */
  pairs: z.array(pairBrief).nullable(),
});

/** A pair of a coincidence with all its numbers. */
const pairInFull = pairBrief.extend({
  dtNs: z.number(),
  distanceM: z.number(),
  sigmaDtNs: z.number(),
  sigmaGapNs: z.number(),
  reverseMarginSigma: unbounded(),
  intervalM2: z.number(),
  properTimeS: z.number().nullable(),
  properDistanceM: z.number().nullable(),
  turning: z.strictObject({ speedC: z.number(), sigmaC: z.number(), toward: z.tuple([z.number(), z.number(), z.number()]) }).nullable(),
});

const relative = z.strictObject({ id: z.int(), name: z.string(), fold: z.int(), state: z.enum(['open', 'final', 'former']) });

/** One coincidence with its events, pairs, what it grew from and into, and the rule that found it. */
export const coincidenceInFull = z.strictObject({
  ...numbers,
  networkId: z.int(),
  setHash: z.string(),
  endedChange: z.int().nullable(),
  ruleVersion: z.strictObject({
    id: z.int(),
    ruleId: z.int(),
    code: z.string(),
    name: z.string(),
    number: z.int(),
    minimumFold: z.int(),
    sigmas: z.number(),
    windowKind: z.enum(['light-time', 'fixed']),
    speedC: z.number().nullable(),
    marginNs: z.number().nullable(),
    widthNs: z.number().nullable(),
    frame: z.string().nullable(),
    inForce: z.boolean(),
  }),
  members: z.array(
    memberBrief.extend({
      place: z.int(),
      siteId: z.int(),
      at: instant(),
      placeM: z.tuple([z.number(), z.number(), z.number()]),
      sigmaNs: z.number(),
      amplitude: z.number().nullable(),
      eventVersion: z.int(),
      /** Whether the event still is as it was then. */
      isCurrent: z.boolean(),
    }),
  ),
  pairs: z.array(pairInFull),
  grewFrom: z.array(relative),
  grewInto: z.array(relative),
  /** What the same set was before, the newest first. */
  former: z.array(relative),
});

export type CoincidenceBrief = z.infer<typeof coincidenceBrief>;
export type CoincidenceInFull = z.infer<typeof coincidenceInFull>;
