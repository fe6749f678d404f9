import { type Gap, type Series } from '#shared/contract/stream-routes';
import { type Db } from '../db';
import { part, rowsOf, type Query } from '../search/query';

/** The series of a site by name, behind a name in either order. */
export const seriesQuery = (siteId: number, after: string | undefined, { order, limit }: { order: 'up' | 'down'; limit: number }): Query =>
  part(
    `SELECT series, received, stored, known, set_aside AS setAside, withdrawn, first, contiguous, first_received_at_ms AS firstReceivedAtMs,
       last_received_at_ms AS lastReceivedAtMs
     FROM series WHERE site_id = ?${after === undefined ? '' : ` AND series ${order === 'up' ? '>' : '<'} ?`} ORDER BY series ${order === 'up' ? '' : 'DESC'} LIMIT ?`,
    siteId,
    ...(after === undefined ? [] : [after]),
    limit + 1,
  );

/** The ranges of numbers that are held behind a number: whole numbers of any size sort by how many digits they have, then as text. */
export const heldRangesQuery = (siteId: number, series: string, behind: string, most: number): Query =>
  part(
    `SELECT first, last, since_ms AS sinceMs FROM held_ranges WHERE site_id = ? AND series = ? AND (first_digits, first) > (?, ?)
     ORDER BY first_digits, first LIMIT ?`,
    siteId,
    series,
    behind.length,
    behind,
    most,
  );

interface RangeRow {
  readonly first: string;
  readonly last: string;
  readonly sinceMs: number;
}

/**
 * The gaps of a series: what lies between the ranges of numbers that are held.
 *
 * @param behind a number that is held, from which on gaps are looked for; undefined for the last of those without a gap
 * @param limit most gaps
 * @returns the gaps upwards, and the number behind which there are more; undefined when there is no such series
 */
export function gapsOf(
  db: Pick<Db, '$client'>,
  { siteId, series }: { readonly siteId: number; readonly series: string },
  behind: string | undefined,
  limit: number,
): { readonly items: Gap[]; readonly next: string | null } | undefined {
  const [row] = rowsOf<Pick<Series, 'contiguous'>>(
    db,
    part('SELECT contiguous FROM series WHERE site_id = ? AND series = ?', siteId, series),
  );
  if (!row) return undefined;
  let held = behind ?? row.contiguous;
  if (held === null) return { items: [], next: null };
  const ranges = rowsOf<RangeRow>(db, heldRangesQuery(siteId, series, held, limit + 1));
  const items: Gap[] = [];
  for (const { first, last, sinceMs } of ranges.slice(0, limit)) {
    items.push({ from: String(BigInt(held) + 1n), to: String(BigInt(first) - 1n), sinceMs });
    held = last;
  }
  return { items, next: ranges.length > limit ? held : null };
}
