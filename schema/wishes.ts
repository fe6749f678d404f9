import { index, integer, real, sqliteTable, text, uniqueIndex } from 'drizzle-orm/sqlite-core';
import { rules } from './coincidences';
import { checks, isCount, isFinite, isFlag, isJson, isText, isUtc } from './forms';
import { networks } from './networks';
import { people } from './people';

/** How a person likes things: theme, time scale, shortcuts, which mails and when. */
export const preferences = sqliteTable(
  'preferences',
  {
    personId: integer('person_id')
      .primaryKey()
      .references(() => people.id, { onDelete: 'restrict' }),
    /** JSON object. */
    body: text().notNull(),
    version: integer().notNull().default(1),
  },
  (t) => [...checks('preferences', { body: isJson(t.body, 65_536), version: isCount(t.version, 1) })],
);

/** A page's filter, order and columns, kept by a person under a name. */
export const savedViews = sqliteTable(
  'saved_views',
  {
    id: integer().primaryKey(),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    page: text().notNull(),
    name: text().notNull(),
    /** JSON object. */
    body: text().notNull(),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
  },
  (t) => [
    // A person's list on a page.
    uniqueIndex('saved_views_name').on(t.personId, t.networkId, t.page, t.name),
    ...checks('saved_views', {
      page: isText(t.page, 64),
      name: isText(t.name, 200),
      body: isJson(t.body, 65_536),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
    }),
  ],
);

/** Coincidences of which a person wants to be told by mail. */
export const coincidenceAlerts = sqliteTable(
  'coincidence_alerts',
  {
    id: integer().primaryKey(),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    /** NULL for every rule. */
    ruleId: integer('rule_id').references(() => rules.id, { onDelete: 'restrict' }),
    leastFold: integer('least_fold').notNull(),
    leastAmplitude: real('least_amplitude'),
    isActive: integer('is_active', { mode: 'boolean' }).notNull(),
    /** The last change that was looked at, so that none is told twice or missed. */
    toldToChange: integer('told_to_change').notNull(),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
  },
  (t) => [
    index('coincidence_alerts_of_network').on(t.networkId),
    index('coincidence_alerts_of_person').on(t.personId),
    ...checks('coincidence_alerts', {
      least_fold: isCount(t.leastFold, 2),
      least_amplitude: isFinite(t.leastAmplitude),
      is_active: isFlag(t.isActive),
      told_to_change: isCount(t.toldToChange),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
    }),
  ],
);
