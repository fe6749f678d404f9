import { mkdirSync, mkdtempSync } from 'node:fs';
import { join } from 'node:path';
import { root } from '../../scripts/lib.mjs';

/** A new empty folder under test-results, which the next run of `npm test` clears. */
export function newFolder(name: string): string {
  const parent = join(root, 'test-results', 'tmp');
  mkdirSync(parent, { recursive: true });
  return mkdtempSync(join(parent, `${name}-`));
}
