import { sql } from 'drizzle-orm';
import { index, integer, sqliteTable, text, uniqueIndex } from 'drizzle-orm/sqlite-core';
import { areTogether, checks, isCount, isFlag, isJson, isOneOf, isText, isUnixMs } from './forms';
import { networks } from './networks';
import { people } from './people';
import { JOB_STATES } from './words';

/**
 * Work that outlives a request: reprocessing, imports, time slides, backups, mails, deliveries. Whoever runs one holds a lease and renews it
 * with its progress; a lease that ran out is free to be taken again, from the checkpoint.
 */
export const jobs = sqliteTable(
  'jobs',
  {
    id: integer().primaryKey(),
    /** NULL for the deployment's own. */
    networkId: integer('network_id').references(() => networks.id, { onDelete: 'restrict' }),
    kind: text().notNull(),
    /** JSON: what is to be done. */
    body: text().notNull(),
    /** Of two with the same key one may wait or run; NULL where any number may. */
    onlyOne: text('only_one'),
    state: text({ enum: JOB_STATES }).notNull(),
    /** Smaller ones first. */
    priority: integer().notNull().default(0),
    /** Not before. */
    runAfterMs: integer('run_after_ms').notNull(),
    attempts: integer().notNull().default(0),
    leaseHolder: text('lease_holder'),
    leaseUntilMs: integer('lease_until_ms'),
    progressDone: integer('progress_done').notNull().default(0),
    /** NULL while unknown. */
    progressOf: integer('progress_of'),
    progressText: text('progress_text').notNull().default(''),
    /** JSON: where to go on. */
    checkpoint: text(),
    cancelRequested: integer('cancel_requested', { mode: 'boolean' }).notNull().default(false),
    /** JSON: what came of it, also of one that failed. */
    result: text(),
    createdAtMs: integer('created_at_ms').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
    startedAtMs: integer('started_at_ms'),
    endedAtMs: integer('ended_at_ms'),
  },
  (t) => [
    // The next one to take.
    index('jobs_waiting')
      .on(t.priority, t.id)
      .where(sql`state = 'waiting'`),
    // Those whose lease ran out.
    index('jobs_leases')
      .on(t.leaseUntilMs)
      .where(sql`state = 'running'`),
    // A network's list, newest first.
    index('jobs_of_network').on(t.networkId, t.id),
    uniqueIndex('jobs_only_one')
      .on(t.onlyOne)
      .where(sql`state IN ('waiting', 'running')`),
    ...checks('jobs', {
      kind: isText(t.kind, 64),
      body: isJson(t.body, 1_048_576),
      only_one: isText(t.onlyOne, 200),
      state: isOneOf(t.state, JOB_STATES),
      priority: sql`${t.priority} BETWEEN -1000 AND 1000`,
      run_after_ms: isUnixMs(t.runAfterMs),
      attempts: isCount(t.attempts),
      lease: sql`${areTogether(t.leaseHolder, t.leaseUntilMs)} AND (${t.state} = 'running') = (${t.leaseHolder} IS NOT NULL)`,
      lease_holder: isText(t.leaseHolder, 200),
      lease_until_ms: isUnixMs(t.leaseUntilMs),
      progress_done: isCount(t.progressDone),
      progress_of: isCount(t.progressOf),
      progress_text: isText(t.progressText, 500, 0),
      checkpoint: isJson(t.checkpoint, 16_777_216),
      cancel_requested: isFlag(t.cancelRequested),
      result: isJson(t.result, 16_777_216),
      created_at_ms: isUnixMs(t.createdAtMs),
      started_at_ms: isUnixMs(t.startedAtMs),
      ended_at_ms: isUnixMs(t.endedAtMs),
      ended: sql`(${t.state} IN ('done', 'failed', 'cancelled')) = (${t.endedAtMs} IS NOT NULL)`,
    }),
  ],
);
