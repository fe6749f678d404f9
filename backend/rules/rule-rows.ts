import { and, asc, desc, eq, gt, isNull, lt } from 'drizzle-orm';
import { type Rule, type RuleState } from '#shared/contract/rule-routes';
import { type Place } from '#shared/contract/roles';
import { ruleExclusions, rules, ruleSites, ruleVersions } from '#schema/schema';
import { absent } from '../api/refusal';
import { type Db } from '../db';

type Rows = Pick<Db, 'select'>;
type RuleRow = typeof rules.$inferSelect;
type VersionRow = typeof ruleVersions.$inferSelect;

/** The row of a rule; refused as absent when there is none. */
export function ruleRow(db: Rows, ruleId: number): RuleRow {
  const row = db.select().from(rules).where(eq(rules.id, ruleId)).get();
  if (!row) throw absent();
  return row;
}

/** Where a rule lies; undefined when there is none of this id. */
export function placeOfRule(db: Rows, ruleId: number): Place | undefined {
  const row = db.select({ networkId: rules.networkId }).from(rules).where(eq(rules.id, ruleId)).get();
  return row && { kind: 'network', networkId: row.networkId };
}

/** A rule as it is in force. */
export const ruleOfId = (db: Rows, ruleId: number): Rule => shown(db, ruleRow(db, ruleId));

/** The rules of a network, from behind an id on. */
export const rulesAfter = (db: Rows, networkId: number, afterId: number, most: number): Rule[] =>
  db
    .select()
    .from(rules)
    .where(and(eq(rules.networkId, networkId), gt(rules.id, afterId)))
    .orderBy(asc(rules.id))
    .limit(most)
    .all()
    .map((row) => shown(db, row));

/** Every version of a rule, latest first, from before an id on. */
export const ruleVersionsOf = (db: Rows, ruleId: number, beforeId: number | undefined, most: number): RuleState[] =>
  db
    .select()
    .from(ruleVersions)
    .where(and(eq(ruleVersions.ruleId, ruleId), beforeId === undefined ? undefined : lt(ruleVersions.id, beforeId)))
    .orderBy(desc(ruleVersions.id))
    .limit(most)
    .all()
    .map((row) => stateOf(db, row));

function shown(db: Rows, { createdBy: _by, ...row }: RuleRow): Rule {
  const now = db
    .select()
    .from(ruleVersions)
    .where(and(eq(ruleVersions.ruleId, row.id), isNull(ruleVersions.supersededAt)))
    .get();
  if (!now) throw new Error(`rule ${row.id} has no version in force`);
  return { ...row, now: stateOf(db, now) };
}

function stateOf(db: Rows, row: VersionRow): RuleState {
  const { id, number, minimumFold, sigmas, leastAmplitude, deadTimeNs, crowdLimit, createdAt, createdBy, supersededAt } = row;
  const siteIds = db
    .select({ siteId: ruleSites.siteId })
    .from(ruleSites)
    .where(eq(ruleSites.ruleVersionId, id))
    .all()
    .map(({ siteId }) => siteId);
  const exclusions = db
    .select()
    .from(ruleExclusions)
    .where(eq(ruleExclusions.ruleVersionId, id))
    .orderBy(asc(ruleExclusions.fromTaiS), asc(ruleExclusions.fromPs), asc(ruleExclusions.id))
    .all()
    .map(({ siteId, fromTaiS, fromPs, toTaiS, toPs, reason }) => ({
      siteId,
      from: { taiS: fromTaiS, ps: fromPs },
      to: { taiS: toTaiS, ps: toPs },
      reason,
    }));
  return {
    id,
    number,
    minimumFold,
    sigmas,
    window: windowOf(row),
    leastAmplitude,
    deadTimeNs,
    crowdLimit,
    siteIds,
    exclusions,
    createdAt,
    createdBy,
    supersededAt,
  };
}

const windowOf = ({ windowKind, speedC, marginNs, widthNs, frameId }: VersionRow): RuleState['window'] =>
  windowKind === 'light-time'
    ? { kind: windowKind, speedC: speedC ?? 1, marginNs: marginNs ?? 0 }
    : { kind: windowKind, widthNs: widthNs ?? 0, frameId };
