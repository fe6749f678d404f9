import { networks } from '#schema/schema';
import { type Ground } from '../ground';
import { rowsOf } from '../search/query';
import { lookAtSnapshot, standingSnapshotsQuery } from './out-of-date';

/** A network is looked at again after so long: what comes meanwhile is seen then. */
const PAUSE_MS = 1_000;

/**
 * Looks at the snapshots of candidates whenever something was computed anew or set aside in their network, and once at the start: one snapshot at
 * a time, so that nobody waits long for the writer.
 *
 * @param ground of the writer thread
 * @returns ends it
 */
export function watchSnapshots(ground: Ground): () => void {
  const { db, log, onCommitted } = ground;
  /** Networks to look at: all of their snapshots, or those of which an event is another now. */
  const waiting = new Map<number, 'all' | 'changed'>();
  let left: number[] = [];
  let timer: NodeJS.Timeout | undefined;

  const lookSoon = (ms: number): void => {
    timer ??= setTimeout(() => {
      timer = undefined;
      step();
    }, ms);
  };
  const lookAt = (candidateId: number): void => {
    try {
      lookAtSnapshot(ground, candidateId);
    } catch (fault) {
      log.error({ event: 'snapshot:look', err: fault, candidateId }, 'whether a candidate is out of date could not be seen');
    }
  };
  function step(): void {
    const next = left.shift();
    if (next === undefined) {
      left = [...waiting].flatMap(([networkId, which]) =>
        rowsOf<{ id: number }>(db, standingSnapshotsQuery(networkId, which)).map(({ id }) => id),
      );
      waiting.clear();
    } else lookAt(next);
    if (left.length > 0) lookSoon(0);
    else if (waiting.size > 0) lookSoon(PAUSE_MS);
  }

  const stop = onCommitted(({ changes }) => {
    for (const { kind, networkId } of changes)
      if (kind === 'reprocessed') waiting.set(networkId, 'all');
      else if (kind === 'set-aside' && !waiting.has(networkId)) waiting.set(networkId, 'changed');
    if (waiting.size > 0) lookSoon(PAUSE_MS);
  });
  for (const { id } of db.select({ id: networks.id }).from(networks).all()) waiting.set(id, 'all');
  lookSoon(PAUSE_MS);
  return () => {
    stop();
    clearTimeout(timer);
  };
}
