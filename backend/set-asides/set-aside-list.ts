import { type SetAside } from '#shared/contract/set-aside-routes';
import { type Order } from '#shared/contract/list-query';
import { type Db } from '../db';
import { behind, orderedBy, type Position } from '../search/keyset';
import { joined, part, rowsOf, type Query } from '../search/query';

/** What a list of set-asides is kept to. */
export interface SetAsidesAsked {
  readonly networkId: number;
  /** Undefined for all of the network, also those whose site is not known; else at least one. */
  readonly siteIds: readonly number[] | undefined;
  readonly state: SetAside['state'] | 'all';
  readonly reason: SetAside['reason'] | undefined;
  readonly order: Order;
  readonly after?: Position | undefined;
  readonly limit: number;
}

/** Where a row of the list stands: by sites in the order in which they came, else by number. */
export interface SetAsidePlace {
  readonly id: number;
  readonly receivedAtMs: number;
}

/** How many values a position has. */
export const widthOf = ({ siteIds }: Pick<SetAsidesAsked, 'siteIds'>): number => (siteIds === undefined ? 1 : 2);
export const sortOf = ({ siteIds }: Pick<SetAsidesAsked, 'siteIds'>): string => (siteIds === undefined ? 'number' : 'received');
export const positionOf = ({ siteIds }: Pick<SetAsidesAsked, 'siteIds'>, { id, receivedAtMs }: SetAsidePlace): Position =>
  siteIds === undefined ? [id] : [receivedAtMs, id];

/** So many of a site's are looked through at once; beyond, it is a search. */
const FEW = 5_000;

/** How many a list would look through whose filter no index answers, to one more than `FEW`. */
export const siteCountQuery = (siteIds: readonly number[]): Query =>
  part(
    `SELECT count(*) AS count FROM (SELECT 1 FROM json_each(?) i CROSS JOIN set_asides a INDEXED BY set_asides_of_site ON a.site_id = i.value LIMIT ${FEW + 1})`,
    JSON.stringify(siteIds),
  );

/** Where the rows of a part of the list stand, and whether an index answers all that is asked. */
export function setAsideListQuery(asked: SetAsidesAsked): { readonly query: Query; readonly isAnswered: boolean } {
  const { networkId, siteIds, state, reason, order, after, limit } = asked;
  const columns = siteIds === undefined ? ['id'] : ['received_at_ms', 'id'];
  const bound = after ? [behind(columns, order, after)] : [];
  const states = state === 'all' ? [] : [part('state = ?', state)];
  const reasons = reason === undefined ? [] : [part('reason = ?', reason)];
  const select = (index: string, conditions: readonly Query[]): Query => {
    const where = joined([...conditions, ...bound], ' AND ');
    return part(`SELECT id, received_at_ms AS receivedAtMs FROM set_asides ${index} WHERE ${where.sql}`, ...where.values);
  };
  const end = (selects: readonly Query[], by: readonly string[]): Query => {
    const all = joined(selects, ' UNION ALL ');
    return part(`${all.sql} ${orderedBy(by, order)} LIMIT ?`, ...all.values, limit + 1);
  };
  if (siteIds !== undefined) {
    const left = [...states, ...reasons];
    const inTime = left.length > 0 ? [part('in_time() = 1')] : [];
    const selects = siteIds.map((id) => select('INDEXED BY set_asides_of_site', [part('site_id = ?', id), ...inTime, ...left]));
    return { query: end(selects, siteIds.length === 1 ? columns : ['receivedAtMs', 'id']), isAnswered: left.length === 0 };
  }
  const ofNetwork = part('network_id = ?', networkId);
  if (state === 'open') {
    const index = `INDEXED BY ${reason === undefined ? 'set_asides_open' : 'set_asides_open_by_reason'}`;
    return { query: end([select(index, [ofNetwork, part(`state = 'open'`), ...reasons])], columns), isAnswered: true };
  }
  const walk = select('NOT INDEXED', [part('in_time() = 1'), ofNetwork, ...states, ...reasons]);
  return { query: end([walk], columns), isAnswered: false };
}

/** The same query where it may look through its rows without a limit of time. */
export const withoutClock = ({ sql, values }: Query): Query => ({ sql: sql.replaceAll('in_time() = 1 AND ', ''), values });

/** Whether a list of sites is short enough to be looked through at once. */
export const areFew = (db: Pick<Db, '$client'>, siteIds: readonly number[] | undefined): boolean =>
  siteIds !== undefined && (rowsOf<{ count: number }>(db, siteCountQuery(siteIds))[0]?.count ?? 0) <= FEW;

interface SetAsideRow extends Omit<SetAside, 'decidedBy'> {
  readonly networkId: number;
  readonly decidedById: number | null;
  readonly decidedByName: string | null;
}

export const setAsidesQuery = (ids: readonly number[]): Query =>
  part(
    `SELECT a.id, a.network_id AS networkId, a.site_id AS siteId, s.code AS site, a.series, a.sequence, a.reason, a.detail, a.verbatim,
       a.received_at_ms AS receivedAtMs, a.intake_id AS intakeId, a.line, a.trigger_id AS eventId, a.state, a.retry_at_ms AS retryAtMs,
       a.decided_at AS decidedAt, a.decided_by AS decidedById, p.name AS decidedByName, a.decision, a.version
     FROM json_each(?) i CROSS JOIN set_asides a ON a.id = i.value LEFT JOIN sites s ON s.id = a.site_id LEFT JOIN people p ON p.id = a.decided_by
     ORDER BY i.key`,
    JSON.stringify(ids),
  );

/** Set-asides by their ids, in that order, each with its network. */
export const setAsidesOf = (db: Pick<Db, '$client'>, ids: readonly number[]): (SetAside & { readonly networkId: number })[] =>
  rowsOf<SetAsideRow>(db, setAsidesQuery(ids)).map(({ decidedById, decidedByName, ...row }) => ({
    ...row,
    decidedBy: decidedById === null ? null : { id: decidedById, name: decidedByName ?? '' },
  }));
