import { part, rowsOf } from './query';
import { type Db } from '../db';

/**
 * Those of some sites that are a network's own: what is asked for by id must not lead into another network.
 *
 * @returns undefined where all were asked for
 */
export function sitesWithin(db: Pick<Db, '$client'>, networkId: number, ids: readonly number[] | undefined): readonly number[] | undefined {
  if (ids === undefined) return undefined;
  const own = rowsOf<{ id: number }>(
    db,
    part(
      'SELECT s.id FROM json_each(?) i JOIN sites s ON s.id = i.value WHERE s.network_id = ? ORDER BY s.id',
      JSON.stringify(ids),
      networkId,
    ),
  );
  return own.map(({ id }) => id);
}
