import { integer, primaryKey, sqliteTable, text } from 'drizzle-orm/sqlite-core';
import { checks, isCount, isJson, isOneOf, isUnixMs } from './forms';
import { networks } from './networks';
import { sql } from 'drizzle-orm';
import { CHANGE_KINDS } from './words';

/** The number of a network's last change, and of the oldest that is still kept. Made with the network. */
export const changeHeads = sqliteTable(
  'change_heads',
  {
    networkId: integer('network_id')
      .primaryKey()
      .references(() => networks.id, { onDelete: 'restrict' }),
    /** 0 before the first. */
    last: integer().notNull().default(0),
    oldest: integer().notNull().default(1),
  },
  (t) => [...checks('change_heads', { last: isCount(t.last), oldest: sql`${t.oldest} BETWEEN 1 AND ${t.last} + 1` })],
);

/**
 * What each commit changed in a network: numbered 1, 2, 3, ... without a gap, one row a commit and kind. Who missed some reads what follows
 * its number; who asks for one that is no longer kept takes a fresh snapshot.
 */
export const changes = sqliteTable(
  'changes',
  {
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    number: integer().notNull(),
    atMs: integer('at_ms').notNull(),
    kind: text({ enum: CHANGE_KINDS }).notNull(),
    /** JSON: what a subscriber is told; of many records their range of ids, not the records. */
    body: text().notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.networkId, t.number] }),
    ...checks('changes', {
      number: isCount(t.number, 1),
      at_ms: isUnixMs(t.atMs),
      kind: isOneOf(t.kind, CHANGE_KINDS),
      body: isJson(t.body, 262_144),
    }),
  ],
);
