import { sql } from 'drizzle-orm';
import { blob, check, index, integer, sqliteTable, text } from 'drizzle-orm/sqlite-core';

/**
 * What was done, by whom, to what: one row for each change, written in the change's own transaction. Rows are only added: the triggers
 * `audit_no_update` and `audit_no_delete` of the migration abort anything else, and each row's hash covers the row before it.
 */
export const audit = sqliteTable(
  'audit',
  {
    /** 1, 2, 3, ... without a gap. */
    seq: integer().primaryKey(),
    /** UTC, ISO 8601 with milliseconds, by the server's own clock. */
    at: text().notNull(),
    actorKind: text('actor_kind', { enum: ['person', 'site-key', 'server', 'command'] }).notNull(),
    /** Of a person, `people.id`; of a site key, `site_keys.id`; else null. */
    actorId: integer('actor_id'),
    /** What was done, as `noun:past`, such as `role:given`. */
    action: text().notNull(),
    /** The network that it belongs to, where it belongs to one: a network's coordinator sees those. */
    networkId: integer('network_id'),
    subjectKind: text('subject_kind').notNull(),
    subjectId: text('subject_id').notNull(),
    /** JSON object; no secret, no e-mail address. */
    details: text().notNull(),
    /** The id of the request in the log; null when there was none. */
    requestId: text('request_id'),
    /** SHA-256 of the row before; zeros in the first. */
    previousHash: blob('previous_hash', { mode: 'buffer' }).notNull(),
    /** SHA-256 over the row and `previous_hash`. */
    hash: blob({ mode: 'buffer' }).notNull(),
  },
  (table) => [
    // The trail is read newest first, by one of these or by none; seq ends each index by itself.
    index('audit_action').on(table.action),
    index('audit_actor').on(table.actorKind, table.actorId),
    index('audit_network').on(table.networkId),
    index('audit_subject').on(table.subjectKind, table.subjectId),
    check('audit_seq', sql`${table.seq} >= 1`),
    check('audit_at', sql`${table.at} GLOB '????-??-??T??:??:??.???Z'`),
    check('audit_actor_kind', sql`${table.actorKind} IN ('person', 'site-key', 'server', 'command')`),
    check('audit_actor_id', sql`(${table.actorId} IS NOT NULL) = (${table.actorKind} IN ('person', 'site-key'))`),
    check('audit_action_text', sql`${table.action} GLOB '[a-z]*:[a-z]*' AND length(${table.action}) <= 64`),
    check('audit_subject_kind', sql`length(${table.subjectKind}) BETWEEN 1 AND 64`),
    check('audit_subject_id', sql`length(${table.subjectId}) BETWEEN 1 AND 200`),
    check('audit_details', sql`json_type(${table.details}) = 'object' AND length(${table.details}) <= 16384`),
    check('audit_previous_hash', sql`length(${table.previousHash}) = 32`),
    check('audit_hash', sql`length(${table.hash}) = 32`),
  ],
);
