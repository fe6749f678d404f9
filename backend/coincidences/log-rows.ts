import { NS_PER_LIGHT_M } from '#shared/constants';
import { type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { type Place } from './stored-log';

interface EventPlaceRow {
  readonly taiS: number;
  readonly ps: number;
  readonly sigmaNs: number;
  readonly change: number;
}

const PLACE = 'tai_s AS taiS, ps, sigma_ns AS sigmaNs';

/** Looks up where events of a network stand and stood, without reading them. */
export class LogRows {
  private readonly former;
  private readonly fromLast;
  private readonly before;
  private readonly all;
  private readonly ended;
  private readonly marks;
  private readonly count;

  constructor(
    private readonly db: Db,
    private readonly networkId: number,
  ) {
    const { $client: client } = db;
    this.former = client.prepare<[number], Place>(`SELECT ${PLACE} FROM event_versions WHERE trigger_id = ? ORDER BY version DESC LIMIT 1`);
    this.fromLast = client.prepare<[number, number], Instant>(
      'SELECT tai_s AS taiS, ps FROM events WHERE network_id = ? ORDER BY tai_s DESC, ps DESC LIMIT 1 OFFSET ?',
    );
    this.before = client.prepare<[number, number, number, number], Instant>(
      'SELECT tai_s AS taiS, ps FROM events WHERE network_id = ? AND (tai_s, ps) <= (?, ?) ORDER BY tai_s DESC, ps DESC LIMIT 1 OFFSET ?',
    );
    this.all = client.prepare<[number], EventPlaceRow>(`SELECT ${PLACE}, change_number AS change FROM events WHERE network_id = ?`);
    this.ended = client.prepare<[number, number], Place>(
      `SELECT ${PLACE} FROM event_versions WHERE ended_change > ? AND trigger_id IN
       (SELECT id FROM triggers WHERE site_id IN (SELECT id FROM sites WHERE network_id = ?))`,
    );
    this.marks = client
      .prepare<[number], number | null>(
        `SELECT json_extract(body, '$.searchedTo') AS mark FROM changes WHERE network_id = ? AND kind = 'records' AND mark IS NOT NULL
         ORDER BY number DESC LIMIT 1`,
      )
      .pluck();
    this.count = client.prepare<[number], number>('SELECT count(*) FROM events WHERE network_id = ?').pluck();
  }

  /** Where an event stood before its last change. */
  formerPlace(triggerId: number): Place | undefined {
    return this.former.get(triggerId);
  }

  /** The instant of the event so many before the last one. */
  instantFromLast(back: number): Instant | undefined {
    return this.fromLast.get(this.networkId, back);
  }

  /** The instant of the event so many before the last one that is not after an instant. */
  instantBefore({ taiS, ps }: Instant, back: number): Instant | undefined {
    return this.before.get(this.networkId, taiS, ps, back);
  }

  /** Every event's place and the change that brought it, in any order, one after the other: nothing else may ask the connection meanwhile. */
  places(): IterableIterator<EventPlaceRow> {
    return this.all.iterate(this.networkId);
  }

  /** Where events stood that ended after a change. */
  endedSince(change: number): readonly Place[] {
    return this.ended.all(change, this.networkId);
  }

  /** The change up to which all events have been searched, as the last note of it says; 0 where there is none. */
  searchedTo(): number {
    return this.marks.get(this.networkId) ?? 0;
  }

  events(): number {
    return this.count.get(this.networkId) ?? 0;
  }

  /** The farthest that one standard error of any place of the network carries, ns. */
  mostPlaceNs(): number {
    const query =
      'SELECT coalesce(max(position_sigma_m), 0) FROM site_versions WHERE site_id IN (SELECT id FROM sites WHERE network_id = ?)';
    return (this.db.$client.prepare<[number], number>(query).pluck().get(this.networkId) ?? 0) * NS_PER_LIGHT_M;
  }
}
