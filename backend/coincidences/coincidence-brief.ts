import { type CoincidenceBrief, MOST_FOLD_WITH_PAIRS } from '#shared/contract/coincidence';
import { toUnbounded } from '#shared/contract/unbounded';
import { nanosecondsOf } from '#shared/time/instant';
import { type Db } from '../db';
import { eventName } from '../reconcile/event-columns';
import { part, rowsOf, type Query } from '../search/query';
import { type CoincidenceRow } from './coincidence-list';

const NAME_DIGITS = 12;

/** What a set is called: the first digits of its hash. */
export const setNameOf = (setHash: string): string => setHash.slice(0, NAME_DIGITS);

interface MemberRow {
  readonly coincidenceId: number;
  readonly eventId: number;
  readonly site: string;
  readonly series: string;
  readonly sequence: string;
  readonly taiS: number;
  readonly ps: number;
}

interface PairRow {
  readonly coincidenceId: number;
  readonly a: number;
  readonly b: number;
  readonly class: 'timelike' | 'spacelike' | 'undecided';
  readonly marginSigma: number;
}

/** The members of coincidences in their order, each event as it was when the coincidence was computed. */
export const membersQuery = (ids: readonly number[]): Query =>
  part(
    `SELECT m.coincidence_id AS coincidenceId, m.trigger_id AS eventId, s.code AS site, t.series, t.sequence,
       coalesce(e.tai_s, v.tai_s) AS taiS, coalesce(e.ps, v.ps) AS ps
     FROM json_each(?) i CROSS JOIN members m ON m.coincidence_id = i.value JOIN triggers t ON t.id = m.trigger_id JOIN sites s ON s.id = m.site_id
     LEFT JOIN events e ON e.trigger_id = m.trigger_id AND e.version = m.event_version
     LEFT JOIN event_versions v ON v.trigger_id = m.trigger_id AND v.version = m.event_version
     ORDER BY i.key, m.place`,
    JSON.stringify(ids),
  );

export const pairsQuery = (ids: readonly number[]): Query =>
  part(
    `SELECT p.coincidence_id AS coincidenceId, p.a, p.b, p.class, p.margin_sigma AS marginSigma
     FROM json_each(?) i CROSS JOIN pairs p ON p.coincidence_id = i.value ORDER BY i.key, p.a, p.b`,
    JSON.stringify(ids),
  );

/** What rules are called, by the ids of their versions. */
export const rulesQuery = (ids: readonly number[]): Query =>
  part(
    'SELECT v.id, r.code FROM json_each(?) i CROSS JOIN rule_versions v ON v.id = i.value JOIN rules r ON r.id = v.rule_id',
    JSON.stringify(ids),
  );

/** The numbers of a coincidence as they cross the wire. */
export const numbersOf = (row: CoincidenceRow, rule: string) => ({
  id: row.id,
  name: setNameOf(row.setHash),
  rule,
  state: row.state,
  first: { taiS: row.taiS, ps: row.ps },
  fold: row.fold,
  spanNs: row.spanNs,
  class: row.class,
  pairsOf: { timelike: row.timelike, spacelike: row.spacelike, undecided: row.undecided },
  nearestMarginSigma: toUnbounded(row.nearestMarginSigma),
  leastTurningSpeedC: row.leastTurningSpeedC,
  amplitude: row.amplitude,
  expectedByChance: row.expectedByChance,
  touchesGap: row.touchesGap === 1,
  sinceChange: row.sinceChange,
});

/** Nanoseconds from a coincidence's first event on. */
export const offsetNsOf = (
  first: { readonly taiS: number; readonly ps: number },
  at: { readonly taiS: number; readonly ps: number },
): number => nanosecondsOf(at.taiS - first.taiS, at.ps - first.ps);

/** Coincidences in brief from their rows, in the same order: their members, and of the small ones their pairs. */
export function coincidencesInBrief(db: Pick<Db, '$client'>, rows: readonly CoincidenceRow[]): CoincidenceBrief[] {
  const members = groupBy(rowsOf<MemberRow>(db, membersQuery(rows.map(({ id }) => id))));
  const small = rows.filter(({ fold }) => fold <= MOST_FOLD_WITH_PAIRS).map(({ id }) => id);
  const pairs = groupBy(rowsOf<PairRow>(db, pairsQuery(small)));
  const versions = [...new Set(rows.map(({ ruleVersionId }) => ruleVersionId))];
  const rules = new Map(rowsOf<{ id: number; code: string }>(db, rulesQuery(versions)).map(({ id, code }) => [id, code]));
  return rows.map((row) => ({
    ...numbersOf(row, rules.get(row.ruleVersionId) ?? ''),
    members: (members.get(row.id) ?? []).map(({ eventId, site, series, sequence, taiS, ps }) => ({
      eventId,
      site,
      name: eventName(site, { series, sequence }),
      offsetNs: offsetNsOf(row, { taiS, ps }),
    })),
    pairs:
      row.fold > MOST_FOLD_WITH_PAIRS
        ? null
        : (pairs.get(row.id) ?? []).map((pair) => ({
            a: pair.a,
            b: pair.b,
            class: pair.class,
            marginSigma: toUnbounded(pair.marginSigma),
          })),
  }));
}

function groupBy<Row extends { readonly coincidenceId: number }>(rows: readonly Row[]): Map<number, Row[]> {
  const groups = new Map<number, Row[]>();
  for (const row of rows) {
    const group = groups.get(row.coincidenceId);
    if (group) group.push(row);
    else groups.set(row.coincidenceId, [row]);
  }
  return groups;
}
