import { sql } from 'drizzle-orm';
import { blob, foreignKey, index, integer, primaryKey, real, sqliteTable, text, uniqueIndex } from 'drizzle-orm/sqlite-core';
import { clockSegments, timeReferenceVersions } from './clocks';
import { checks, isCount, isFinite, isHashBytes, isInstant, isNotNegative, isOneOf } from './forms';
import { triggers } from './intake';
import { jobs } from './jobs';
import { networks, runs, sites, siteVersions } from './networks';
import { leapSecondTables, orientationTables } from './tables';
import { SIGMA_ORIGINS, TRIGGER_KINDS } from './words';

/** What events rest on, once for all events that rest on the same: each version is one that never changes. */
export const groundings = sqliteTable(
  'groundings',
  {
    id: integer().primaryKey(),
    siteVersionId: integer('site_version_id')
      .notNull()
      .references(() => siteVersions.id, { onDelete: 'restrict' }),
    /** NULL for an exact clock. */
    segmentId: integer('segment_id').references(() => clockSegments.id, { onDelete: 'restrict' }),
    /** Of the segment's reference; NULL for none. */
    referenceVersionId: integer('reference_version_id').references(() => timeReferenceVersions.id, { onDelete: 'restrict' }),
    runId: integer('run_id')
      .notNull()
      .references(() => runs.id, { onDelete: 'restrict' }),
    leapSecondTableId: integer('leap_second_table_id')
      .notNull()
      .references(() => leapSecondTables.id, { onDelete: 'restrict' }),
    /** NULL where no table was loaded. */
    orientationTableId: integer('orientation_table_id').references(() => orientationTables.id, { onDelete: 'restrict' }),
  },
  (t) => [
    // Each once; the finding of one. NULLs are told apart by 0, which no id is.
    uniqueIndex('groundings_once').on(
      t.siteVersionId,
      sql`coalesce(segment_id, 0)`,
      sql`coalesce(reference_version_id, 0)`,
      t.runId,
      t.leapSecondTableId,
      sql`coalesce(orientation_table_id, 0)`,
    ),
  ],
);

/** The numbers of an event, which `events`, `event_versions` and `staged_events` have alike. */
const eventNumbers = () => ({
  groundingId: integer('grounding_id')
    .notNull()
    .references(() => groundings.id, { onDelete: 'restrict' }),
  taiS: integer('tai_s').notNull(),
  ps: integer().notNull(),
  /** Geocentric inertial (GCRS axes), at the event. */
  xM: real('x_m').notNull(),
  yM: real('y_m').notNull(),
  zM: real('z_m').notNull(),
  /** One standard error of the reading alone. */
  readingSigmaNs: real('reading_sigma_ns').notNull(),
  sigmaOrigin: text('sigma_origin', { enum: SIGMA_ORIGINS }).notNull(),
  /** All time errors of the event together. */
  sigmaNs: real('sigma_ns').notNull(),
  /** From the segment's epoch to the reading less its delay; 0 for an exact clock. */
  sinceEpochDays: real('since_epoch_days').notNull(),
  /** NULL where the site gave none. */
  amplitude: real(),
  /** 1, 2, 3, ... of the event: how often it was computed. */
  version: integer().notNull(),
  /** The change that brought it. */
  changeNumber: integer('change_number').notNull(),
  /** SHA-256 over the numbers: finds a flipped bit. */
  rowHash: blob('row_hash', { mode: 'buffer' }).notNull(),
});

type EventNumbers = Record<keyof ReturnType<typeof eventNumbers>, Parameters<typeof isFinite>[0]>;

const eventChecks = (table: string, t: EventNumbers) =>
  checks(table, {
    time: isInstant(t.taiS, t.ps),
    place: sql`${isFinite(t.xM)} AND ${isFinite(t.yM)} AND ${isFinite(t.zM)}`,
    reading_sigma_ns: isNotNegative(t.readingSigmaNs),
    sigma_origin: isOneOf(t.sigmaOrigin, SIGMA_ORIGINS),
    sigma_ns: isNotNegative(t.sigmaNs),
    since_epoch_days: isFinite(t.sinceEpochDays),
    amplitude: isFinite(t.amplitude),
    version: isCount(t.version, 1),
    change_number: isCount(t.changeNumber, 1),
    row_hash: isHashBytes(t.rowHash),
  });

/** Each trigger that stands, as reconciled with what is in force: at most one of an identity. */
export const events = sqliteTable(
  'events',
  {
    triggerId: integer('trigger_id')
      .primaryKey()
      .references(() => triggers.id, { onDelete: 'restrict' }),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    siteId: integer('site_id').notNull(),
    kind: text({ enum: TRIGGER_KINDS }).notNull(),
    ...eventNumbers(),
  },
  (t) => [
    foreignKey({ columns: [t.siteId, t.networkId], foreignColumns: [sites.id, sites.networkId] }).onDelete('restrict'),
    // A network's events in their order, from a cursor on; those around an instant.
    index('events_by_time').on(t.networkId, t.taiS, t.ps, t.triggerId),
    // A site's events in their order; those that a change of its clock or place concerns.
    index('events_of_site').on(t.siteId, t.taiS, t.ps, t.triggerId),
    ...checks('events', { kind: isOneOf(t.kind, TRIGGER_KINDS) }),
    ...eventChecks('events', t),
  ],
);

/** What events were before they were computed anew, or withdrawn. */
export const eventVersions = sqliteTable(
  'event_versions',
  {
    triggerId: integer('trigger_id')
      .notNull()
      .references(() => triggers.id, { onDelete: 'restrict' }),
    ...eventNumbers(),
    /** The change that ended it. */
    endedChange: integer('ended_change').notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.triggerId, t.version] }),
    ...eventChecks('event_versions', t),
    ...checks('event_versions', { ended_change: isCount(t.endedChange, 1) }),
  ],
);

/** What a reprocessing has computed and not yet put in force: dropped when it is cancelled, kept while it is looked at as a trial. */
export const stagedEvents = sqliteTable(
  'staged_events',
  {
    jobId: integer('job_id')
      .notNull()
      .references(() => jobs.id, { onDelete: 'cascade' }),
    triggerId: integer('trigger_id')
      .notNull()
      .references(() => triggers.id, { onDelete: 'restrict' }),
    ...eventNumbers(),
  },
  (t) => [primaryKey({ columns: [t.jobId, t.triggerId] }), ...eventChecks('staged_events', t)],
);

/** How many events of each kind a site had in each minute, hour and day, so that a rate over years is read from few rows. */
export const eventRates = sqliteTable(
  'event_rates',
  {
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    kind: text({ enum: TRIGGER_KINDS }).notNull(),
    /** 60, 3,600 or 86,400. */
    widthS: integer('width_s').notNull(),
    /** The beginning, a multiple of the width. */
    fromTaiS: integer('from_tai_s').notNull(),
    events: integer().notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.siteId, t.kind, t.widthS, t.fromTaiS] }),
    ...checks('event_rates', {
      kind: isOneOf(t.kind, TRIGGER_KINDS),
      width_s: sql`${t.widthS} IN (60, 3600, 86400)`,
      from_tai_s: sql`${t.fromTaiS} % ${t.widthS} = 0`,
      events: isCount(t.events),
    }),
  ],
);

/** How often a site's triggers had a standard error or an amplitude of a size: ten bins to a factor of ten. */
export const eventHistograms = sqliteTable(
  'event_histograms',
  {
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    quantity: text({ enum: ['sigma_ns', 'amplitude'] }).notNull(),
    /** Sizes from 10^(bin/10) to 10^((bin+1)/10), with the sign of `sign`; bin NULL never: 0 has sign 0 and bin 0. */
    sign: integer().notNull(),
    bin: integer().notNull(),
    events: integer().notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.siteId, t.quantity, t.sign, t.bin] }),
    ...checks('event_histograms', {
      quantity: isOneOf(t.quantity, ['sigma_ns', 'amplitude']),
      sign: sql`${t.sign} IN (-1, 0, 1) AND (${t.sign} <> 0 OR ${t.bin} = 0)`,
      bin: sql`${t.bin} BETWEEN -4000 AND 4000`,
      events: isCount(t.events),
    }),
  ],
);
