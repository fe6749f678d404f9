import { importsOf, type Tree } from './tree';

const NOT_IMPORTED = 'not imported: ';

/**
 * Faults of the dependencies: one without its line of reason in DEVELOPERS.md, one that nothing imports and whose line does not say so, a
 * line that is out of date, or a version that is not pinned.
 */
export function unexplainedDependencies(tree: Tree): string[] {
  const { dependencies, devDependencies } = JSON.parse(tree.get('package.json') ?? '{}') as Record<string, Record<string, string>>;
  const versions = { ...dependencies, ...devDependencies };
  const reasons = new Map(
    [...(tree.get('DEVELOPERS.md') ?? '').matchAll(/^\| `((?:@[a-z0-9-]+\/)?[a-z0-9.-]+)` +\| (.*?) *\|$/gm)].map((m) => [
      m[1] ?? '',
      m[2] ?? '',
    ]),
  );
  const imported = importedPackages(tree);
  return [
    ...Object.entries(versions).flatMap(([name, version]) => {
      const reason = reasons.get(name);
      if (!/^\d+\.\d+\.\d+(?:-[\w.]+)?$/.test(version)) return [`package.json asks for ${name} ${version}: pin one exact version.`];
      if (reason === undefined)
        return [`${name} has no reason in DEVELOPERS.md: add its line to the table of dependencies, or uninstall it.`];
      const said = reason.startsWith(NOT_IMPORTED);
      if (!imported.has(name) && !said)
        return [`${name} is imported nowhere: uninstall it, or begin its reason in DEVELOPERS.md with '${NOT_IMPORTED}'.`];
      if (imported.has(name) && said) return [`${name} is imported now: take '${NOT_IMPORTED}' out of its reason in DEVELOPERS.md.`];
      return [];
    }),
    ...[...reasons.keys()]
      .filter((name) => !(name in versions))
      .map((name) => `DEVELOPERS.md gives a reason for ${name}, which package.json lacks: take the line away.`),
  ];
}

function importedPackages(tree: Tree): Set<string> {
  const names = new Set<string>();
  for (const [path, text] of tree) {
    const found = /\.(?:ts|mjs|js)$/.test(path) ? importsOf(text) : path.endsWith('.scss') ? sassUses(text) : [];
    for (const name of found) {
      const [first = '', second = ''] = name.split('/');
      names.add(first.startsWith('@') ? `${first}/${second}` : first);
    }
  }
  return names;
}

const sassUses = (text: string): string[] => [...text.matchAll(/@use '([^']+)'/g)].map((match) => match[1] ?? '');
