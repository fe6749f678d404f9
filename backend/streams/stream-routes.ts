import { STREAM_ROUTES } from '#shared/contract/stream-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { placeOfSite } from '../accounts/place-of-site';
import { sitesSeen } from '../accounts/sites-seen';
import { absent, unusable } from '../api/refusal';
import { serve, type Served } from '../api/serve';
import { placeOfNetwork } from '../networks/network-rows';
import { atChange } from '../search/at-change';
import { partFrom, positionFrom, positionText } from '../search/keyset';
import { rowsOf } from '../search/query';
import { type ChangeRow, changesQuery, headQuery } from './change-list';
import { leastComplete, streamsOf } from './completeness';
import { liveSpanOf, liveSpansQuery, touchingFrom, type LiveSpanRow } from './live-span-list';
import { gapsOf, seriesQuery } from './series-list';
import { type Series } from '#shared/contract/stream-routes';

const BY_TIME = 'live-span';
const TIME_WIDTH = 3;

/** A name or a number of any size as a position of its list. */
const textPosition = (list: 'series' | 'gap', text: string): string => Buffer.from(`${list}=${text}`).toString('base64url');
function textFrom(list: 'series' | 'gap', cursor: string, form: RegExp): string {
  const text = Buffer.from(cursor, 'base64url').toString('latin1');
  const own = `${list}=`;
  if (!text.startsWith(own) || !form.test(text.slice(own.length)))
    throw unusable({ where: 'cursor', text: 'must be the "next" or "back" of a page of this list' });
  return text.slice(own.length);
}

/** What came of the sites' streams: series, gaps, live spans, completeness, changes. */
export const streamRoutes = (): Served[] => [
  serve(STREAM_ROUTES.listSeries, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: ({ params: { siteId }, query: { cursor, order = 'up', limit = USUAL_ITEMS } }, { db }) => {
      const after = cursor === undefined ? undefined : textFrom('series', cursor, /^(?:[\w-]{0,24}|\*)$/);
      return partFrom(rowsOf<Series>(db, seriesQuery(siteId, after, { order, limit })), limit, ({ series }) =>
        textPosition('series', series),
      );
    },
  }),
  serve(STREAM_ROUTES.listGaps, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: ({ params: { siteId }, query: { series = '', cursor, limit = USUAL_ITEMS } }, { db }) => {
      const behind = cursor === undefined ? undefined : textFrom('gap', cursor, /^(?:0|[1-9]\d{0,149})$/);
      const found = gapsOf(db, { siteId, series }, behind, limit);
      if (!found && series === '') return { items: [], next: null }; // a site that has sent nothing yet
      if (!found) throw absent();
      return { items: found.items, next: found.next === null ? null : textPosition('gap', found.next) };
    },
  }),
  serve(STREAM_ROUTES.listLiveSpans, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: ({ params: { siteId }, query: { cursor, order = 'up', limit = USUAL_ITEMS, from, to } }, { db }) => {
      const after = cursor === undefined ? undefined : positionFrom(cursor, BY_TIME, TIME_WIDTH);
      const bounds = { from: from && touchingFrom(db, siteId, from), to, after };
      const found = rowsOf<LiveSpanRow>(db, liveSpansQuery(siteId, bounds, { order, limit }));
      const { items, next, back } = partFrom(found, limit, ({ taiS, ps, id }) => positionText(BY_TIME, [taiS, ps, id]));
      return { items: items.map(liveSpanOf), next, back };
    },
  }),
  serve(STREAM_ROUTES.readCompleteness, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, caller }, { db, nowMs }) =>
      atChange(db, networkId, () => {
        const streams = streamsOf(db, networkId, nowMs());
        const seen = sitesSeen(caller, networkId);
        return { completeTo: leastComplete(streams), sites: streams.filter(({ siteId }) => seen?.includes(siteId) ?? true) };
      }),
  }),
  serve(STREAM_ROUTES.listChanges, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, query: { after, limit = USUAL_ITEMS } }, { db }) => {
      const [head] = rowsOf<{ last: number; oldest: number }>(db, headQuery(networkId));
      if (!head) throw absent();
      const found = rowsOf<ChangeRow>(db, changesQuery(networkId, after, limit + 1));
      const items = found.slice(0, limit).map((row) => ({ ...row, body: JSON.parse(row.body) as Record<string, never> }));
      const next = found.length > limit ? String(items.at(-1)?.number ?? after) : null;
      return { items, next, last: head.last, isMissing: after + 1 < head.oldest };
    },
  }),
];
