import { type Db } from '../db';

/** A numbering whose counters are not what its rows come to. */
export interface Unbalanced {
  readonly siteId: number;
  readonly series: string;
  readonly counter: 'stored' | 'set-aside' | 'sum';
  readonly counted: number;
  readonly recomputed: number;
}

interface CountRow {
  siteId: number;
  series: string;
  stored: number;
  setAside: number;
  received: number;
  sum: number;
  events: number;
  asides: number;
}

/**
 * Counts anew what the counters of all series say: the identities that stand, the records that are set aside (those that were dismissed too), and
 * that received is the sum of what became of the records. What stands by a person's mending counts to the numbering that it was set aside in.
 *
 * @param db any connection
 * @returns what does not agree; empty when all is conserved
 */
export function checkConservation(db: Db): readonly Unbalanced[] {
  const query = `
    WITH standing AS (
      SELECT t.site_id, coalesce(m.series, t.series) AS series, count(*) AS n FROM events AS e JOIN triggers AS t ON t.id = e.trigger_id
      LEFT JOIN set_asides AS m ON m.id = t.mended_from_id GROUP BY 1, 2),
    aside AS (SELECT site_id, series, count(*) AS n FROM set_asides WHERE state <> 'accepted' GROUP BY 1, 2),
    every AS (SELECT site_id, series FROM series UNION SELECT site_id, series FROM standing UNION SELECT site_id, series FROM aside)
    SELECT every.site_id AS siteId, every.series, coalesce(s.stored, 0) AS stored, coalesce(s.set_aside, 0) AS setAside,
      coalesce(s.received, 0) AS received, coalesce(s.stored + s.known + s.set_aside + s.withdrawn, 0) AS sum,
      coalesce(standing.n, 0) AS events, coalesce(aside.n, 0) AS asides
    FROM every LEFT JOIN series AS s ON s.site_id = every.site_id AND s.series = every.series
    LEFT JOIN standing ON standing.site_id = every.site_id AND standing.series = every.series
    LEFT JOIN aside ON aside.site_id = every.site_id AND aside.series = every.series
    WHERE every.site_id IS NOT NULL`;
  return db.$client
    .prepare<[], CountRow>(query)
    .all()
    .flatMap(({ siteId, series, stored, setAside, received, sum, events, asides }): Unbalanced[] => [
      ...(stored === events ? [] : [{ siteId, series, counter: 'stored' as const, counted: stored, recomputed: events }]),
      ...(setAside === asides ? [] : [{ siteId, series, counter: 'set-aside' as const, counted: setAside, recomputed: asides }]),
      ...(received === sum ? [] : [{ siteId, series, counter: 'sum' as const, counted: received, recomputed: sum }]),
    ]);
}
