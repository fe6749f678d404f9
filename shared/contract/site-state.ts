import * as z from 'zod';
import { instant } from './leaves';
import { idText } from './page';
import { route } from './routes';
import { siteStream } from './stream-routes';

/** How a site does at this moment: its stream, and what of it a person watches. */
export const siteState = siteStream.extend({
  /** From the latest event to its record's arrival, by the server's clock: negative for a reading ahead of it. Null without an event. */
  delayMs: z.int().nullable(),
  /** All time errors of the latest event together. Null without an event. */
  lastSigmaNs: z.number().nullable(),
  /** Events of the last minute, by their own times. */
  eventsLastMinute: z.number(),
});

/** The open sites of a network by their codes, of an operator their own, as they were at a change number. */
export const siteStates = z.strictObject({
  networkId: z.int(),
  change: z.int(),
  /** The server's clock. */
  atMs: z.int(),
  /** Up to when the whole network is complete; null while a site has said nothing. */
  completeTo: instant().nullable(),
  sites: z.array(siteState),
});

export const SITE_STATE_ROUTES = {
  readSiteStates: route('GET', '/networks/:networkId/site-states', {
    policy: 'completeness:read',
    params: z.strictObject({ networkId: idText }),
    answer: siteStates,
  }),
};

export type SiteStateNow = z.infer<typeof siteState>;
export type SiteStates = z.infer<typeof siteStates>;
