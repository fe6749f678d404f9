import { sql } from 'drizzle-orm';
import { blob, index, integer, sqliteTable, text } from 'drizzle-orm/sqlite-core';
import { checks, isCount, isFlag, isJson, isOneOf, isSha256, isText, isUnixMs, isUtc } from './forms';
import { networks } from './networks';
import { people } from './people';

/** An address of another program that is told of a network's changes. */
export const webhooks = sqliteTable(
  'webhooks',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    url: text().notNull(),
    /** JSON: which kinds of changes, and above which fold or amplitude. */
    filter: text().notNull(),
    /** What deliveries are signed with, under the deployment's own secret. */
    sealedSecret: blob('sealed_secret', { mode: 'buffer' }).notNull(),
    isActive: integer('is_active', { mode: 'boolean' }).notNull(),
    /** The last change that was looked at, so that none is told twice or missed. */
    toldToChange: integer('told_to_change').notNull(),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    index('webhooks_of_network').on(t.networkId),
    ...checks('webhooks', {
      url: sql`${isText(t.url, 2_000)} AND (${t.url} GLOB 'https://?*' OR ${t.url} GLOB 'http://?*')`,
      filter: isJson(t.filter, 16_384),
      sealed_secret: sql`octet_length(${t.sealedSecret}) BETWEEN 32 AND 512`,
      is_active: isFlag(t.isActive),
      told_to_change: isCount(t.toldToChange),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
    }),
  ],
);

/** Each message to a webhook and what was answered. */
export const webhookDeliveries = sqliteTable(
  'webhook_deliveries',
  {
    id: integer().primaryKey(),
    webhookId: integer('webhook_id')
      .notNull()
      .references(() => webhooks.id, { onDelete: 'cascade' }),
    changeNumber: integer('change_number').notNull(),
    /** JSON, as it is sent. */
    body: text().notNull(),
    state: text({ enum: ['waiting', 'delivered', 'failed'] }).notNull(),
    attempts: integer().notNull().default(0),
    nextAtMs: integer('next_at_ms').notNull(),
    /** The last answer's status; NULL where there was none. */
    status: integer(),
    /** The beginning of the last answer, or why there was none. */
    answer: text().notNull().default(''),
    createdAtMs: integer('created_at_ms').notNull(),
  },
  (t) => [
    // The next to send.
    index('webhook_deliveries_waiting')
      .on(t.nextAtMs)
      .where(sql`state = 'waiting'`),
    // A webhook's list, newest first.
    index('webhook_deliveries_of_webhook').on(t.webhookId, t.id),
    ...checks('webhook_deliveries', {
      change_number: isCount(t.changeNumber, 1),
      body: isJson(t.body, 262_144),
      state: isOneOf(t.state, ['waiting', 'delivered', 'failed']),
      attempts: isCount(t.attempts),
      next_at_ms: isUnixMs(t.nextAtMs),
      status: sql`${t.status} BETWEEN 100 AND 599`,
      answer: isText(t.answer, 4_096, 0),
      created_at_ms: isUnixMs(t.createdAtMs),
    }),
  ],
);

/** Each backup that was taken, and whether it is still there. */
export const backups = sqliteTable(
  'backups',
  {
    id: integer().primaryKey(),
    /** Name within the backup folder; no path. */
    fileName: text('file_name').notNull(),
    bytes: integer().notNull(),
    sha256: text().notNull(),
    /** JSON: counts and digests of what it holds, which a restore is compared with. */
    contents: text().notNull(),
    why: text({ enum: ['by-hand', 'schedule', 'before-upgrade'] }).notNull(),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
    /** When a copy was put elsewhere; NULL for none. */
    copiedAt: text('copied_at'),
    /** When it was removed by the rule that keeps them. */
    removedAt: text('removed_at'),
  },
  (t) => [
    ...checks('backups', {
      file_name: sql`${isText(t.fileName, 255)} AND ${t.fileName} NOT GLOB '*/*'`,
      bytes: isCount(t.bytes),
      sha256: isSha256(t.sha256),
      contents: isJson(t.contents, 1_048_576),
      why: isOneOf(t.why, ['by-hand', 'schedule', 'before-upgrade']),
      created_at: isUtc(t.createdAt),
      copied_at: isUtc(t.copiedAt),
      removed_at: isUtc(t.removedAt),
    }),
  ],
);
