import { existsSync } from 'node:fs';
import { dirname, join } from 'node:path';

// The one file that knows where code and data lie. Bundled code stands in dist/backend and the sources in backend/, so the root is looked
// for upwards from wherever this runs.
function rootAbove(folder: string): string {
  if (existsSync(join(folder, 'package.json'))) return folder;
  const parent = dirname(folder);
  if (parent === folder) throw new Error(`no package.json above ${import.meta.dirname}`);
  return rootAbove(parent);
}

/** The folder of package.json. */
export const root = rootAbove(import.meta.dirname);

/** The generated migrations, in their order. */
export const migrationsFolder = join(root, 'schema', 'migrations');

/** The built front end: index.html and what it loads. */
export const frontendFolder = join(root, 'dist', 'frontend', 'browser');

/** A built worker thread by its name: from the sources, as tests run them, it is the built one too. */
export const workerFile = (name: string): string => join(root, 'dist', 'backend', 'workers', `${name}.worker.js`);

/** The built process that streams the demo's sites. */
export const demoFeedFile = join(root, 'dist', 'backend', 'demo-feed.js');
