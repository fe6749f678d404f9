import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { root } from '../../scripts/lib.mjs';

/** Texts by their path from the root, with forward slashes. The rules take one, so that a test can hand them a faulty house. */
export type Tree = ReadonlyMap<string, string>;

const NOT_OURS = new Set(['node_modules', 'dist', '.angular', '.git', 'data', 'test-results', 'schema/migrations']);
const TEXT = /\.(?:ts|mjs|js|json|scss|css|html|md|svg)$|^run$/;

/** Every text file below a folder, without what is installed, built or stored. */
export function readTree(folder = ''): Tree {
  const tree = new Map<string, string>();
  const visit = (path: string): void => {
    for (const entry of readdirSync(join(root, path), { withFileTypes: true })) {
      const below = path === '' ? entry.name : `${path}/${entry.name}`;
      if (entry.isDirectory() && !NOT_OURS.has(below)) visit(below);
      else if (entry.isFile() && TEXT.test(entry.name)) tree.set(below, readFileSync(join(root, below), 'utf8'));
    }
  };
  visit(folder);
  return tree;
}

/** A tree of the given files. */
export const treeOf = (files: Readonly<Record<string, string>>): Tree => new Map(Object.entries(files));

/** The module names of a TypeScript or JavaScript text: import, export from, import() and side effects. */
export function importsOf(text: string): string[] {
  const found = text.matchAll(/(?:^|[\s;])(?:import|export)\s+(?:[^'"`;]*?\sfrom\s+)?['"]([^'"]+)['"]|\bimport\(\s*['"]([^'"]+)['"]/g);
  return [...found].map((match) => match[1] ?? match[2] ?? '');
}
