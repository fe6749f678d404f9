import { sql } from 'drizzle-orm';
import { blob, check, index, integer, sqliteTable, text, uniqueIndex, type AnySQLiteColumn } from 'drizzle-orm/sqlite-core';
import { networks, sites } from './networks';

/** Instants of the server's own clock: UTC, ISO 8601 text with milliseconds, so that text order is time order. */
const isInstant = (column: AnySQLiteColumn) => sql`${column} GLOB '????-??-??T??:??:??.???Z'`;
const isInstantOrNull = (column: AnySQLiteColumn) => sql`${column} IS NULL OR ${column} GLOB '????-??-??T??:??:??.???Z'`;

/** SHA-256 of a secret of 128 random bits or more: what the database keeps in its place. */
const isHash = (column: AnySQLiteColumn) => sql`length(${column}) = 32`;

/** Everyone who was ever let in. Nobody is deleted, since the audit trail and signatures name them; who leaves is disabled. */
export const people = sqliteTable(
  'people',
  {
    id: integer().primaryKey(),
    /** In lower case, which makes it unique whatever was typed. */
    email: text().notNull(),
    name: text().notNull(),
    /** Argon2id in the PHC string format; null until the invitation is accepted. */
    passwordHash: text('password_hash'),
    passwordSetAt: text('password_set_at'),
    createdAt: text('created_at').notNull(),
    disabledAt: text('disabled_at'),
    /** Counts the changes of name and state; who edits an older one is refused. */
    version: integer().notNull().default(1),
  },
  (table) => [
    uniqueIndex('people_email').on(table.email), // sign-in looks up by it
    check('people_email_text', sql`length(${table.email}) BETWEEN 3 AND 254 AND ${table.email} = lower(${table.email})`),
    check('people_name', sql`length(${table.name}) BETWEEN 1 AND 200`),
    check('people_password', sql`(${table.passwordHash} IS NULL) = (${table.passwordSetAt} IS NULL)`),
    check('people_password_hash', sql`${table.passwordHash} IS NULL OR ${table.passwordHash} GLOB '$argon2id$*'`),
    check('people_created_at', isInstant(table.createdAt)),
    check('people_password_set_at', isInstantOrNull(table.passwordSetAt)),
    check('people_disabled_at', isInstantOrNull(table.disabledAt)),
    check('people_version', sql`${table.version} >= 1`),
  ],
);

/**
 * Who holds which role where, and from when to when. A coordinator without a network coordinates the whole deployment; an operator holds
 * one site a row; every other role holds in one network. A row is never deleted: taking a role away dates its end.
 */
export const roles = sqliteTable(
  'roles',
  {
    id: integer().primaryKey(),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id),
    role: text({ enum: ['coordinator', 'analyst', 'reviewer', 'operator'] }).notNull(),
    networkId: integer('network_id').references((): AnySQLiteColumn => networks.id),
    siteId: integer('site_id').references((): AnySQLiteColumn => sites.id),
    givenAt: text('given_at').notNull(),
    /** Null when nobody gave it: the first coordinator, and the demo. */
    givenBy: integer('given_by').references(() => people.id),
    expiresAt: text('expires_at'),
    takenAt: text('taken_at'),
    takenBy: integer('taken_by').references(() => people.id),
    version: integer().notNull().default(1),
  },
  (table) => [
    // Each request asks for the roles of its person.
    index('roles_person').on(table.personId),
    // The same role in the same place is held once at a time.
    uniqueIndex('roles_held_once')
      .on(table.personId, table.role, sql`coalesce(${table.networkId}, 0)`, sql`coalesce(${table.siteId}, 0)`)
      .where(sql`${table.takenAt} IS NULL`),
    // A network's or site's page lists who works there.
    index('roles_network').on(table.networkId),
    index('roles_site').on(table.siteId),
    check('roles_role', sql`${table.role} IN ('coordinator', 'analyst', 'reviewer', 'operator')`),
    check('roles_network_given', sql`${table.networkId} IS NOT NULL OR ${table.role} = 'coordinator'`),
    check('roles_site_given', sql`(${table.siteId} IS NOT NULL) = (${table.role} = 'operator')`),
    check('roles_given_at', isInstant(table.givenAt)),
    check('roles_expires_at', isInstantOrNull(table.expiresAt)),
    check('roles_taken_at', isInstantOrNull(table.takenAt)),
    check('roles_version', sql`${table.version} >= 1`),
  ],
);

/** One sign-in in one browser, and the family of its refresh tokens. Ending the row ends all that was issued under it. */
export const sessions = sqliteTable(
  'sessions',
  {
    id: integer().primaryKey(),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id),
    createdAt: text('created_at').notNull(),
    lastUsedAt: text('last_used_at').notNull(),
    /** Past this instant no refresh renews it. */
    expiresAt: text('expires_at').notNull(),
    endedAt: text('ended_at'),
    endReason: text('end_reason', { enum: ['signed-out', 'ended-elsewhere', 'new-password', 'disabled', 'token-used-twice'] }),
    /** What the browser called itself, cut, so that its person knows it again. */
    browser: text().notNull(),
  },
  (table) => [
    index('sessions_person').on(table.personId), // a person's list, and ending all of them
    index('sessions_expiry').on(table.expiresAt), // the clearing of old ones
    check('sessions_created_at', isInstant(table.createdAt)),
    check('sessions_last_used_at', isInstant(table.lastUsedAt)),
    check('sessions_expires_at', isInstant(table.expiresAt)),
    check('sessions_ended_at', isInstantOrNull(table.endedAt)),
    check('sessions_end', sql`(${table.endedAt} IS NULL) = (${table.endReason} IS NULL)`),
    check(
      'sessions_end_reason',
      sql`${table.endReason} IN ('signed-out', 'ended-elsewhere', 'new-password', 'disabled', 'token-used-twice')`,
    ),
    check('sessions_browser', sql`length(${table.browser}) <= 200`),
  ],
);

/** Every refresh token that was issued, used ones too: a second use is how a stolen one shows. */
export const refreshTokens = sqliteTable(
  'refresh_tokens',
  {
    id: integer().primaryKey(),
    sessionId: integer('session_id')
      .notNull()
      .references(() => sessions.id, { onDelete: 'cascade' }),
    hash: blob({ mode: 'buffer' }).notNull(),
    issuedAt: text('issued_at').notNull(),
    expiresAt: text('expires_at').notNull(),
    usedAt: text('used_at'),
  },
  (table) => [
    uniqueIndex('refresh_tokens_hash').on(table.hash),
    index('refresh_tokens_session').on(table.sessionId), // the cascade, and the clearing of old ones
    check('refresh_tokens_hash_length', isHash(table.hash)),
    check('refresh_tokens_issued_at', isInstant(table.issuedAt)),
    check('refresh_tokens_expires_at', isInstant(table.expiresAt)),
    check('refresh_tokens_used_at', isInstantOrNull(table.usedAt)),
  ],
);

/** The tokens of links that were sent by mail: each for one purpose, one person and one use. */
export const mailedTokens = sqliteTable(
  'mailed_tokens',
  {
    id: integer().primaryKey(),
    purpose: text({ enum: ['invitation', 'reset'] }).notNull(),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id),
    hash: blob({ mode: 'buffer' }).notNull(),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id),
    expiresAt: text('expires_at').notNull(),
    /** When it was used, or made void by a newer one. */
    usedAt: text('used_at'),
  },
  (table) => [
    uniqueIndex('mailed_tokens_hash').on(table.hash),
    index('mailed_tokens_person').on(table.personId), // a newer one makes the older void
    check('mailed_tokens_purpose', sql`${table.purpose} IN ('invitation', 'reset')`),
    check('mailed_tokens_hash_length', isHash(table.hash)),
    check('mailed_tokens_created_at', isInstant(table.createdAt)),
    check('mailed_tokens_expires_at', isInstant(table.expiresAt)),
    check('mailed_tokens_used_at', isInstantOrNull(table.usedAt)),
  ],
);

/** The keys by which sites send their triggers: of a kind of their own, each for one site. */
export const siteKeys = sqliteTable(
  'site_keys',
  {
    id: integer().primaryKey(),
    siteId: integer('site_id')
      .notNull()
      .references((): AnySQLiteColumn => sites.id),
    /** What its maker calls it. */
    label: text().notNull(),
    /** Its first characters, by which its holder knows it again; they are no secret. */
    prefix: text().notNull(),
    hash: blob({ mode: 'buffer' }).notNull(),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id),
    /** Exact to a minute, so that a busy key does not write at each use. */
    lastUsedAt: text('last_used_at'),
    revokedAt: text('revoked_at'),
    revokedBy: integer('revoked_by').references(() => people.id),
  },
  (table) => [
    uniqueIndex('site_keys_hash').on(table.hash),
    index('site_keys_site').on(table.siteId), // a site's list
    check('site_keys_label', sql`length(${table.label}) BETWEEN 1 AND 100`),
    check('site_keys_prefix', sql`length(${table.prefix}) = 12`),
    check('site_keys_hash_length', isHash(table.hash)),
    check('site_keys_created_at', isInstant(table.createdAt)),
    check('site_keys_last_used_at', isInstantOrNull(table.lastUsedAt)),
    check('site_keys_revoked_at', isInstantOrNull(table.revokedAt)),
  ],
);

/** Attempts that failed, by account and by network address, so that a restart forgives nobody. */
export const failedAttempts = sqliteTable(
  'failed_attempts',
  {
    /** SHA-256 of the kind and of the account's e-mail or the network address: neither is kept as it is. */
    subject: blob({ mode: 'buffer' }).primaryKey(),
    failures: integer().notNull(),
    lastAt: text('last_at').notNull(),
    blockedUntil: text('blocked_until').notNull(),
  },
  (table) => [
    index('failed_attempts_last_at').on(table.lastAt), // the clearing of old ones
    check('failed_attempts_subject', isHash(table.subject)),
    check('failed_attempts_failures', sql`${table.failures} >= 1`),
    check('failed_attempts_last_at_text', isInstant(table.lastAt)),
    check('failed_attempts_blocked_until', isInstant(table.blockedUntil)),
  ],
);
