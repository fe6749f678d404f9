import { sql } from 'drizzle-orm';
import { type AnySQLiteColumn, index, integer, real, sqliteTable, text, uniqueIndex } from 'drizzle-orm/sqlite-core';
import { clocks } from './clocks';
import {
  checks,
  EVER_TAI_S,
  isCode,
  isCount,
  isFinite,
  isFlag,
  isInstant,
  isNotNegative,
  isOneOf,
  isSha256,
  isSpan,
  isText,
  isUtc,
} from './forms';
import { people } from './people';
import { POSITION_KINDS, SITE_SCALES } from './words';

/** A detector network: whatever has one set of sites, frames and rules, and one numbering of changes. */
export const networks = sqliteTable(
  'networks',
  {
    id: integer().primaryKey(),
    code: text().notNull(),
    name: text().notNull(),
    /** The common origin of all frames, with the geocentre. */
    originTaiS: integer('origin_tai_s').notNull(),
    originPs: integer('origin_ps').notNull(),
    /** Signatures that confirm a candidate. */
    neededSignatures: integer('needed_signatures').notNull().default(2),
    /** Whether reviewers and coordinators must have a second factor. */
    needsSecondFactor: integer('needs_second_factor', { mode: 'boolean' }).notNull().default(false),
    /** How far a number of a snapshot may move, in its standard errors, before the candidate is out of date. */
    staleAboveSigmas: real('stale_above_sigmas').notNull().default(0.1),
    /** Grows with each edit; an edit states the one it saw. */
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    /** NULL where the program itself made it. */
    createdBy: integer('created_by').references((): AnySQLiteColumn => people.id, { onDelete: 'restrict' }),
    /** Takes no more records and stands in no list. */
    closedAt: text('closed_at'),
  },
  (t) => [
    uniqueIndex('networks_code').on(t.code),
    ...checks('networks', {
      code: isCode(t.code),
      name: isText(t.name, 200),
      origin: isInstant(t.originTaiS, t.originPs),
      needed_signatures: sql`${t.neededSignatures} BETWEEN 1 AND 20`,
      needs_second_factor: isFlag(t.needsSecondFactor),
      stale_above_sigmas: isNotNegative(t.staleAboveSigmas),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
      closed_at: isUtc(t.closedAt),
    }),
  ],
);

/** A data-taking period of a network; both ends belong to it. */
export const runs = sqliteTable(
  'runs',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    code: text().notNull(),
    name: text().notNull(),
    fromTaiS: integer('from_tai_s').notNull(),
    fromPs: integer('from_ps').notNull(),
    /** NULL while the run goes on. */
    toTaiS: integer('to_tai_s'),
    toPs: integer('to_ps'),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references((): AnySQLiteColumn => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('runs_code').on(t.networkId, t.code),
    uniqueIndex('runs_by_start').on(t.networkId, t.fromTaiS, t.fromPs),
    ...checks('runs', {
      code: isCode(t.code),
      name: isText(t.name, 200, 0),
      from: isInstant(t.fromTaiS, t.fromPs),
      to: isInstant(t.toTaiS, t.toPs),
      span: isSpan(t.fromTaiS, t.fromPs, t.toTaiS, t.toPs),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
    }),
  ],
);

/** A site or platform of a network: what never changes of it, and what nothing is computed from. */
export const sites = sqliteTable(
  'sites',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    code: text().notNull(),
    name: text().notNull(),
    /** Silent for longer than this, its operators are told; NULL for never. */
    silentAfterS: integer('silent_after_s'),
    /** More set-asides in an hour than this, and its operators are told; NULL for never. */
    setAsidesPerHour: integer('set_asides_per_hour'),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references((): AnySQLiteColumn => people.id, { onDelete: 'restrict' }),
    /** Takes no more records. */
    closedAt: text('closed_at'),
  },
  (t) => [
    uniqueIndex('sites_code').on(t.networkId, t.code),
    // What a pair (site, network) elsewhere points at, so that neither can be of another network.
    uniqueIndex('sites_of_network').on(t.id, t.networkId),
    ...checks('sites', {
      code: isCode(t.code),
      name: isText(t.name, 200, 0),
      silent_after_s: isCount(t.silentAfterS, 1),
      set_asides_per_hour: isCount(t.setAsidesPerHour, 1),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
      closed_at: isUtc(t.closedAt),
    }),
  ],
);

/** Where a platform is: an ephemeris as uploaded, valid between its ends and never beyond. Kept as it came. */
export const ephemerides = sqliteTable(
  'ephemerides',
  {
    id: integer().primaryKey(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    /** CCSDS state vectors, two-line elements, or inertial legs. */
    kind: text({ enum: ['oem', 'tle', 'legs'] }).notNull(),
    /** As uploaded. */
    body: text().notNull(),
    sha256: text().notNull(),
    fromTaiS: integer('from_tai_s').notNull(),
    fromPs: integer('from_ps').notNull(),
    toTaiS: integer('to_tai_s').notNull(),
    toPs: integer('to_ps').notNull(),
    /** Standard error of each axis. */
    positionSigmaM: real('position_sigma_m').notNull(),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references((): AnySQLiteColumn => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    index('ephemerides_of_site').on(t.siteId, t.fromTaiS, t.fromPs),
    ...checks('ephemerides', {
      kind: isOneOf(t.kind, ['oem', 'tle', 'legs']),
      body: isText(t.body, 67_108_864),
      sha256: isSha256(t.sha256),
      from: isInstant(t.fromTaiS, t.fromPs),
      to: isInstant(t.toTaiS, t.toPs),
      span: isSpan(t.fromTaiS, t.fromPs, t.toTaiS, t.toPs),
      position_sigma_m: isNotNegative(t.positionSigmaM),
      created_at: isUtc(t.createdAt),
    }),
  ],
);

/**
 * What a site's readings are reconciled by: place, delay, scale, clock, from an instant on until the next one's. A version is never changed:
 * an edit adds another and marks the former as superseded, so that whatever was computed from it can still be read with it.
 */
export const siteVersions = sqliteTable(
  'site_versions',
  {
    id: integer().primaryKey(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    /** 1, 2, 3, ... of the site. */
    number: integer().notNull(),
    /** Holds from this instant on; EVER_TAI_S for always. */
    fromTaiS: integer('from_tai_s').notNull().default(EVER_TAI_S),
    fromPs: integer('from_ps').notNull().default(0),
    scale: text({ enum: SITE_SCALES }).notNull(),
    /** NULL for a clock that was declared exact, which `exactClock` says on purpose. */
    clockId: integer('clock_id').references((): AnySQLiteColumn => clocks.id, { onDelete: 'restrict' }),
    exactClock: integer('exact_clock', { mode: 'boolean' }).notNull(),
    /** In which form the place was stated. */
    positionKind: text('position_kind', { enum: POSITION_KINDS }).notNull(),
    latitudeDeg: real('latitude_deg'),
    longitudeDeg: real('longitude_deg'),
    /** Above the WGS 84 ellipsoid. */
    heightM: real('height_m'),
    /** Earth-fixed; of a fixed site always there, whatever form it was stated in. */
    itrsXM: real('itrs_x_m'),
    itrsYM: real('itrs_y_m'),
    itrsZM: real('itrs_z_m'),
    ephemerisId: integer('ephemeris_id').references(() => ephemerides.id, { onDelete: 'restrict' }),
    /** Standard error of each axis. */
    positionSigmaM: real('position_sigma_m').notNull(),
    /** From detector to clock. */
    delayNs: real('delay_ns').notNull(),
    delaySigmaNs: real('delay_sigma_ns').notNull(),
    /** One standard error of a reading that states none; NULL where the resolution says it. */
    readingSigmaNs: real('reading_sigma_ns'),
    /** Where the numbers come from. */
    origin: text({ enum: ['survey', 'certificate', 'by-hand', 'fit', 'import'] }).notNull(),
    note: text().notNull().default(''),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references((): AnySQLiteColumn => people.id, { onDelete: 'restrict' }),
    /** NULL while it holds. */
    supersededAt: text('superseded_at'),
    supersededBy: integer('superseded_by').references((): AnySQLiteColumn => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('site_versions_number').on(t.siteId, t.number),
    uniqueIndex('site_versions_in_force')
      .on(t.siteId, t.fromTaiS, t.fromPs)
      .where(sql`superseded_at IS NULL`),
    ...checks('site_versions', {
      number: isCount(t.number, 1),
      from: isInstant(t.fromTaiS, t.fromPs),
      scale: isOneOf(t.scale, SITE_SCALES),
      exact_clock: sql`${isFlag(t.exactClock)} AND (${t.clockId} IS NULL) = ${t.exactClock}`,
      position_kind: isOneOf(t.positionKind, POSITION_KINDS),
      latitude_deg: sql`${t.latitudeDeg} BETWEEN -90 AND 90`,
      longitude_deg: sql`${t.longitudeDeg} BETWEEN -360 AND 360`,
      height_m: isFinite(t.heightM),
      itrs_m: sql`${isFinite(t.itrsXM)} AND ${isFinite(t.itrsYM)} AND ${isFinite(t.itrsZM)}`,
      position: sql`(${t.positionKind} = 'platform') = (${t.ephemerisId} IS NOT NULL)
        AND (${t.positionKind} <> 'platform') = (${t.itrsXM} IS NOT NULL AND ${t.itrsYM} IS NOT NULL AND ${t.itrsZM} IS NOT NULL)
        AND (${t.positionKind} = 'geodetic') = (${t.latitudeDeg} IS NOT NULL AND ${t.longitudeDeg} IS NOT NULL AND ${t.heightM} IS NOT NULL)`,
      position_sigma_m: isNotNegative(t.positionSigmaM),
      delay_ns: isFinite(t.delayNs),
      delay_sigma_ns: isNotNegative(t.delaySigmaNs),
      reading_sigma_ns: isNotNegative(t.readingSigmaNs),
      origin: isOneOf(t.origin, ['survey', 'certificate', 'by-hand', 'fit', 'import']),
      note: isText(t.note, 2_000, 0),
      created_at: isUtc(t.createdAt),
      superseded_at: isUtc(t.supersededAt),
    }),
  ],
);
