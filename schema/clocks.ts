import { sql } from 'drizzle-orm';
import { type AnySQLiteColumn, index, integer, primaryKey, real, sqliteTable, text, uniqueIndex } from 'drizzle-orm/sqlite-core';
import {
  checks,
  isCode,
  isCount,
  isFinite,
  isFlag,
  isInstant,
  isJson,
  isNotNegative,
  isOneOf,
  isSpan,
  isText,
  isUtc,
  isWholeNumber,
} from './forms';
import { triggers } from './intake';
import { jobs } from './jobs';
import { networks, sites } from './networks';
import { people } from './people';
import { SEGMENT_ORIGINS, SITE_SCALES } from './words';

/** What clocks are compared with: an error that is common to all segments that name it. */
export const timeReferences = sqliteTable(
  'time_references',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    code: text().notNull(),
    name: text().notNull(),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('time_references_code').on(t.networkId, t.code),
    ...checks('time_references', {
      code: isCode(t.code),
      name: isText(t.name, 200, 0),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
    }),
  ],
);

/** A reference's standard error as it was stated, never changed; the one in force is not superseded. */
export const timeReferenceVersions = sqliteTable(
  'time_reference_versions',
  {
    id: integer().primaryKey(),
    referenceId: integer('reference_id')
      .notNull()
      .references(() => timeReferences.id, { onDelete: 'restrict' }),
    number: integer().notNull(),
    sigmaNs: real('sigma_ns').notNull(),
    note: text().notNull().default(''),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
    supersededAt: text('superseded_at'),
    supersededBy: integer('superseded_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('time_reference_versions_number').on(t.referenceId, t.number),
    uniqueIndex('time_reference_versions_in_force')
      .on(t.referenceId)
      .where(sql`superseded_at IS NULL`),
    ...checks('time_reference_versions', {
      number: isCount(t.number, 1),
      sigma_ns: isNotNegative(t.sigmaNs),
      note: isText(t.note, 2_000, 0),
      created_at: isUtc(t.createdAt),
      superseded_at: isUtc(t.supersededAt),
    }),
  ],
);

/** A clock of a network; sites that share one share its errors. */
export const clocks = sqliteTable(
  'clocks',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references((): AnySQLiteColumn => networks.id, { onDelete: 'restrict' }),
    code: text().notNull(),
    name: text().notNull(),
    /** Grows with each edit of the clock or of its record. */
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references((): AnySQLiteColumn => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('clocks_code').on(t.networkId, t.code),
    ...checks('clocks', {
      code: sql`${isCode(t.code)} AND ${t.code} <> 'exact'`,
      name: isText(t.name, 200, 0),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
    }),
  ],
);

/**
 * One stretch of a clock record as it was stated, never changed. The record in force is the rows that are not superseded, each from its
 * beginning to the next one's; an edit adds a row with the same `segment` and marks the former as superseded, an end only marks.
 */
export const clockSegments = sqliteTable(
  'clock_segments',
  {
    id: integer().primaryKey(),
    clockId: integer('clock_id')
      .notNull()
      .references(() => clocks.id, { onDelete: 'restrict' }),
    /** Which stretch of the clock this is a version of: 1, 2, 3, ... */
    segment: integer().notNull(),
    /** 1, 2, 3, ... of the stretch. */
    number: integer().notNull(),
    fromTaiS: integer('from_tai_s').notNull(),
    fromPs: integer('from_ps').notNull(),
    /** The epoch at which the clock was ahead by exactly the offset. */
    atTaiS: integer('at_tai_s').notNull(),
    atPs: integer('at_ps').notNull(),
    offsetNs: real('offset_ns').notNull(),
    offsetSigmaNs: real('offset_sigma_ns').notNull(),
    rateNsPerDay: real('rate_ns_per_day').notNull(),
    rateSigmaNsPerDay: real('rate_sigma_ns_per_day').notNull(),
    covarianceNs2PerDay: real('covariance_ns2_per_day').notNull(),
    /** What the clock was compared with; NULL for nothing that others share. */
    referenceId: integer('reference_id').references(() => timeReferences.id, { onDelete: 'restrict' }),
    origin: text({ enum: SEGMENT_ORIGINS }).notNull(),
    fitId: integer('fit_id').references((): AnySQLiteColumn => clockFits.id, { onDelete: 'restrict' }),
    /** The certificate's number, or why it was set by hand. */
    note: text().notNull().default(''),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
    supersededAt: text('superseded_at'),
    supersededBy: integer('superseded_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('clock_segments_number').on(t.clockId, t.segment, t.number),
    uniqueIndex('clock_segments_in_force')
      .on(t.clockId, t.fromTaiS, t.fromPs)
      .where(sql`superseded_at IS NULL`),
    ...checks('clock_segments', {
      segment: isCount(t.segment, 1),
      number: isCount(t.number, 1),
      from: isInstant(t.fromTaiS, t.fromPs),
      at: isInstant(t.atTaiS, t.atPs),
      offset_ns: isFinite(t.offsetNs),
      offset_sigma_ns: isNotNegative(t.offsetSigmaNs),
      rate_ns_per_day: isFinite(t.rateNsPerDay),
      rate_sigma_ns_per_day: isNotNegative(t.rateSigmaNsPerDay),
      // The billionth is for the rounding of a correlation of exactly 1.
      covariance_ns2_per_day: sql`abs(${t.covarianceNs2PerDay}) <= ${t.offsetSigmaNs} * ${t.rateSigmaNsPerDay} * 1.000000001`,
      origin: isOneOf(t.origin, SEGMENT_ORIGINS),
      fit: sql`(${t.origin} = 'fit') = (${t.fitId} IS NOT NULL)`,
      note: isText(t.note, 2_000, 0),
      created_at: isUtc(t.createdAt),
      superseded_at: isUtc(t.supersededAt),
    }),
  ],
);

/** A source of reference pulses. */
export const emitters = sqliteTable(
  'emitters',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    code: text().notNull(),
    name: text().notNull(),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
    closedAt: text('closed_at'),
  },
  (t) => [
    uniqueIndex('emitters_code').on(t.networkId, t.code),
    ...checks('emitters', {
      code: isCode(t.code),
      name: isText(t.name, 200, 0),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
      closed_at: isUtc(t.closedAt),
    }),
  ],
);

/** Where an emitter stands and when it emits, as it was stated, never changed. */
export const emitterVersions = sqliteTable(
  'emitter_versions',
  {
    id: integer().primaryKey(),
    emitterId: integer('emitter_id')
      .notNull()
      .references(() => emitters.id, { onDelete: 'restrict' }),
    number: integer().notNull(),
    itrsXM: real('itrs_x_m').notNull(),
    itrsYM: real('itrs_y_m').notNull(),
    itrsZM: real('itrs_z_m').notNull(),
    positionSigmaM: real('position_sigma_m').notNull(),
    scale: text({ enum: SITE_SCALES }).notNull(),
    /** JSON: start, period and count, or a list of emission times. */
    schedule: text().notNull(),
    /** The emitter's own error, common to all clocks that are set by it. */
    referenceId: integer('reference_id')
      .notNull()
      .references(() => timeReferences.id, { onDelete: 'restrict' }),
    /** A trigger this near to an expected arrival, and nearest to it alone, is that pulse. */
    toleranceNs: real('tolerance_ns').notNull(),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
    supersededAt: text('superseded_at'),
    supersededBy: integer('superseded_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('emitter_versions_number').on(t.emitterId, t.number),
    uniqueIndex('emitter_versions_in_force')
      .on(t.emitterId)
      .where(sql`superseded_at IS NULL`),
    ...checks('emitter_versions', {
      number: isCount(t.number, 1),
      itrs_m: sql`${isFinite(t.itrsXM)} AND ${isFinite(t.itrsYM)} AND ${isFinite(t.itrsZM)}`,
      position_sigma_m: isNotNegative(t.positionSigmaM),
      scale: sql`${isOneOf(t.scale, SITE_SCALES)} AND ${t.scale} <> 'proper'`,
      schedule: isJson(t.schedule, 4_194_304),
      tolerance_ns: isNotNegative(t.toleranceNs),
      created_at: isUtc(t.createdAt),
      superseded_at: isUtc(t.supersededAt),
    }),
  ],
);

/** A fit of a clock's offset and rate to reference pulses, kept whether it was adopted or not. */
export const clockFits = sqliteTable(
  'clock_fits',
  {
    id: integer().primaryKey(),
    clockId: integer('clock_id')
      .notNull()
      .references(() => clocks.id, { onDelete: 'restrict' }),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    emitterVersionId: integer('emitter_version_id')
      .notNull()
      .references(() => emitterVersions.id, { onDelete: 'restrict' }),
    fromTaiS: integer('from_tai_s').notNull(),
    fromPs: integer('from_ps').notNull(),
    toTaiS: integer('to_tai_s').notNull(),
    toPs: integer('to_ps').notNull(),
    /** The weighted mean epoch. */
    atTaiS: integer('at_tai_s').notNull(),
    atPs: integer('at_ps').notNull(),
    offsetNs: real('offset_ns').notNull(),
    offsetSigmaNs: real('offset_sigma_ns').notNull(),
    rateNsPerDay: real('rate_ns_per_day').notNull(),
    rateSigmaNsPerDay: real('rate_sigma_ns_per_day').notNull(),
    covarianceNs2PerDay: real('covariance_ns2_per_day').notNull(),
    chiSquare: real('chi_square').notNull(),
    points: integer().notNull(),
    outliers: integer().notNull(),
    /** JSON: what else the fit says, such as a proposed step with its evidence, Allan deviations, warnings. */
    findings: text().notNull(),
    jobId: integer('job_id').references((): AnySQLiteColumn => jobs.id, { onDelete: 'set null' }),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    index('clock_fits_of_clock').on(t.clockId, t.id),
    ...checks('clock_fits', {
      from: isInstant(t.fromTaiS, t.fromPs),
      to: isInstant(t.toTaiS, t.toPs),
      span: isSpan(t.fromTaiS, t.fromPs, t.toTaiS, t.toPs),
      at: isInstant(t.atTaiS, t.atPs),
      offset_ns: isFinite(t.offsetNs),
      offset_sigma_ns: isNotNegative(t.offsetSigmaNs),
      rate_ns_per_day: isFinite(t.rateNsPerDay),
      rate_sigma_ns_per_day: isNotNegative(t.rateSigmaNsPerDay),
      covariance_ns2_per_day: isFinite(t.covarianceNs2PerDay),
      chi_square: isNotNegative(t.chiSquare),
      points: isCount(t.points, 1),
      outliers: sql`${t.outliers} BETWEEN 0 AND ${t.points}`,
      findings: isJson(t.findings, 1_048_576),
      created_at: isUtc(t.createdAt),
    }),
  ],
);

/** The clock readings that a fit was given, and which of them it left out. */
export const clockFitPoints = sqliteTable(
  'clock_fit_points',
  {
    fitId: integer('fit_id')
      .notNull()
      .references(() => clockFits.id, { onDelete: 'cascade' }),
    triggerId: integer('trigger_id')
      .notNull()
      .references((): AnySQLiteColumn => triggers.id, { onDelete: 'restrict' }),
    /** Which pulse of the emitter's schedule, 0 the first. */
    emission: text().notNull(),
    expectedTaiS: integer('expected_tai_s').notNull(),
    expectedPs: integer('expected_ps').notNull(),
    /** Observed less expected. */
    readingNs: real('reading_ns').notNull(),
    sigmaNs: real('sigma_ns').notNull(),
    /** What the fit leaves of it. */
    residualNs: real('residual_ns').notNull(),
    isOutlier: integer('is_outlier', { mode: 'boolean' }).notNull(),
    /** Whether a person overruled the selection. */
    isOverruled: integer('is_overruled', { mode: 'boolean' }).notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.fitId, t.triggerId] }),
    ...checks('clock_fit_points', {
      emission: isWholeNumber(t.emission),
      expected: isInstant(t.expectedTaiS, t.expectedPs),
      reading_ns: isFinite(t.readingNs),
      sigma_ns: isNotNegative(t.sigmaNs),
      residual_ns: isFinite(t.residualNs),
      is_outlier: isFlag(t.isOutlier),
      is_overruled: isFlag(t.isOverruled),
    }),
  ],
);
