import { sql } from 'drizzle-orm';
import { blob, index, integer, sqliteTable, text, uniqueIndex } from 'drizzle-orm/sqlite-core';
import { checks, isCount, isHashBytes, isJson, isOneOf, isText, isUtc } from './forms';
import { people } from './people';

/** The tokens by which a person's programs use the API: shown once, kept as a hash. */
export const accessTokens = sqliteTable(
  'access_tokens',
  {
    id: integer().primaryKey(),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    label: text().notNull(),
    /** Its first characters, by which its holder knows it again; they are no secret. */
    prefix: text().notNull(),
    hash: blob({ mode: 'buffer' }).notNull(),
    /** JSON: what it may do, never more than its person. */
    scope: text().notNull(),
    createdAt: text('created_at').notNull(),
    expiresAt: text('expires_at').notNull(),
    /** Exact to a minute, so that a busy token does not write at each use. */
    lastUsedAt: text('last_used_at'),
    revokedAt: text('revoked_at'),
  },
  (t) => [
    // Each request with a token looks it up.
    uniqueIndex('access_tokens_hash').on(t.hash),
    index('access_tokens_of_person').on(t.personId),
    ...checks('access_tokens', {
      label: isText(t.label, 400),
      prefix: isText(t.prefix, 16, 8),
      hash_length: isHashBytes(t.hash),
      scope: isJson(t.scope, 4_096),
      created_at: isUtc(t.createdAt),
      expires_at: isUtc(t.expiresAt),
      last_used_at: isUtc(t.lastUsedAt),
      revoked_at: isUtc(t.revokedAt),
    }),
  ],
);

/** A person's second factors: a secret of one-time codes, or a passkey. */
export const secondFactors = sqliteTable(
  'second_factors',
  {
    id: integer().primaryKey(),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    kind: text({ enum: ['totp', 'passkey'] }).notNull(),
    label: text().notNull(),
    /** The secret of one-time codes, under the deployment's own secret. */
    sealedSecret: blob('sealed_secret', { mode: 'buffer' }),
    /** The last time step that was used, so that no code works twice. */
    lastStep: integer('last_step'),
    /** Of a passkey: its id, public key, and counter. */
    credentialId: blob('credential_id', { mode: 'buffer' }),
    publicKey: blob('public_key', { mode: 'buffer' }),
    counter: integer(),
    createdAt: text('created_at').notNull(),
    /** NULL until its first use has shown that it works. */
    confirmedAt: text('confirmed_at'),
    lastUsedAt: text('last_used_at'),
    removedAt: text('removed_at'),
  },
  (t) => [
    // What a sign-in must ask for.
    index('second_factors_of_person').on(t.personId),
    uniqueIndex('second_factors_credential')
      .on(t.credentialId)
      .where(sql`credential_id IS NOT NULL`),
    ...checks('second_factors', {
      kind: isOneOf(t.kind, ['totp', 'passkey']),
      label: isText(t.label, 400),
      of_kind: sql`(${t.kind} = 'totp') = (${t.sealedSecret} IS NOT NULL) AND (${t.kind} = 'passkey') = (${t.credentialId} IS NOT NULL)
        AND (${t.kind} = 'passkey') = (${t.publicKey} IS NOT NULL) AND (${t.kind} = 'passkey') = (${t.counter} IS NOT NULL)`,
      last_step: isCount(t.lastStep),
      counter: isCount(t.counter),
      created_at: isUtc(t.createdAt),
      confirmed_at: isUtc(t.confirmedAt),
      last_used_at: isUtc(t.lastUsedAt),
      removed_at: isUtc(t.removedAt),
    }),
  ],
);

/** Codes that take the place of a second factor once each. */
export const recoveryCodes = sqliteTable(
  'recovery_codes',
  {
    id: integer().primaryKey(),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    hash: blob({ mode: 'buffer' }).notNull(),
    createdAt: text('created_at').notNull(),
    /** When it was used, or made void by newer ones. */
    usedAt: text('used_at'),
  },
  (t) => [
    uniqueIndex('recovery_codes_hash').on(t.hash),
    index('recovery_codes_of_person').on(t.personId),
    ...checks('recovery_codes', { hash_length: isHashBytes(t.hash), created_at: isUtc(t.createdAt), used_at: isUtc(t.usedAt) }),
  ],
);
