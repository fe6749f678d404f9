import { posix } from 'node:path';
import { importsOf, type Tree } from './tree';

/** Started by a name that no import writes: by Node, a browser, or a tool's configuration. */
const ENTRIES = [
  /^backend\/(?:main|skewline|demo-feed)\.ts$/,
  /^backend\/workers\/[^/]+\.worker\.ts$/,
  /^frontend\/src\/main\.ts$/,
  /(?:^|\/)[^/]+\.config\.ts$/,
  /\.d\.ts$/,
  /^tests\/support\/(?:build|random)\.ts$/,
  /^tests\/faults\/power-cut-writer\.ts$/,
  /^tests\/.*\.(?:test|e2e|bench|long)\.ts$/,
  /\.spec\.ts$/,
];

/** Files of the rooms that nothing imports but their own spec, and that nothing starts. */
export function deadFiles(tree: Tree): string[] {
  const used = new Set<string>();
  for (const [path, text] of tree) {
    if (!path.endsWith('.ts')) continue;
    for (const name of importsOf(text)) {
      const base = name.startsWith('#') ? name.slice(1) : name.startsWith('.') ? posix.join(posix.dirname(path), name) : '';
      if (base !== '' && path !== `${base}.spec.ts`) used.add(`${base}.ts`);
    }
  }
  return [...tree.keys()]
    .filter((path) => /^(?:shared|schema|backend|frontend|tests)\//.test(path) && path.endsWith('.ts'))
    .filter((path) => !used.has(path) && !ENTRIES.some((entry) => entry.test(path)))
    .map((path) => `${path} is imported by nothing but its own spec: delete it, or import it where it is needed.`);
}
