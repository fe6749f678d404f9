import { and, eq, isNull } from 'drizzle-orm';
import { type CoincidenceRule, type CoincidenceWindow } from '#shared/coincidence/rule';
import { GEOCENTRIC_CODE } from '#shared/relativity/frame-definition';
import { type Instant } from '#shared/time/instant';
import { ruleExclusions, rules, ruleSites, ruleVersions } from '#schema/coincidences';
import { frames } from '#schema/frames';
import { type Db } from '../db';

/**
 * An event that is the earliest of more sets than this is crowded, in the live service, whatever more its rule allows: a flush of 25 triggers
 * into a storm then writes some thousand sets at most, which takes a third of a second; at 10,000 it would take minutes. The batch command
 * finds the same with `--limit 50`.
 */
export const LIVE_CROWD_LIMIT = 50;

/** A period that a rule leaves out, both ends included. */
export interface Exclusion {
  /** Undefined for all sites. */
  readonly siteId: number | undefined;
  readonly from: Instant;
  readonly to: Instant;
}

/** A rule as it is in force. */
export interface ActiveRule {
  readonly ruleId: number;
  readonly versionId: number;
  readonly rule: CoincidenceRule;
  /** The sites that it is for; undefined for all. */
  readonly siteIds: ReadonlySet<number> | undefined;
  readonly exclusions: readonly Exclusion[];
  /** Triggers below it take no part; one without an amplitude is not below it. */
  readonly leastAmplitude: number | undefined;
  readonly deadTimeNs: number;
  readonly limit: number;
}

/** The active rules of a network, each in its version in force, by their ids. */
export function activeRules(db: Db, networkId: number): ActiveRule[] {
  const rows = db
    .select({ rule: rules, version: ruleVersions, frame: frames.code })
    .from(rules)
    .innerJoin(ruleVersions, and(eq(ruleVersions.ruleId, rules.id), isNull(ruleVersions.supersededAt)))
    .leftJoin(frames, eq(frames.id, ruleVersions.frameId))
    .where(and(eq(rules.networkId, networkId), eq(rules.isActive, true)))
    .orderBy(rules.id)
    .all();
  return rows.map(({ rule, version, frame }) => ({
    ruleId: rule.id,
    versionId: version.id,
    rule: {
      code: rule.code,
      minimumFold: version.minimumFold,
      sigmas: version.sigmas,
      window: windowOf(version, frame ?? GEOCENTRIC_CODE),
    },
    siteIds: sitesOf(db, version.id),
    exclusions: exclusionsOf(db, version.id),
    leastAmplitude: version.leastAmplitude ?? undefined,
    deadTimeNs: version.deadTimeNs,
    limit: Math.min(version.crowdLimit, LIVE_CROWD_LIMIT),
  }));
}

function windowOf(version: typeof ruleVersions.$inferSelect, frame: string): CoincidenceWindow {
  return version.windowKind === 'light-time'
    ? { kind: 'light-time', speedC: version.speedC ?? 1, marginNs: version.marginNs ?? 0 }
    : { kind: 'fixed', widthNs: version.widthNs ?? 0, frame };
}

function sitesOf(db: Db, versionId: number): ReadonlySet<number> | undefined {
  const rows = db.select({ siteId: ruleSites.siteId }).from(ruleSites).where(eq(ruleSites.ruleVersionId, versionId)).all();
  return rows.length === 0 ? undefined : new Set(rows.map(({ siteId }) => siteId));
}

function exclusionsOf(db: Db, versionId: number): Exclusion[] {
  const rows = db.select().from(ruleExclusions).where(eq(ruleExclusions.ruleVersionId, versionId)).all();
  return rows.map((row) => ({
    siteId: row.siteId ?? undefined,
    from: { taiS: row.fromTaiS, ps: row.fromPs },
    to: { taiS: row.toTaiS, ps: row.toPs },
  }));
}
