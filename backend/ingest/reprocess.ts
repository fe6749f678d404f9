import { noteChange } from '../live/note-change';
import { type Db } from '../db';
import { type Waiting } from './group-loop';
import { type SetAsideReason } from './group-notes';
import { type InForce } from './in-force';
import { type RecordKeeper } from './record-keeper';

/** Events or set-asides that one transaction looks at. */
const ROWS_AT_ONCE = 500;

/** Why what could be read is set aside until something else is in force. */
const WAIT_FOR_SETUP: readonly SetAsideReason[] = ['before-clock-record', 'outside-run', 'outside-ephemeris'];

/** What a reprocessing did. */
export interface Reprocessed {
  /** Events that came out otherwise, or went. */
  readonly events: number;
  /** Set-asides that were decided, since what is in force holds them now. */
  readonly accepted: number;
}

/** What a reprocessing stands on. */
export interface ReprocessSources {
  readonly db: Db;
  readonly keeper: RecordKeeper;
  readonly inForce: InForce;
  /** Writes something in a transaction, with whatever else waits; false where nobody knows whether it was written. */
  readonly inGroup: (rows: number, work: Waiting['work']) => Promise<boolean>;
}

/**
 * Computes the events of sites anew by what is in force, and looks again at what was set aside for want of it: in transactions of a bounded
 * size, between which records go on coming. What was is kept in `event_versions`.
 */
export async function reprocess(sources: ReprocessSources, networkId: number, siteIds: readonly number[]): Promise<Reprocessed> {
  const events = await recomputeEvents(sources, networkId, siteIds);
  let accepted = 0;
  for (const reason of WAIT_FOR_SETUP) accepted += await retryOpen(sources, networkId, reason);
  await sources.inGroup(1, (nowMs, tx) => {
    noteChange(tx, networkId, 'reprocessed', { sites: siteIds, events, accepted }, nowMs);
  });
  return { events, accepted };
}

async function recomputeEvents(
  { db, keeper, inForce, inGroup }: ReprocessSources,
  networkId: number,
  siteIds: readonly number[],
): Promise<number> {
  // The plus keeps the order of ids, so that what is computed anew is not met again at another time.
  const page = db.$client
    .prepare<[number, string, number, number], number>(
      `SELECT trigger_id FROM events WHERE +network_id = ? AND +site_id IN (SELECT value FROM json_each(?)) AND trigger_id > ?
       ORDER BY trigger_id LIMIT ?`,
    )
    .pluck();
  let changed = 0;
  let afterId = 0;
  for (;;) {
    const ids = page.all(networkId, JSON.stringify(siteIds), afterId, ROWS_AT_ONCE);
    const last = ids.at(-1);
    if (last === undefined) return changed;
    afterId = last;
    const isWritten = await inGroup(ids.length, (nowMs) => {
      for (const id of ids) {
        const trigger = keeper.triggers.find(id);
        if (trigger.stands === 1 && keeper.recompute(inForce.network(networkId), trigger, nowMs)) changed++;
      }
    });
    if (!isWritten) return changed;
  }
}

async function retryOpen({ keeper, inForce, inGroup }: ReprocessSources, networkId: number, reason: SetAsideReason): Promise<number> {
  let accepted = 0;
  let afterId = 0;
  for (;;) {
    const rows = keeper.setAsides.openAfter(networkId, reason, { afterId, most: ROWS_AT_ONCE });
    const last = rows.at(-1);
    if (!last) return accepted;
    afterId = last.id;
    const isWritten = await inGroup(rows.length, (nowMs) => {
      for (const { id } of rows) {
        const row = keeper.setAsides.find(id);
        if (row?.state === 'open' && keeper.retry(inForce.network(networkId), row, nowMs)) accepted++;
      }
    });
    if (!isWritten) return accepted;
  }
}

/** Looks again at set-asides whose time has come. */
export async function retryDue({ keeper, inForce, inGroup }: ReprocessSources, nowMs: number): Promise<number> {
  let accepted = 0;
  for (;;) {
    const rows = keeper.setAsides.dueAt(nowMs, ROWS_AT_ONCE);
    let decided = 0;
    const isWritten =
      rows.length > 0 &&
      (await inGroup(rows.length, (now) => {
        for (const { id, networkId } of rows) {
          const row = keeper.setAsides.find(id);
          if (row?.state === 'open' && keeper.retry(inForce.network(networkId), row, now)) decided++;
        }
      }));
    accepted += decided;
    // What stays open though its time has come is held up by something else, and would be met again.
    if (!isWritten || decided < rows.length) return accepted;
  }
}
