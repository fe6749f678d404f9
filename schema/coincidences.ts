import { sql } from 'drizzle-orm';
import { blob, foreignKey, index, integer, primaryKey, real, sqliteTable, text, uniqueIndex } from 'drizzle-orm/sqlite-core';
import {
  checks,
  isCode,
  isCount,
  isFinite,
  isFlag,
  isHashBytes,
  isInstant,
  isJson,
  isNotNegative,
  isOneOf,
  isSha256,
  isSpan,
  isText,
  isUtc,
} from './forms';
import { frames } from './frames';
import { triggers } from './intake';
import { jobs } from './jobs';
import { networks, runs, sites } from './networks';
import { people } from './people';
import { COINCIDENCE_STATES, INTERVAL_CLASSES } from './words';

/** A coincidence rule of a network; several may be active. */
export const rules = sqliteTable(
  'rules',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    code: text().notNull(),
    name: text().notNull(),
    isActive: integer('is_active', { mode: 'boolean' }).notNull(),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('rules_code').on(t.networkId, t.code),
    ...checks('rules', {
      code: isCode(t.code),
      name: isText(t.name, 200, 0),
      is_active: isFlag(t.isActive),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
    }),
  ],
);

/** What a rule says, as it was stated, never changed; the one in force is not superseded. */
export const ruleVersions = sqliteTable(
  'rule_versions',
  {
    id: integer().primaryKey(),
    ruleId: integer('rule_id')
      .notNull()
      .references(() => rules.id, { onDelete: 'restrict' }),
    number: integer().notNull(),
    minimumFold: integer('minimum_fold').notNull(),
    sigmas: real().notNull(),
    windowKind: text('window_kind', { enum: ['light-time', 'fixed'] }).notNull(),
    /** Of a light-time window. */
    speedC: real('speed_c'),
    marginNs: real('margin_ns'),
    /** Of a fixed window. */
    widthNs: real('width_ns'),
    /** The frame of a fixed window; NULL for the geocentric one. */
    frameId: integer('frame_id').references(() => frames.id, { onDelete: 'restrict' }),
    /** Triggers below it take no part; NULL for none. */
    leastAmplitude: real('least_amplitude'),
    /** After a trigger a site's next ones take no part for so long. */
    deadTimeNs: real('dead_time_ns').notNull().default(0),
    /** An event that is the earliest of more sets than this is crowded. */
    crowdLimit: integer('crowd_limit').notNull().default(10_000),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
    supersededAt: text('superseded_at'),
    supersededBy: integer('superseded_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('rule_versions_number').on(t.ruleId, t.number),
    uniqueIndex('rule_versions_in_force')
      .on(t.ruleId)
      .where(sql`superseded_at IS NULL`),
    ...checks('rule_versions', {
      number: isCount(t.number, 1),
      minimum_fold: isCount(t.minimumFold, 2),
      sigmas: isNotNegative(t.sigmas),
      window_kind: isOneOf(t.windowKind, ['light-time', 'fixed']),
      speed_c: sql`${t.speedC} > 0 AND ${isFinite(t.speedC)}`,
      margin_ns: isNotNegative(t.marginNs),
      width_ns: isNotNegative(t.widthNs),
      window: sql`(${t.windowKind} = 'light-time') = (${t.speedC} IS NOT NULL) AND (${t.windowKind} = 'light-time') = (${t.marginNs} IS NOT NULL)
        AND (${t.windowKind} = 'fixed') = (${t.widthNs} IS NOT NULL) AND (${t.windowKind} = 'fixed' OR ${t.frameId} IS NULL)`,
      least_amplitude: isFinite(t.leastAmplitude),
      dead_time_ns: isNotNegative(t.deadTimeNs),
      crowd_limit: isCount(t.crowdLimit, 1),
      created_at: isUtc(t.createdAt),
      superseded_at: isUtc(t.supersededAt),
    }),
  ],
);

/** The sites that a rule is for; none means all. */
export const ruleSites = sqliteTable(
  'rule_sites',
  {
    ruleVersionId: integer('rule_version_id')
      .notNull()
      .references(() => ruleVersions.id, { onDelete: 'restrict' }),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
  },
  (t) => [primaryKey({ columns: [t.ruleVersionId, t.siteId] })],
);

/** The periods that a rule leaves out, of one site or of all. */
export const ruleExclusions = sqliteTable(
  'rule_exclusions',
  {
    id: integer().primaryKey(),
    ruleVersionId: integer('rule_version_id')
      .notNull()
      .references(() => ruleVersions.id, { onDelete: 'restrict' }),
    siteId: integer('site_id').references(() => sites.id, { onDelete: 'restrict' }),
    fromTaiS: integer('from_tai_s').notNull(),
    fromPs: integer('from_ps').notNull(),
    toTaiS: integer('to_tai_s').notNull(),
    toPs: integer('to_ps').notNull(),
    reason: text().notNull(),
  },
  (t) => [
    index('rule_exclusions_of_rule').on(t.ruleVersionId, t.fromTaiS, t.fromPs),
    ...checks('rule_exclusions', {
      from: isInstant(t.fromTaiS, t.fromPs),
      to: isInstant(t.toTaiS, t.toPs),
      span: isSpan(t.fromTaiS, t.fromPs, t.toTaiS, t.toPs),
      reason: isText(t.reason, 2_000, 0),
    }),
  ],
);

/**
 * A coincidence as computed. What it is, is said by its rule's version and its events, which `set_hash` names for ever; a set that is computed
 * anew is a new row, and the former one stays as it was.
 */
export const coincidences = sqliteTable(
  'coincidences',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    ruleVersionId: integer('rule_version_id')
      .notNull()
      .references(() => ruleVersions.id, { onDelete: 'restrict' }),
    /** SHA-256 over the rule's code and the events' names, as the batch command has it; its first 12 digits are the set's name. */
    setHash: text('set_hash').notNull(),
    state: text({ enum: COINCIDENCE_STATES }).notNull(),
    /** Whether it is in force: open or final. */
    isCurrent: integer('is_current', { mode: 'boolean' }).notNull(),
    fold: integer().notNull(),
    firstTaiS: integer('first_tai_s').notNull(),
    firstPs: integer('first_ps').notNull(),
    spanNs: real('span_ns').notNull(),
    /** The class of its pairs where they agree, else mixed. */
    class: text({ enum: [...INTERVAL_CLASSES, 'mixed'] }).notNull(),
    /** How many of its pairs are of each class. */
    timelikePairs: integer('timelike_pairs').notNull(),
    spacelikePairs: integer('spacelike_pairs').notNull(),
    undecidedPairs: integer('undecided_pairs').notNull(),
    /** The margin of the pair that lies nearest to the light cone: of all margins the one least in size. May be infinite. */
    nearestMarginSigma: real('nearest_margin_sigma').notNull(),
    /** The least speed at which any of its pairs turns; NULL where none does. */
    leastTurningSpeedC: real('least_turning_speed_c'),
    /** Sum of its members' amplitudes; NULL where none has one. */
    amplitude: real(),
    /** How many at least as strong unrelated triggers are expected to make in the run; NULL until it is known. */
    expectedByChance: real('expected_by_chance'),
    /** Whether its window touches a gap in a site's numbers. */
    touchesGap: integer('touches_gap', { mode: 'boolean' }).notNull(),
    /** The change that brought it; of a staged one, NULL. */
    sinceChange: integer('since_change'),
    /** The change that ended it. */
    endedChange: integer('ended_change'),
    /** The job whose staged result it is, or was. */
    jobId: integer('job_id').references(() => jobs.id, { onDelete: 'set null' }),
    /** SHA-256 over the row, its members and its pairs: finds a flipped bit. */
    rowHash: blob('row_hash', { mode: 'buffer' }).notNull(),
  },
  (t) => [
    // A set by its name, and each set in force once. First the name, so that its first 12 digits find it.
    uniqueIndex('coincidences_by_name')
      .on(t.networkId, t.setHash, t.ruleVersionId)
      .where(sql`is_current = 1`),
    // What a set was before.
    index('coincidences_former')
      .on(t.networkId, t.setHash, t.id)
      .where(sql`state = 'former'`),
    // What a job has staged.
    index('coincidences_of_job')
      .on(t.jobId)
      .where(sql`state = 'staged'`),
    // Those that may still grow, in time order: what completeness makes final.
    index('coincidences_open')
      .on(t.networkId, t.firstTaiS, t.firstPs)
      .where(sql`state = 'open'`),
    // What a network had in force since a change.
    index('coincidences_since')
      .on(t.networkId, t.sinceChange)
      .where(sql`is_current = 1`),
    // The list, in each order that it can be in, and by each of what it is filtered by in time order.
    index('coincidences_by_time')
      .on(t.networkId, t.firstTaiS, t.firstPs, t.id)
      .where(sql`is_current = 1`),
    index('coincidences_by_fold')
      .on(t.networkId, t.fold, t.firstTaiS, t.firstPs, t.id)
      .where(sql`is_current = 1`),
    index('coincidences_by_class')
      .on(t.networkId, t.class, t.firstTaiS, t.firstPs, t.id)
      .where(sql`is_current = 1`),
    index('coincidences_by_rule')
      .on(t.ruleVersionId, t.firstTaiS, t.firstPs, t.id)
      .where(sql`is_current = 1`),
    index('coincidences_by_margin')
      .on(t.networkId, t.nearestMarginSigma, t.id)
      .where(sql`is_current = 1`),
    index('coincidences_by_span')
      .on(t.networkId, t.spanNs, t.id)
      .where(sql`is_current = 1`),
    index('coincidences_by_turning')
      .on(t.networkId, t.leastTurningSpeedC, t.id)
      .where(sql`is_current = 1 AND least_turning_speed_c IS NOT NULL`),
    index('coincidences_by_amplitude')
      .on(t.networkId, t.amplitude, t.id)
      .where(sql`is_current = 1 AND amplitude IS NOT NULL`),
    index('coincidences_by_chance')
      .on(t.networkId, t.expectedByChance, t.id)
      .where(sql`is_current = 1 AND expected_by_chance IS NOT NULL`),
    ...checks('coincidences', {
      set_hash: isSha256(t.setHash),
      state: isOneOf(t.state, COINCIDENCE_STATES),
      is_current: sql`${isFlag(t.isCurrent)} AND ${t.isCurrent} = (${t.state} IN ('open', 'final'))`,
      fold: isCount(t.fold, 2),
      first: isInstant(t.firstTaiS, t.firstPs),
      span_ns: isNotNegative(t.spanNs),
      class: isOneOf(t.class, [...INTERVAL_CLASSES, 'mixed']),
      pairs: sql`${isCount(t.timelikePairs)} AND ${isCount(t.spacelikePairs)} AND ${isCount(t.undecidedPairs)}
        AND 2 * (${t.timelikePairs} + ${t.spacelikePairs} + ${t.undecidedPairs}) = ${t.fold} * (${t.fold} - 1)`,
      class_of_pairs: sql`${t.class} = CASE 0 WHEN ${t.spacelikePairs} + ${t.undecidedPairs} THEN 'timelike'
        WHEN ${t.timelikePairs} + ${t.undecidedPairs} THEN 'spacelike' WHEN ${t.timelikePairs} + ${t.spacelikePairs} THEN 'undecided' ELSE 'mixed' END`,
      least_turning_speed_c: sql`${t.leastTurningSpeedC} BETWEEN 0 AND 1`,
      turns: sql`(${t.leastTurningSpeedC} IS NOT NULL) = (${t.spacelikePairs} > 0)`,
      amplitude: isFinite(t.amplitude),
      expected_by_chance: isNotNegative(t.expectedByChance),
      touches_gap: isFlag(t.touchesGap),
      since_change: isCount(t.sinceChange, 1),
      ended_change: sql`${t.endedChange} > ${t.sinceChange}`,
      life: sql`(${t.state} = 'staged') = (${t.sinceChange} IS NULL) AND (${t.state} = 'former') = (${t.endedChange} IS NOT NULL)`,
      row_hash: isHashBytes(t.rowHash),
    }),
  ],
);

/** The events of a coincidence, at most one of each site, in their order. */
export const members = sqliteTable(
  'members',
  {
    coincidenceId: integer('coincidence_id')
      .notNull()
      .references(() => coincidences.id, { onDelete: 'cascade' }),
    /** 1, 2, 3, ... in the order of events. */
    place: integer().notNull(),
    triggerId: integer('trigger_id')
      .notNull()
      .references(() => triggers.id, { onDelete: 'restrict' }),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    /** Which version of the event it was computed from. */
    eventVersion: integer('event_version').notNull(),
    /** Those of the coincidence, so that a site's coincidences are read in time order. */
    isCurrent: integer('is_current', { mode: 'boolean' }).notNull(),
    firstTaiS: integer('first_tai_s').notNull(),
    firstPs: integer('first_ps').notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.coincidenceId, t.place] }),
    // The coincidences of an event.
    index('members_of_trigger').on(t.triggerId, t.coincidenceId),
    // The coincidences in which a site takes part, in time order.
    index('members_of_site')
      .on(t.siteId, t.firstTaiS, t.firstPs, t.coincidenceId)
      .where(sql`is_current = 1`),
    ...checks('members', {
      place: isCount(t.place, 1),
      event_version: isCount(t.eventVersion, 1),
      is_current: isFlag(t.isCurrent),
      first: isInstant(t.firstTaiS, t.firstPs),
    }),
  ],
);

/** The pairs of a coincidence, the earlier event first. Orders in frames are computed when they are asked for. */
export const pairs = sqliteTable(
  'pairs',
  {
    coincidenceId: integer('coincidence_id').notNull(),
    /** Places of its members, a before b. */
    a: integer().notNull(),
    b: integer().notNull(),
    class: text({ enum: INTERVAL_CLASSES }).notNull(),
    dtNs: real('dt_ns').notNull(),
    distanceM: real('distance_m').notNull(),
    sigmaDtNs: real('sigma_dt_ns').notNull(),
    sigmaGapNs: real('sigma_gap_ns').notNull(),
    /** Positive = timelike; infinite where the error is 0. */
    marginSigma: real('margin_sigma').notNull(),
    /** How surely b did not cause a. */
    reverseMarginSigma: real('reverse_margin_sigma').notNull(),
    intervalM2: real('interval_m2').notNull(),
    /** Proper time of a timelike pair. */
    properTimeS: real('proper_time_s'),
    /** Proper distance of a spacelike pair, and where its order turns. */
    properDistanceM: real('proper_distance_m'),
    turningSpeedC: real('turning_speed_c'),
    turningSigmaC: real('turning_sigma_c'),
    /** Unit vector from a to b, GCRS axes. */
    towardX: real('toward_x'),
    towardY: real('toward_y'),
    towardZ: real('toward_z'),
  },
  (t) => [
    primaryKey({ columns: [t.coincidenceId, t.a, t.b] }),
    foreignKey({ columns: [t.coincidenceId, t.a], foreignColumns: [members.coincidenceId, members.place], name: 'pairs_a' }).onDelete(
      'cascade',
    ),
    foreignKey({ columns: [t.coincidenceId, t.b], foreignColumns: [members.coincidenceId, members.place], name: 'pairs_b' }).onDelete(
      'cascade',
    ),
    ...checks('pairs', {
      order: sql`${t.a} >= 1 AND ${t.a} < ${t.b}`,
      class: isOneOf(t.class, INTERVAL_CLASSES),
      dt_ns: isNotNegative(t.dtNs),
      distance_m: isNotNegative(t.distanceM),
      sigma_dt_ns: isNotNegative(t.sigmaDtNs),
      sigma_gap_ns: isNotNegative(t.sigmaGapNs),
      margins: sql`${t.marginSigma} <= ${t.reverseMarginSigma}`,
      interval_m2: isFinite(t.intervalM2),
      proper_time_s: isNotNegative(t.properTimeS),
      proper_distance_m: isNotNegative(t.properDistanceM),
      turning_speed_c: sql`${t.turningSpeedC} BETWEEN 0 AND 1`,
      turning_sigma_c: isNotNegative(t.turningSigmaC),
      toward: sql`abs(${t.towardX} * ${t.towardX} + ${t.towardY} * ${t.towardY} + ${t.towardZ} * ${t.towardZ} - 1) < 1e-9`,
      of_class: sql`(${t.class} = 'timelike') = (${t.properTimeS} IS NOT NULL) AND (${t.class} = 'spacelike') = (${t.properDistanceM} IS NOT NULL)
        AND (${t.class} = 'spacelike') = (${t.turningSpeedC} IS NOT NULL) AND (${t.class} = 'spacelike') = (${t.turningSigmaC} IS NOT NULL)
        AND (${t.class} = 'spacelike') = (${t.towardX} IS NOT NULL AND ${t.towardY} IS NOT NULL AND ${t.towardZ} IS NOT NULL)`,
    }),
  ],
);

/** The coincidences that a coincidence grew from: those that ended since it holds all their events and more. */
export const growths = sqliteTable(
  'growths',
  {
    coincidenceId: integer('coincidence_id')
      .notNull()
      .references(() => coincidences.id, { onDelete: 'cascade' }),
    grewFromId: integer('grew_from_id')
      .notNull()
      .references(() => coincidences.id, { onDelete: 'cascade' }),
  },
  (t) => [
    primaryKey({ columns: [t.coincidenceId, t.grewFromId] }),
    // What a coincidence grew into.
    index('growths_into').on(t.grewFromId),
    ...checks('growths', { other: sql`${t.coincidenceId} <> ${t.grewFromId}` }),
  ],
);

/** Events in force that are the earliest of more sets than are listed. */
export const crowdedEvents = sqliteTable(
  'crowded_events',
  {
    ruleVersionId: integer('rule_version_id')
      .notNull()
      .references(() => ruleVersions.id, { onDelete: 'restrict' }),
    triggerId: integer('trigger_id')
      .notNull()
      .references(() => triggers.id, { onDelete: 'restrict' }),
    /** How many are near it and not earlier, itself included. */
    sites: integer().notNull(),
    events: integer().notNull(),
    setsAtLeast: integer('sets_at_least').notNull(),
    /** The change that brought it. */
    sinceChange: integer('since_change').notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.ruleVersionId, t.triggerId] }),
    ...checks('crowded_events', {
      sites: isCount(t.sites, 2),
      events: sql`${t.events} >= ${t.sites}`,
      sets_at_least: isCount(t.setsAtLeast, 1),
      since_change: isCount(t.sinceChange, 1),
    }),
  ],
);

/** How many coincidences unrelated triggers would make, by formula or by time slides, with what it was computed from. */
export const chanceEstimates = sqliteTable(
  'chance_estimates',
  {
    id: integer().primaryKey(),
    ruleVersionId: integer('rule_version_id')
      .notNull()
      .references(() => ruleVersions.id, { onDelete: 'restrict' }),
    runId: integer('run_id')
      .notNull()
      .references(() => runs.id, { onDelete: 'restrict' }),
    kind: text({ enum: ['formula', 'slides'] }).notNull(),
    /** JSON: live times and rates, or number of slides, shifts and seed. */
    inputs: text().notNull(),
    /** JSON: rates by fold with their limits. */
    results: text().notNull(),
    jobId: integer('job_id').references(() => jobs.id, { onDelete: 'set null' }),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    // The newest of a rule and run.
    index('chance_estimates_of_rule').on(t.ruleVersionId, t.runId, t.id),
    ...checks('chance_estimates', {
      kind: isOneOf(t.kind, ['formula', 'slides']),
      inputs: isJson(t.inputs, 1_048_576),
      results: isJson(t.results, 4_194_304),
      created_at: isUtc(t.createdAt),
    }),
  ],
);
