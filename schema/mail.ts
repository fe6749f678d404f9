import { sql } from 'drizzle-orm';
import { check, integer, sqliteTable, text } from 'drizzle-orm/sqlite-core';

/** The mails that the demo's own mail server took in place of sending them; empty wherever mail goes out to a real one. */
export const keptMails = sqliteTable(
  'kept_mails',
  {
    id: integer().primaryKey(),
    receivedAt: text('received_at').notNull(),
    sender: text().notNull(),
    recipient: text().notNull(),
    subject: text().notNull(),
    text: text().notNull(),
  },
  (table) => [
    check('kept_mails_received_at', sql`${table.receivedAt} GLOB '????-??-??T??:??:??.???Z'`),
    check('kept_mails_sender', sql`length(${table.sender}) BETWEEN 1 AND 320`),
    check('kept_mails_recipient', sql`length(${table.recipient}) BETWEEN 1 AND 320`),
    check('kept_mails_subject', sql`length(${table.subject}) <= 998`),
    check('kept_mails_text', sql`length(${table.text}) <= 65536`),
  ],
);
