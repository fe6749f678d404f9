import { type NetworkChanges } from '#shared/contract/live-changes';
import { type Db } from '../db';
import { lastChange } from '../search/at-change';
import { readChanges, type ChangesRead } from './changes-read';

/** What reads the changes of one network once for all who follow it. */
export interface NetworkChannel {
  readonly networkId: number;
  /** The last change that was told. */
  readonly last: () => number;
  /** Reads what has come since, as much as a message holds, and tells it; false when there is nothing. */
  readonly step: () => boolean;
}

/** Opens a channel at the network's present number. */
export function openChannel(db: Db, networkId: number, tell: (read: ChangesRead) => void): NetworkChannel {
  let last = lastChange(db, networkId);
  return {
    networkId,
    last: () => last,
    step: () => {
      const read = db.$client.transaction(() => (lastChange(db, networkId) > last ? readChanges(db, networkId, last) : undefined))();
      if (!read) return false;
      last = read.changes.to;
      tell(read);
      return true;
    },
  };
}

/** The numbers of changes that a network keeps. */
export interface KeptChanges {
  readonly last: number;
  readonly oldest: number;
}

/** So many changes behind, whoever comes back takes everything anew, which is less work for both sides. */
const MOST_BEHIND = 5_000;

/** The numbers that are kept; undefined where there is no such network. */
export function keptChanges(db: Db, networkId: number): KeptChanges | undefined {
  return db.$client.prepare<[number], KeptChanges>('SELECT last, oldest FROM change_heads WHERE network_id = ?').get(networkId);
}

/** Whether all changes behind a number can be told. */
export const areKept = ({ last, oldest }: KeptChanges, after: number): boolean =>
  after <= last && after + 1 >= oldest && last - after <= MOST_BEHIND;

/** What is answered to who missed changes: a part of them with the last number, or that they are not kept. */
export function missedChanges(
  db: Db,
  networkId: number,
  after: number,
  form: (read: ChangesRead) => NetworkChanges,
): { readonly changes: NetworkChanges | null; readonly last: number } | 'too-old' {
  return db.$client.transaction(() => {
    const kept = keptChanges(db, networkId);
    if (!kept || !areKept(kept, after)) return 'too-old' as const;
    const read = readChanges(db, networkId, after);
    return { changes: read ? form(read) : null, last: kept.last };
  })();
}
