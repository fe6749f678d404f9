import { type EventBrief } from '#shared/contract/event-routes';
import { type Order } from '#shared/contract/list-query';
import { type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { orderedBy, timeBounds, type Position } from '../search/keyset';
import { joined, part, rowsOf, type Query } from '../search/query';
import { eventName } from '../reconcile/event-columns';

/** A row of the list of events, before what it is called is looked up. */
export interface EventRow {
  readonly id: number;
  readonly siteId: number;
  readonly kind: EventBrief['kind'];
  readonly taiS: number;
  readonly ps: number;
  readonly xM: number;
  readonly yM: number;
  readonly zM: number;
  readonly sigmaNs: number;
  readonly amplitude: number | null;
}

/** What a list of events is kept to. */
export interface EventsAsked {
  readonly networkId: number;
  /** Undefined for all sites of the network; else at least one, each of it. */
  readonly siteIds: readonly number[] | undefined;
  readonly kind?: EventBrief['kind'] | undefined;
  readonly from?: Instant | undefined;
  readonly to?: Instant | undefined;
  readonly after?: Position | undefined;
  readonly order: Order;
  readonly limit: number;
}

const KEY = ['tai_s', 'ps', 'trigger_id'] as const;
/** The columns of an event's row. */
export const EVENT_COLUMNS =
  'trigger_id AS id, site_id AS siteId, kind, tai_s AS taiS, ps, x_m AS xM, y_m AS yM, z_m AS zM, sigma_ns AS sigmaNs, amplitude';

/**
 * The rows of a part of the list, and one more where there are more. Sites are read each in time order and merged, so that a page costs what
 * it holds. Of one kind, it is a search, since no index knows kinds.
 */
export function eventListQuery({ networkId, siteIds, kind, from, to, after, order, limit }: EventsAsked): Query {
  const bounds = timeBounds([...KEY], order, { from, to, after });
  const kinds = kind === undefined ? [] : [part('in_time() = 1 AND kind = ?', kind)];
  const of = (index: string, column: string, id: number): Query => {
    const where = joined([part(`${column} = ?`, id), ...bounds, ...kinds], ' AND ');
    return part(`SELECT ${EVENT_COLUMNS} FROM events INDEXED BY ${index} WHERE ${where.sql}`, ...where.values);
  };
  const selects =
    siteIds === undefined ? [of('events_by_time', 'network_id', networkId)] : siteIds.map((id) => of('events_of_site', 'site_id', id));
  const all = joined(selects, ' UNION ALL ');
  const columns = siteIds === undefined || siteIds.length === 1 ? [...KEY] : ['taiS', 'ps', 'id'];
  return part(`${all.sql} ${orderedBy(columns, order)} LIMIT ?`, ...all.values, limit + 1);
}

/** What events are called. */
export interface EventNames {
  readonly id: number;
  readonly site: string;
  readonly series: string;
  readonly sequence: string;
}

export const eventNamesQuery = (ids: readonly number[]): Query =>
  part(
    `SELECT t.id, s.code AS site, t.series, t.sequence FROM json_each(?) i CROSS JOIN triggers t ON t.id = i.value JOIN sites s ON s.id = t.site_id`,
    JSON.stringify(ids),
  );

/** Events in brief from their rows, in the same order. */
export function eventsInBrief(db: Pick<Db, '$client'>, rows: readonly EventRow[]): EventBrief[] {
  const names = new Map(rowsOf<EventNames>(db, eventNamesQuery(rows.map(({ id }) => id))).map((row) => [row.id, row]));
  return rows.map(({ id, siteId, kind, taiS, ps, xM, yM, zM, sigmaNs, amplitude }) => {
    const { site = '', series = '', sequence = '' } = names.get(id) ?? {};
    const name = eventName(site, { series, sequence });
    return { id, name, siteId, site, kind, at: { taiS, ps }, placeM: [xM, yM, zM], sigmaNs, amplitude };
  });
}
