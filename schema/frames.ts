import { sql } from 'drizzle-orm';
import { type AnySQLiteColumn, integer, sqliteTable, text, uniqueIndex } from 'drizzle-orm/sqlite-core';
import { checks, isCode, isCount, isJson, isOneOf, isText, isUtc } from './forms';
import { networks, sites } from './networks';
import { people } from './people';
import { FRAME_KINDS } from './words';

/** A frame of a network. The geocentric one always exists and is no row: a parent that is NULL means it. */
export const frames = sqliteTable(
  'frames',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    code: text().notNull(),
    name: text().notNull(),
    /** Place among the frames whose order stands in the tables, 1 the first; NULL for one that is not pinned. */
    pinned: integer(),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
    /** Stands in no list any more. */
    closedAt: text('closed_at'),
  },
  (t) => [
    uniqueIndex('frames_code').on(t.networkId, t.code),
    ...checks('frames', {
      code: sql`${isCode(t.code)} AND ${t.code} <> 'geocentric'`,
      name: isText(t.name, 200, 0),
      pinned: isCount(t.pinned, 1),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
      closed_at: isUtc(t.closedAt),
    }),
  ],
);

/** A frame's motion as it was stated, never changed; the one in force is not superseded. */
export const frameVersions = sqliteTable(
  'frame_versions',
  {
    id: integer().primaryKey(),
    frameId: integer('frame_id')
      .notNull()
      .references(() => frames.id, { onDelete: 'restrict' }),
    number: integer().notNull(),
    /** NULL for the geocentric frame. */
    parentId: integer('parent_id').references(() => frames.id, { onDelete: 'restrict' }),
    kind: text({ enum: FRAME_KINDS }).notNull(),
    /** Taken at the first event of the set that it is applied to, or once at the origin event. */
    at: text({ enum: ['event', 'origin'] }).notNull(),
    /** JSON: the velocity in the words and units in which it was stated. */
    definition: text().notNull(),
    /** The sites of a baseline, the site of a horizon, the platform whose frame it is. */
    fromSiteId: integer('from_site_id').references((): AnySQLiteColumn => sites.id, { onDelete: 'restrict' }),
    toSiteId: integer('to_site_id').references((): AnySQLiteColumn => sites.id, { onDelete: 'restrict' }),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
    supersededAt: text('superseded_at'),
    supersededBy: integer('superseded_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('frame_versions_number').on(t.frameId, t.number),
    uniqueIndex('frame_versions_in_force')
      .on(t.frameId)
      .where(sql`superseded_at IS NULL`),
    ...checks('frame_versions', {
      number: isCount(t.number, 1),
      parent: sql`${t.parentId} IS NULL OR (${t.parentId} <> ${t.frameId} AND ${t.kind} NOT IN ('barycentric', 'toward-baseline'))`,
      kind: isOneOf(t.kind, FRAME_KINDS),
      at: isOneOf(t.at, ['event', 'origin']),
      definition: isJson(t.definition, 16_384),
      sites: sql`(${t.kind} IN ('toward-baseline', 'toward-horizon', 'comoving')) = (${t.fromSiteId} IS NOT NULL)
        AND (${t.kind} = 'toward-baseline') = (${t.toSiteId} IS NOT NULL)
        AND (${t.fromSiteId} IS NULL OR ${t.fromSiteId} IS NOT ${t.toSiteId})`,
      created_at: isUtc(t.createdAt),
      superseded_at: isUtc(t.supersededAt),
    }),
  ],
);
