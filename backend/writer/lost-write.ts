import Database from 'better-sqlite3';

/**
 * Whether a fault means that nobody knows what is on disk: an I/O error, such as one of fsync, which may have dropped what it was to keep.
 * After one the process must not go on: a second try may succeed over a hole.
 */
export function isLostWrite(fault: unknown): boolean {
  if (!(fault instanceof Error)) return false;
  if (fault instanceof Database.SqliteError && fault.code.startsWith('SQLITE_IOERR')) return true;
  return isLostWrite(fault.cause); // the query builder wraps what the database throws
}
