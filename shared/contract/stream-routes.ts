import * as z from 'zod';
import { instant, record } from './leaves';
import { countText, isUsableSpan, partOf, partQuery, SPAN_FAULT, spanQuery } from './list-query';
import { idText, pageOf, pageQuery } from './page';
import { route } from './routes';

const siteParams = z.strictObject({ siteId: idText });
const networkParams = z.strictObject({ networkId: idText });

const SERIES_RIGHT =
  'the name of a series: up to 24 letters, digits, _ or -, empty for the one without a name, * for what could not be read';
const seriesText = z.string({ error: SERIES_RIGHT }).regex(/^(?:[A-Za-z0-9_-]{0,24}|\*)$/, SERIES_RIGHT);

/** A numbering of a site: received = stored + known + set aside + withdrawn. Its numbers are whole ones of any size, as digits. */
export const series = z.strictObject({
  series: z.string(),
  received: z.int(),
  stored: z.int(),
  known: z.int(),
  setAside: z.int(),
  withdrawn: z.int(),
  first: z.string().nullable(),
  /** All numbers from the first to this one are held. */
  contiguous: z.string().nullable(),
  firstReceivedAtMs: z.int().nullable(),
  lastReceivedAtMs: z.int().nullable(),
});

/** Numbers of a series that are missing: from the one to the other, both included. */
export const gap = z.strictObject({ from: z.string(), to: z.string(), sinceMs: z.int() });

/** A span in which a site could trigger, both ends included; no end while it goes on. */
export const liveSpan = z.strictObject({ id: z.int(), from: instant(), to: instant().nullable() });

/** How far a site's stream has come. */
export const siteStream = z.strictObject({
  siteId: z.int(),
  site: z.string(),
  /** The instant before which the site says that it has sent all it has; null until it has said one. */
  completeTo: instant().nullable(),
  completeSaidAtMs: z.int().nullable(),
  lastEventAt: instant().nullable(),
  lastReceivedAtMs: z.int().nullable(),
  /** Null while it is not connected. */
  connectedAtMs: z.int().nullable(),
  /** No more than 1,000 are counted. */
  setAsidesLastHour: z.int(),
});

/** What a commit changed. */
export const changeNote = z.strictObject({ number: z.int(), atMs: z.int(), kind: z.string(), body: z.record(z.string(), z.json()) });

/** Most changes that are told at once. */
export const MOST_CHANGES = 200;

/** What came of the sites' streams. An operator sees their own sites. */
export const STREAM_ROUTES = {
  listSeries: route('GET', '/sites/:siteId/series', {
    policy: 'series:list',
    params: siteParams,
    query: record(partQuery),
    answer: partOf(series),
  }),
  /** Upwards by number. */
  listGaps: route('GET', '/sites/:siteId/gaps', {
    policy: 'series:list',
    params: siteParams,
    query: record({ series: seriesText.optional(), cursor: partQuery.cursor, limit: partQuery.limit }),
    answer: z.strictObject({ items: z.array(gap), next: z.string().nullable() }),
  }),
  listLiveSpans: route('GET', '/sites/:siteId/live-spans', {
    policy: 'live-span:list',
    params: siteParams,
    query: record({ ...partQuery, ...spanQuery }).refine(isUsableSpan, SPAN_FAULT),
    answer: partOf(liveSpan),
  }),
  /** Of the open sites; the network is complete up to the least of them, and null while one has said nothing. */
  readCompleteness: route('GET', '/networks/:networkId/completeness', {
    policy: 'completeness:read',
    params: networkParams,
    answer: z.strictObject({ completeTo: instant().nullable(), sites: z.array(siteStream), change: z.int() }),
  }),
  /**
   * Changes behind a number, in their order. Where `isMissing`, those that follow it are no longer all kept: take everything anew.
   */
  listChanges: route('GET', '/networks/:networkId/changes', {
    policy: 'change:list',
    params: networkParams,
    query: record({ after: countText, limit: pageQuery.limit }),
    answer: pageOf(changeNote).extend({ last: z.int(), isMissing: z.boolean() }),
  }),
};

export type SiteStream = z.infer<typeof siteStream>;
export type Series = z.infer<typeof series>;
export type Gap = z.infer<typeof gap>;
export type LiveSpan = z.infer<typeof liveSpan>;
