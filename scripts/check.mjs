// npm run check: the types of every room, to the end even when one fails.
import { bin, checkNode, installPackages, tryRun } from './lib.mjs';

checkNode();
installPackages();
const projects = [
  'tsconfig.json',
  'shared/tsconfig.pure.json', // the core without its specs, whose test tools bring in Node's types
  'shared/tsconfig.json',
  'schema/tsconfig.json',
  'backend/tsconfig.json',
  'frontend/tsconfig.json',
  'tests/tsconfig.json',
];
const [node, tsc] = bin('typescript/bin/tsc');
const failed = projects.filter((project) => tryRun(node, [tsc, '-p', project]) !== 0);
if (failed.length > 0) console.error(`The types do not hold in ${failed.join(', ')}.`);
process.exit(failed.length === 0 ? 0 : 1);
