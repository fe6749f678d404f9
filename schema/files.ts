import { integer, sqliteTable, text } from 'drizzle-orm/sqlite-core';
import { checks, isCount, isSha256, isText, isUtc } from './forms';

/** The files of the data folder (logs as uploaded, attachments), each named by its content: the same file twice is kept once. */
export const storedFiles = sqliteTable(
  'stored_files',
  {
    sha256: text().primaryKey(),
    bytes: integer().notNull(),
    /** As found in the content, not as its sender called it. */
    mediaType: text('media_type').notNull(),
    createdAt: text('created_at').notNull(),
  },
  (t) => [
    ...checks('stored_files', {
      sha256: isSha256(t.sha256),
      bytes: isCount(t.bytes),
      media_type: isText(t.mediaType, 100),
      created_at: isUtc(t.createdAt),
    }),
  ],
);
