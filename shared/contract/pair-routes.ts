import * as z from 'zod';
import { INTERVAL_CLASSES } from './coincidence';
import { errorTerm } from './event-routes';
import { instant, record } from './leaves';
import { idsText } from './list-query';
import { idText } from './page';
import { route } from './routes';
import { unbounded } from './unbounded';

/** Most events whose pairs are computed at once. */
export const MOST_EVENTS_PAIRED = 50;

/** How many standard errors make a decision when nothing else is asked for. */
export const USUAL_SIGMAS = 3;

const vector = () => z.tuple([z.number(), z.number(), z.number()]);
const SIGMAS_RIGHT = 'how many standard errors make a decision: a number from 0 to 100';
const FRAMES_RIGHT = '1 to 20 codes of frames with commas between them';

/** An event of the set, in the order of events. */
export const eventOfSet = z.strictObject({
  id: z.int(),
  name: z.string(),
  site: z.string(),
  at: instant(),
  placeM: vector(),
  sigmaNs: z.number(),
  version: z.int(),
  terms: z.array(errorTerm),
});

/** A frame as it is at the set's first event: its velocity in the geocentric frame, GCRS axes. */
export const frameAtSet = z.strictObject({ code: z.string(), gamma: z.number(), gammaBeta: vector() });

/** One independent part of the error of a pair, in ns: of its time difference, or (`distance`) of its distance over c. */
const pairTerm = z.strictObject({
  name: z.enum(['reading-a', 'reading-b', 'delay-a', 'delay-b', 'clock-a', 'clock-b', 'rate', 'reference-a', 'reference-b', 'distance']),
  sigmaNs: z.number(),
});

/** A pair with all that can be said of it; `a` and `b` are places in `events`, a before b. */
export const pairInFull = z.strictObject({
  a: z.int(),
  b: z.int(),
  class: z.enum(INTERVAL_CLASSES),
  dtNs: z.number(),
  distanceM: z.number(),
  sigmaDtNs: z.number(),
  sigmaGapNs: z.number(),
  marginSigma: unbounded(),
  reverseMarginSigma: unbounded(),
  intervalM2: z.number(),
  properTimeS: z.number().nullable(),
  properDistanceM: z.number().nullable(),
  turning: z.strictObject({ speedC: z.number(), sigmaC: z.number(), toward: vector() }).nullable(),
  terms: z.array(pairTerm),
  /** One for each of `frames`: the time from a to b there, and which comes first. */
  orders: z.array(z.strictObject({ dtNs: z.number(), sigmaNs: z.number(), order: z.enum(['a', 'b', 'tie']) })),
});

/** Every pair of a set, with its events and the frames at its first one. */
const pairsOfSet = z.strictObject({
  sigmas: z.number(),
  events: z.array(eventOfSet),
  frames: z.array(frameAtSet),
  pairs: z.array(pairInFull),
});

/** Every pair of any set of events, computed when it is asked for; the numbers are those of the batch command. */
export const PAIR_ROUTES = {
  readPairs: route('GET', '/networks/:networkId/pairs', {
    policy: 'pair:read',
    params: z.strictObject({ networkId: idText }),
    query: record({
      events: idsText(MOST_EVENTS_PAIRED),
      /** Absent for all frames of the network. */
      frames: z
        .string({ error: FRAMES_RIGHT })
        .regex(/^[A-Za-z0-9_-]{1,24}(?:,[A-Za-z0-9_-]{1,24}){0,19}$/, FRAMES_RIGHT)
        .transform((text) => [...new Set(text.split(','))])
        .optional(),
      sigmas: z
        .string({ error: SIGMAS_RIGHT })
        .regex(/^\d{1,3}(?:\.\d{1,6})?$/, SIGMAS_RIGHT)
        .transform(Number)
        .refine((value) => value <= 100, SIGMAS_RIGHT)
        .optional(),
    }),
    answer: pairsOfSet,
  }),
};

export type PairInFull = z.infer<typeof pairInFull>;
export type PairsOfSet = z.infer<typeof pairsOfSet>;
