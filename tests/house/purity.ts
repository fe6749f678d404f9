import { importsOf, type Tree } from './tree';

const FORBIDDEN: readonly (readonly [RegExp, string])[] = [
  [/\bDate\.now\b|\bnew Date\b|\bDate\(/, 'a clock'],
  [/\bperformance\b/, 'a clock'],
  [/\bMath\.random\b|\bgetRandomValues\b|\brandomUUID\b/, 'dice'],
];

/** Faults of `shared`: a clock, dice, a module of Node, or a package (zod in contract/ excepted). Specs may use the test tools. */
export function impurities(tree: Tree): string[] {
  const faults: string[] = [];
  for (const [path, text] of tree) {
    if (!path.startsWith('shared/') || !path.endsWith('.ts') || path.endsWith('.spec.ts')) continue;
    const code = withoutComments(text);
    for (const [pattern, what] of FORBIDDEN)
      if (pattern.test(code))
        faults.push(`${path} uses ${what} (${String(pattern.exec(code)?.[0])}): take the value as an argument instead.`);
    for (const name of importsOf(text)) {
      if (name.startsWith('.') || name.startsWith('#shared/') || (name === 'zod' && path.startsWith('shared/contract/'))) continue;
      faults.push(
        `${path} imports ${name}: the core uses no package and none of Node's modules; do it in backend/ and hand the numbers over.`,
      );
    }
  }
  return faults;
}

const withoutComments = (text: string): string => text.replace(/\/\*[\s\S]*?\*\/|\/\/.*$/gm, '');
