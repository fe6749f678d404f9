import { type SetAsideContent } from '#shared/contract/set-aside-routes';
import { type Db } from '../db';
import { extraOf } from '../events/event-in-full';
import { part, rowsOf, type Query } from '../search/query';

interface ContentRow extends Omit<SetAsideContent, 'extra' | 'stands'> {
  readonly extra: string | null;
  readonly stands: number;
}

export const contentsQuery = (eventId: number): Query =>
  part(
    `SELECT t.id AS eventId, t.variant, t.kind, t.reading, t.reading_form AS readingForm, t.sigma, t.amplitude, t.extra,
       t.received_at_ms AS receivedAtMs, e.trigger_id IS NOT NULL AS stands
     FROM triggers o JOIN triggers t ON t.site_id = o.site_id AND t.series = o.series AND t.sequence = o.sequence
     LEFT JOIN events e ON e.trigger_id = t.id WHERE o.id = ? ORDER BY t.variant`,
    eventId,
  );

/** The record to which a set-aside was mended. */
export const mendedQuery = (setAsideId: number): Query =>
  part('SELECT id FROM triggers WHERE mended_from_id = ? ORDER BY id DESC LIMIT 1', setAsideId);

/** All contents that came under the identity of a record, in the order in which they came. */
export const contentsOf = (db: Pick<Db, '$client'>, eventId: number): SetAsideContent[] =>
  rowsOf<ContentRow>(db, contentsQuery(eventId)).map(({ extra, stands, ...row }) => ({
    ...row,
    extra: extraOf(extra),
    stands: stands === 1,
  }));
