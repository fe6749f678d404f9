import { chmodSync, closeSync, openSync } from 'node:fs';
import { join } from 'node:path';
import Database from 'better-sqlite3';

const OWNER_ONLY_FILE = 0o600;

/** A data folder that is held for this process alone. */
export interface DataLock {
  readonly release: () => void;
}

/**
 * Takes the lock of a data folder, which the system gives back when the process ends, however it ends.
 *
 * It is the exclusive lock of an empty SQLite file. The file stays: whoever took it away could take it from under a server that has just
 * locked it.
 *
 * @param dataDir absolute path of a folder that exists
 * @returns the lock, or undefined where another process holds it
 * @throws the system's or SQLite's fault where the file cannot be made or locked
 */
export function lockData(dataDir: string): DataLock | undefined {
  const file = join(dataDir, 'skewline.lock');
  closeSync(openSync(file, 'a', OWNER_ONLY_FILE)); // before SQLite, whose faults do not name what the system said
  chmodSync(file, OWNER_ONLY_FILE);
  const holder = new Database(file, { timeout: 0 });
  try {
    holder.exec('BEGIN EXCLUSIVE');
  } catch (fault) {
    holder.close();
    if (fault instanceof Database.SqliteError && fault.code.startsWith('SQLITE_BUSY')) return undefined;
    throw fault;
  }
  return { release: () => void holder.close() };
}
