import * as z from 'zod';
import { coincidenceBrief } from './coincidence';
import { eventBrief } from './event-routes';
import { instant } from './leaves';

/** What one message tells at most; beyond it the rows are left out, and it says so. */
export const LIVE_MOST = {
  events: 1_000,
  coincidences: 250,
  /** Of coincidences that ended or became final, of events that went, of set-asides that were decided. */
  ids: 2_000,
  hints: 50,
} as const;

const number = () => z.int().min(1);
const span = {
  networkId: z.int(),
  /** The changes from this number to that one, both included. */
  from: number(),
  to: number(),
  /** The server's clock at the last of them. */
  atMs: z.int(),
};

/** Of what kind something changed, and which; nulls where it may be any. Whoever shows it asks for it anew over HTTP. */
export const changeHint = z.strictObject({
  kind: z.enum(['setup', 'rule', 'reprocessed', 'intake', 'candidate', 'job']),
  what: z.string().nullable(),
  id: z.int().nullable(),
});

/**
 * What changes did to a network. Put over whatever was read at any number from `from - 1` to `to` (what is there by its id takes the place of
 * what was), it gives what is at `to`; so an overlap doubles nothing. What a later change touches again may be left out: that one tells it.
 *
 * Where `isCut`, there was more than a message may hold, and none of it is told: take the list anew.
 */
export const networkChanges = z.strictObject({
  kind: z.literal('changes'),
  ...span,
  events: z.strictObject({
    /** That came, or were computed anew. */
    items: z.array(eventBrief).max(LIVE_MOST.events),
    /** Ids of those that no longer stand. */
    gone: z.array(z.int()).max(LIVE_MOST.ids),
    isCut: z.boolean(),
  }),
  /** None are told to an operator, who does not see other sites' events. */
  coincidences: z.strictObject({
    /** That appeared and are in force. */
    items: z.array(coincidenceBrief).max(LIVE_MOST.coincidences),
    /** Ids of those that ended. */
    ended: z.array(z.int()).max(LIVE_MOST.ids),
    /** Ids of those that became final: nothing else of one changes by that. */
    final: z.array(z.int()).max(LIVE_MOST.ids),
    /** How many events became crowded, or are so no more, or otherwise. */
    crowded: z.int(),
    isCut: z.boolean(),
  }),
  /** Up to when the whole network is complete. */
  completeTo: instant().nullable(),
  /** The sites that said more of it. */
  completeness: z.array(z.strictObject({ siteId: z.int(), completeTo: instant() })),
  /** How many records of each site were set aside meanwhile; how many there are say the states of the sites. */
  setAsides: z.array(z.strictObject({ siteId: z.int(), records: z.int() })),
  /** Ids of set-asides that were decided. */
  decided: z.array(z.int()).max(LIVE_MOST.ids),
  hints: z.array(changeHint).max(LIVE_MOST.hints),
});

/** What a browser that reads slowly is told in the place of all changes that it missed: it asks for them by `network:missed`. */
export const changesInSum = z.strictObject({
  kind: z.literal('sum'),
  ...span,
  /** How many events came, and how many coincidences appeared. */
  events: z.int(),
  coincidences: z.int(),
});

export const networkChanged = z.discriminatedUnion('kind', [networkChanges, changesInSum]);

export type NetworkChanges = z.infer<typeof networkChanges>;
export type ChangesInSum = z.infer<typeof changesInSum>;
export type NetworkChanged = z.infer<typeof networkChanged>;
export type ChangeHint = z.infer<typeof changeHint>;
