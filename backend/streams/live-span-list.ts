import { type LiveSpan } from '#shared/contract/stream-routes';
import { type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { orderedBy, timeBounds, type TimeBounds } from '../search/keyset';
import { joined, part, rowsOf, type Query } from '../search/query';

/** A row of the list of live spans. */
export interface LiveSpanRow {
  readonly id: number;
  readonly taiS: number;
  readonly ps: number;
  readonly toTaiS: number | null;
  readonly toPs: number | null;
}

const KEY = ['from_tai_s', 'from_ps', 'id'] as const;
const SELECT =
  'SELECT id, from_tai_s AS taiS, from_ps AS ps, to_tai_s AS toTaiS, to_ps AS toPs FROM live_spans INDEXED BY live_spans_of_site WHERE withdrawn_at IS NULL';

/** The spans of a site that begin within bounds, in time order. */
export function liveSpansQuery(siteId: number, bounds: TimeBounds, { order, limit }: { order: 'up' | 'down'; limit: number }): Query {
  const where = joined([part('site_id = ?', siteId), ...timeBounds([...KEY], order, bounds)], ' AND ');
  return part(`${SELECT} AND ${where.sql} ${orderedBy(KEY, order)} LIMIT ?`, ...where.values, limit + 1);
}

/** The last span that began before an instant: spans of a site do not overlap, so no earlier one reaches it. */
export const spanBeforeQuery = (siteId: number, { taiS, ps }: Instant): Query =>
  part(`${SELECT} AND site_id = ? AND (from_tai_s, from_ps) < (?, ?) ${orderedBy(KEY, 'down')} LIMIT 1`, siteId, taiS, ps);

/** From when on spans must begin to touch what comes from an instant on: a span that goes on there counts. */
export function touchingFrom(db: Pick<Db, '$client'>, siteId: number, from: Instant): Instant {
  const [before] = rowsOf<LiveSpanRow>(db, spanBeforeQuery(siteId, from));
  if (!before) return from;
  const { toTaiS, toPs } = before;
  const reaches = toTaiS === null || toPs === null || toTaiS > from.taiS || (toTaiS === from.taiS && toPs >= from.ps);
  return reaches ? { taiS: before.taiS, ps: before.ps } : from;
}

export const liveSpanOf = ({ id, taiS, ps, toTaiS, toPs }: LiveSpanRow): LiveSpan => ({
  id,
  from: { taiS, ps },
  to: toTaiS === null || toPs === null ? null : { taiS: toTaiS, ps: toPs },
});
