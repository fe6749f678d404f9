import { sql } from 'drizzle-orm';
import { integer, sqliteTable, text, uniqueIndex } from 'drizzle-orm/sqlite-core';
import { checks, isCount, isFlag, isSha1, isSha256, isText, isUtc } from './forms';
import { people } from './people';

/** Every leap-second list that was ever in force, as it came; no row of one may differ from the next one's. */
export const leapSecondTables = sqliteTable(
  'leap_second_tables',
  {
    id: integer().primaryKey(),
    /** The file, whose own SHA-1 line has been verified. */
    body: text().notNull(),
    sha1: text().notNull(),
    updatedTaiS: integer('updated_tai_s').notNull(),
    expiresTaiS: integer('expires_tai_s').notNull(),
    isInForce: integer('is_in_force', { mode: 'boolean' }).notNull(),
    createdAt: text('created_at').notNull(),
    /** NULL for the list that came with the program. */
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('leap_second_tables_sha1').on(t.sha1),
    uniqueIndex('leap_second_tables_in_force')
      .on(t.isInForce)
      .where(sql`is_in_force = 1`),
    ...checks('leap_second_tables', {
      body: isText(t.body, 500_000),
      sha1: isSha1(t.sha1),
      updated_tai_s: isCount(t.updatedTaiS),
      expires_tai_s: isCount(t.expiresTaiS),
      is_in_force: isFlag(t.isInForce),
      created_at: isUtc(t.createdAt),
    }),
  ],
);

/** Every Earth-orientation table (IERS finals2000A) that was ever in force, as it came. */
export const orientationTables = sqliteTable(
  'orientation_tables',
  {
    id: integer().primaryKey(),
    body: text().notNull(),
    sha256: text().notNull(),
    firstMjd: integer('first_mjd').notNull(),
    lastMjd: integer('last_mjd').notNull(),
    /** The first day that is a prediction; NULL where all are measured. */
    predictedFromMjd: integer('predicted_from_mjd'),
    isInForce: integer('is_in_force', { mode: 'boolean' }).notNull(),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('orientation_tables_sha256').on(t.sha256),
    uniqueIndex('orientation_tables_in_force')
      .on(t.isInForce)
      .where(sql`is_in_force = 1`),
    ...checks('orientation_tables', {
      body: isText(t.body, 16_777_216),
      sha256: isSha256(t.sha256),
      first_mjd: isCount(t.firstMjd),
      last_mjd: sql`${t.lastMjd} BETWEEN ${t.firstMjd} AND 200000`,
      predicted_from_mjd: sql`${t.predictedFromMjd} BETWEEN ${t.firstMjd} AND ${t.lastMjd}`,
      is_in_force: isFlag(t.isInForce),
      created_at: isUtc(t.createdAt),
    }),
  ],
);
