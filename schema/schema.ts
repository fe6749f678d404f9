import { sql } from 'drizzle-orm';
import { check, integer, sqliteTable, text } from 'drizzle-orm/sqlite-core';

/** The one row that says what this database is: when it was made, and by which version of the program. */
export const deployment = sqliteTable(
  'deployment',
  {
    /** Always 1, which keeps it one row. */
    row: integer().primaryKey(),
    /** A random UUID that tells this deployment from every other. */
    id: text().notNull(),
    /** UTC, ISO 8601 with milliseconds, by the server's own clock. */
    createdAt: text('created_at').notNull(),
    /** The version of package.json that made the database. */
    createdWith: text('created_with').notNull(),
  },
  (table) => [
    check('deployment_one_row', sql`${table.row} = 1`),
    check('deployment_id', sql`length(${table.id}) = 36`),
    check('deployment_created_at', sql`${table.createdAt} GLOB '????-??-??T??:??:??.???Z'`),
    check('deployment_created_with', sql`length(${table.createdWith}) BETWEEN 1 AND 64`),
  ],
);

export * from './people';
export * from './credentials';
export * from './networks';
export * from './clocks';
export * from './tables';
export * from './frames';
export * from './files';
export * from './jobs';
export * from './intake';
export * from './events';
export * from './coincidences';
export * from './candidates';
export * from './changes';
export * from './wishes';
export * from './machines';
export * from './audit';
export * from './mail';
