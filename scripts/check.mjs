// npm run check: the types of every room, to the end even when one fails.
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { availableParallelism } from 'node:os';
import { bin, checkNode, installPackages, root } from './lib.mjs';

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
const failed = [];
const left = [...projects];
/** Takes projects one after another; each compiler uses one core, so as many work side by side as there are cores. */
async function work() {
  for (let project = left.shift(); project; project = left.shift()) {
    const compiler = spawn(node, [tsc, '-p', project], { cwd: root, stdio: ['ignore', 'inherit', 'inherit'] });
    const [code] = await once(compiler, 'exit');
    if (code !== 0) failed.push(project);
  }
}
await Promise.all(Array.from({ length: availableParallelism() }, work));
if (failed.length > 0) console.error(`The types do not hold in ${failed.join(', ')}.`);
process.exit(failed.length === 0 ? 0 : 1);
