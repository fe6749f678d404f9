import { MOST_RECORD_BYTES } from '#schema/words';
import { type SiteRecord } from '#shared/contract/site-record';
import { type Db } from '../db';
import { utcText } from '../ground';
import { type GroupNotes, type SetAsideReason } from './group-notes';

/** Bytes that a set-aside's words may take. */
const MOST_DETAIL_BYTES = 1_000;

/** What is set aside, and why. */
export interface SettingAside {
  readonly networkId: number;
  readonly siteId: number;
  /** The numbering that it counts to. */
  readonly series: string;
  /** null where that could not be read. */
  readonly sequence: string | null;
  readonly triggerId: number | null;
  readonly reason: SetAsideReason;
  readonly detail: string;
  readonly record: SiteRecord;
  readonly contentHash: Buffer;
  readonly retryAtMs: number | null;
}

/** A set-aside as it is looked at again. */
export interface SetAsideRow {
  readonly id: number;
  readonly networkId: number;
  readonly siteId: number;
  readonly series: string;
  readonly triggerId: number | null;
  readonly reason: SetAsideReason;
  readonly state: 'open' | 'accepted' | 'dismissed';
  readonly verbatim: string;
  readonly version: number;
}

const ROW = 'id, network_id AS networkId, site_id AS siteId, series, trigger_id AS triggerId, reason, state, verbatim, version';

/** Text cut at a number of bytes, whole characters alone. */
function cut(text: string, mostBytes: number): string {
  if (Buffer.byteLength(text) <= mostBytes) return text;
  return Buffer.from(text)
    .subarray(0, mostBytes - 3)
    .toString('utf8')
    .replace(/\ufffd+$/, '')
    .concat('\u2026');
}

/** A record as one text, such that reading it back gives the same record; one that is longer than records may be is cut. */
export const verbatimOf = (record: SiteRecord): string => cut(JSON.stringify(record), MOST_RECORD_BYTES);

/** Writes what is set aside and what became of it. */
export class SetAsideStore {
  private readonly insert;
  private readonly settle;
  private readonly byContent;
  private readonly byTrigger;
  private readonly byId;
  private readonly due;
  private readonly open;

  constructor(
    { $client: client }: Db,
    private readonly notes: GroupNotes,
  ) {
    // What was set aside for the same reason before is open again: an event that stood meanwhile has gone.
    this.insert = client
      .prepare<unknown[], number>(
        `INSERT INTO set_asides (network_id, site_id, series, sequence, trigger_id, reason, detail, verbatim, content_hash, received_at_ms, state,
           retry_at_ms) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, 'open', ?)
         ON CONFLICT (site_id, content_hash, reason) WHERE intake_id IS NULL
         DO UPDATE SET state = 'open', decided_at = NULL, decided_by = NULL, decision = '', version = version + 1 RETURNING id`,
      )
      .pluck();
    this.settle = client.prepare(
      'UPDATE set_asides SET state = ?, decided_at = ?, decided_by = ?, decision = ?, version = version + 1 WHERE id = ?',
    );
    this.byContent = client
      .prepare<[number, Buffer], number>('SELECT 1 FROM set_asides WHERE site_id = ? AND content_hash = ? AND intake_id IS NULL LIMIT 1')
      .pluck();
    this.byTrigger = client.prepare<[number], SetAsideRow>(`SELECT ${ROW} FROM set_asides WHERE trigger_id = ? ORDER BY id`);
    this.byId = client.prepare<[number], SetAsideRow>(`SELECT ${ROW} FROM set_asides WHERE id = ?`);
    this.due = client.prepare<[number, number], SetAsideRow>(
      `SELECT ${ROW} FROM set_asides WHERE state = 'open' AND retry_at_ms IS NOT NULL AND retry_at_ms <= ? ORDER BY retry_at_ms LIMIT ?`,
    );
    this.open = client.prepare<[number, string, number, number], SetAsideRow>(
      `SELECT ${ROW} FROM set_asides WHERE network_id = ? AND reason = ? AND state = 'open' AND id > ? AND trigger_id IS NOT NULL ORDER BY id LIMIT ?`,
    );
  }

  put(aside: SettingAside, nowMs: number): void {
    this.insert.get(
      aside.networkId,
      aside.siteId,
      aside.series,
      aside.sequence,
      aside.triggerId,
      aside.reason,
      cut(aside.detail, MOST_DETAIL_BYTES),
      verbatimOf(aside.record),
      aside.contentHash,
      nowMs,
      aside.retryAtMs,
    );
    this.notes.wasSetAside(aside.networkId, aside.siteId, aside.reason);
  }

  /** Decides a set-aside; `personId` null where the program does. */
  decide(row: SetAsideRow, state: 'accepted' | 'dismissed', by: { personId: number | null; why: string; nowMs: number }): void {
    this.settle.run(state, utcText(by.nowMs), by.personId, by.why, row.id);
    this.notes.wasDecided(row.networkId, row.id);
  }

  isKnown(siteId: number, contentHash: Buffer): boolean {
    return this.byContent.get(siteId, contentHash) !== undefined;
  }

  ofTrigger(triggerId: number): readonly SetAsideRow[] {
    return this.byTrigger.all(triggerId);
  }

  find(id: number): SetAsideRow | undefined {
    return this.byId.get(id);
  }

  /** Those whose time has come, the longest due first. */
  dueAt(nowMs: number, most: number): readonly SetAsideRow[] {
    return this.due.all(nowMs, most);
  }

  /** The open ones of a network and reason that could be read as triggers, from an id on. */
  openAfter(networkId: number, reason: SetAsideReason, { afterId, most }: { afterId: number; most: number }): readonly SetAsideRow[] {
    return this.open.all(networkId, reason, afterId, most);
  }
}
