import { type Tree } from './tree';

/** Faults of the scripts: one without its line in DEVELOPERS.md, or a line about one that is gone. */
export function undocumentedScripts(tree: Tree): string[] {
  const { scripts } = JSON.parse(tree.get('package.json') ?? '{}') as { scripts: Record<string, string> };
  const table = [...(tree.get('DEVELOPERS.md') ?? '').matchAll(/^\| `npm (?:run )?(?:-s )?([a-z:]+)[^`]*` /gm)].map(
    (match) => match[1] ?? '',
  );
  return [
    ...Object.keys(scripts)
      .filter((name) => !table.includes(name))
      .map((name) => `package.json has the script ${name} and DEVELOPERS.md no line for it: add one to its table of scripts.`),
    ...table
      .filter((name) => !(name in scripts))
      .map((name) => `DEVELOPERS.md has a line for the script ${name}, which package.json lacks: take the line away.`),
  ];
}
