import { compareIdentities } from '#shared/coincidence/event-identity';
import { type VersionedColumns, emptyVersionedEvents } from '#shared/coincidence/held-events';
import { compareText } from '#shared/compare-text';
import { type ErrorTables } from '#shared/relativity/events';
import { compareInstants } from '#shared/time/instant';
import { type Db } from '../db';
import { ErrorRows } from './error-rows';
import { createEventReader, EVENT_QUERY, type EventRow, type StoredEvent } from './stored-event';

/** Events of the database as columns, with the tables that their errors refer to. */
export interface EventSet {
  /** In the order of events: time, then site, series, sequence. */
  readonly stored: readonly StoredEvent[];
  readonly events: VersionedColumns;
  readonly errors: ErrorTables;
  /** Codes of the network's sites, by row. */
  readonly siteCodes: readonly string[];
  /** `ORL:17`, or with a series `ORL:b:17`, by row of the events. */
  readonly names: readonly string[];
  /** Rows by the id of the trigger. */
  readonly rowOf: ReadonlyMap<number, number>;
}

/** SQLite takes so many ids in one list of JSON at ease. */
const IDS_AT_ONCE = 5_000;

interface SiteRow {
  id: number;
  code: string;
}

/** The sites of a network with their rows, which are in the order of the codes. */
export function siteRows(db: Db, networkId: number): { readonly codes: readonly string[]; readonly rowOf: (siteId: number) => number } {
  const sites = db.$client
    .prepare<[number], SiteRow>('SELECT id, code FROM sites WHERE network_id = ?')
    .all(networkId)
    .sort((a, b) => compareText(a.code, b.code));
  const rows = new Map(sites.map(({ id }, row) => [id, row]));
  return { codes: sites.map(({ code }) => code), rowOf: (siteId) => rows.get(siteId) ?? -1 };
}

/** An event's name: its site's code, its series where it has one, its sequence. */
export const eventName = (siteCode: string, { series, sequence }: { readonly series: string; readonly sequence: string }): string =>
  series === '' ? `${siteCode}:${sequence}` : `${siteCode}:${series}:${sequence}`;

/** Events as columns, in the order given. */
export function columnsOf(stored: readonly StoredEvent[]): VersionedColumns {
  const columns = { ...emptyVersionedEvents(stored.length), count: stored.length };
  for (const [row, event] of stored.entries()) {
    columns.taiS[row] = event.taiS;
    columns.ps[row] = event.ps;
    columns.xM[row] = event.xM;
    columns.yM[row] = event.yM;
    columns.zM[row] = event.zM;
    columns.site[row] = event.site;
    columns.version[row] = event.version;
    columns.readingSigmaNs[row] = event.readingSigmaNs;
    columns.sigmaNs[row] = event.sigmaNs;
    columns.segment[row] = event.segment;
    columns.sinceEpochDays[row] = event.sinceEpochDays;
    columns.sinceEpochRestDays[row] = event.sinceEpochRestDays;
  }
  return columns;
}

/** The order of events: time, then site, series, sequence. */
export const compareEvents = (a: StoredEvent, b: StoredEvent): number => compareInstants(a, b) || compareIdentities(a, b);

/**
 * Reads any events that stand, for pairs and orders.
 *
 * @param db any connection
 * @param networkId whose events they are; others are left out
 * @param triggerIds of the events, in any order; what does not stand is left out
 * @returns columns and error tables whose pairs are those of the batch command, bit for bit
 */
export function eventColumnsOf(db: Db, networkId: number, triggerIds: readonly number[]): EventSet {
  const { codes, rowOf } = siteRows(db, networkId);
  const errors = new ErrorRows(db);
  const toEvent = createEventReader(db, rowOf, errors);
  const read = db.$client.prepare<[number, string], EventRow>(
    `${EVENT_QUERY} WHERE e.network_id = ? AND e.trigger_id IN (SELECT value FROM json_each(?))`,
  );
  const stored: StoredEvent[] = [];
  for (let at = 0; at < triggerIds.length; at += IDS_AT_ONCE)
    for (const row of read.all(networkId, JSON.stringify(triggerIds.slice(at, at + IDS_AT_ONCE)))) stored.push(toEvent(row));
  stored.sort(compareEvents);
  return {
    stored,
    events: columnsOf(stored),
    errors: errors.tables(),
    siteCodes: codes,
    names: stored.map((event) => eventName(codes[event.site] ?? '', event)),
    rowOf: new Map(stored.map(({ triggerId }, row) => [triggerId, row])),
  };
}
