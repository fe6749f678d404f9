import { type CoincidenceInFull } from '#shared/contract/coincidence';
import { type Place } from '#shared/contract/roles';
import { toUnbounded } from '#shared/contract/unbounded';
import { type Db } from '../db';
import { eventName } from '../reconcile/event-columns';
import { part, rowsOf, type Query } from '../search/query';
import { numbersOf, offsetNsOf, setNameOf } from './coincidence-brief';
import { COINCIDENCE_COLUMNS, type CoincidenceRow } from './coincidence-list';

type Member = CoincidenceInFull['members'][number];
type Pair = CoincidenceInFull['pairs'][number];
type Relative = CoincidenceInFull['grewFrom'][number];

interface FullRow extends CoincidenceRow {
  readonly networkId: number;
  readonly endedChange: number | null;
}

interface FullMemberRow extends Omit<Member, 'name' | 'at' | 'placeM' | 'offsetNs' | 'isCurrent'> {
  readonly series: string;
  readonly sequence: string;
  readonly taiS: number;
  readonly ps: number;
  readonly xM: number;
  readonly yM: number;
  readonly zM: number;
  readonly isCurrent: number;
}

interface FullPairRow extends Omit<Pair, 'marginSigma' | 'reverseMarginSigma' | 'turning'> {
  readonly marginSigma: number;
  readonly reverseMarginSigma: number;
  readonly turningSpeedC: number | null;
  readonly turningSigmaC: number | null;
  readonly towardX: number | null;
  readonly towardY: number | null;
  readonly towardZ: number | null;
}

interface RuleRow extends Omit<CoincidenceInFull['ruleVersion'], 'inForce'> {
  readonly inForce: number;
}

/** In which network a coincidence lies; one that a job has staged is not there yet. */
export function placeOfCoincidence(db: Pick<Db, '$client'>, id: number): Place | undefined {
  const [row] = rowsOf<{ networkId: number }>(
    db,
    part(`SELECT network_id AS networkId FROM coincidences WHERE id = ? AND state <> 'staged'`, id),
  );
  return row && { kind: 'network', networkId: row.networkId };
}

const eventColumn = (column: string): string => `coalesce(e.${column}, v.${column})`;

export const fullMembersQuery = (id: number): Query =>
  part(
    `SELECT m.place, m.trigger_id AS eventId, m.site_id AS siteId, s.code AS site, t.series, t.sequence, m.event_version AS eventVersion,
       ${eventColumn('tai_s')} AS taiS, ${eventColumn('ps')} AS ps, ${eventColumn('x_m')} AS xM, ${eventColumn('y_m')} AS yM, ${eventColumn('z_m')} AS zM,
       ${eventColumn('sigma_ns')} AS sigmaNs, ${eventColumn('amplitude')} AS amplitude, e.trigger_id IS NOT NULL AS isCurrent
     FROM members m JOIN triggers t ON t.id = m.trigger_id JOIN sites s ON s.id = m.site_id
     LEFT JOIN events e ON e.trigger_id = m.trigger_id AND e.version = m.event_version
     LEFT JOIN event_versions v ON v.trigger_id = m.trigger_id AND v.version = m.event_version
     WHERE m.coincidence_id = ? ORDER BY m.place`,
    id,
  );

export const fullPairsQuery = (id: number): Query =>
  part(
    `SELECT a, b, class, dt_ns AS dtNs, distance_m AS distanceM, sigma_dt_ns AS sigmaDtNs, sigma_gap_ns AS sigmaGapNs, margin_sigma AS marginSigma,
       reverse_margin_sigma AS reverseMarginSigma, interval_m2 AS intervalM2, proper_time_s AS properTimeS, proper_distance_m AS properDistanceM,
       turning_speed_c AS turningSpeedC, turning_sigma_c AS turningSigmaC, toward_x AS towardX, toward_y AS towardY, toward_z AS towardZ
     FROM pairs WHERE coincidence_id = ? ORDER BY a, b`,
    id,
  );

const RELATIVE = 'c.id, c.set_hash AS name, c.fold, c.state';
export const grewFromQuery = (id: number): Query =>
  part(`SELECT ${RELATIVE} FROM growths g JOIN coincidences c ON c.id = g.grew_from_id WHERE g.coincidence_id = ? ORDER BY c.id`, id);
export const grewIntoQuery = (id: number): Query =>
  part(`SELECT ${RELATIVE} FROM growths g JOIN coincidences c ON c.id = g.coincidence_id WHERE g.grew_from_id = ? ORDER BY c.id`, id);

/** Most former ones of a set that are told. */
const MOST_FORMER = 50;
export const formerQuery = (networkId: number, setHash: string): Query =>
  part(
    `SELECT ${RELATIVE} FROM coincidences c WHERE c.network_id = ? AND c.set_hash = ? AND c.state = 'former' ORDER BY c.id DESC LIMIT ${MOST_FORMER}`,
    networkId,
    setHash,
  );

const ruleQuery = (id: number): Query =>
  part(
    `SELECT v.id, v.rule_id AS ruleId, r.code, r.name, v.number, v.minimum_fold AS minimumFold, v.sigmas, v.window_kind AS windowKind, v.speed_c AS speedC,
       v.margin_ns AS marginNs, v.width_ns AS widthNs, f.code AS frame, v.superseded_at IS NULL AS inForce
     FROM rule_versions v JOIN rules r ON r.id = v.rule_id LEFT JOIN frames f ON f.id = v.frame_id WHERE v.id = ?`,
    id,
  );

const relatives = (db: Pick<Db, '$client'>, query: Query): Relative[] =>
  rowsOf<Relative>(db, query).map((row) => ({ ...row, name: setNameOf(row.name) }));

function pairOfRow({ turningSpeedC, turningSigmaC, towardX, towardY, towardZ, ...row }: FullPairRow): Pair {
  const turns = turningSpeedC !== null && turningSigmaC !== null && towardX !== null && towardY !== null && towardZ !== null;
  return {
    ...row,
    marginSigma: toUnbounded(row.marginSigma),
    reverseMarginSigma: toUnbounded(row.reverseMarginSigma),
    turning: turns ? { speedC: turningSpeedC, sigmaC: turningSigmaC, toward: [towardX, towardY, towardZ] } : null,
  };
}

/** One coincidence with everything; undefined when there is none. */
export function coincidenceInFull(db: Pick<Db, '$client'>, id: number): CoincidenceInFull | undefined {
  const [row] = rowsOf<FullRow>(
    db,
    part(`SELECT ${COINCIDENCE_COLUMNS}, c.network_id AS networkId, c.ended_change AS endedChange FROM coincidences c WHERE c.id = ?`, id),
  );
  const [rule] = row ? rowsOf<RuleRow>(db, ruleQuery(row.ruleVersionId)) : [];
  if (!row || !rule) return undefined;
  return {
    ...numbersOf(row, rule.code),
    networkId: row.networkId,
    setHash: row.setHash,
    endedChange: row.endedChange,
    ruleVersion: { ...rule, inForce: rule.inForce === 1 },
    members: rowsOf<FullMemberRow>(db, fullMembersQuery(id)).map(({ series, sequence, taiS, ps, xM, yM, zM, isCurrent, ...member }) => ({
      ...member,
      name: eventName(member.site, { series, sequence }),
      at: { taiS, ps },
      placeM: [xM, yM, zM],
      offsetNs: offsetNsOf(row, { taiS, ps }),
      isCurrent: isCurrent === 1,
    })),
    pairs: rowsOf<FullPairRow>(db, fullPairsQuery(id)).map(pairOfRow),
    grewFrom: relatives(db, grewFromQuery(id)),
    grewInto: relatives(db, grewIntoQuery(id)),
    former: relatives(db, formerQuery(row.networkId, row.setHash)).filter((one) => one.id !== id),
  };
}
