import { chmodSync, closeSync, fsyncSync, openSync, renameSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';

const OWNER_ONLY_FILE = 0o600;

/**
 * Keeps a small file such that a power cut at any point leaves it as it was or as it is to be, and what is kept when this returns lasts: the
 * whole is written beside it and synced, then takes its name, and the folder is synced too. It belongs to its owner alone.
 *
 * @param file absolute path, in a folder that exists
 * @throws the system's fault where it cannot be written
 */
export function keepFile(file: string, text: string): void {
  const next = `${file}.${process.pid}.new`;
  writeFileSync(next, text, { mode: OWNER_ONLY_FILE, flush: true });
  chmodSync(next, OWNER_ONLY_FILE);
  renameSync(next, file);
  const folder = openSync(dirname(file), 'r');
  try {
    fsyncSync(folder);
  } finally {
    closeSync(folder);
  }
}
