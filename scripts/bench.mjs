// npm run bench: the ratios of speed, each against a baseline measured beside it in the same run. TRIGGERS=5000000 for a larger log.
import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { buildBackend, buildFrontend, checkNode, installPackages, root, run } from './lib.mjs';

checkNode();
installPackages();
buildBackend();
buildFrontend(); // which the server does not start without
const { build } = await import('esbuild');
const folder = 'tests/bench';
await build({
  absWorkingDir: root,
  entryPoints: readdirSync(join(root, folder))
    .filter((file) => file.endsWith('.bench.ts'))
    .map((file) => `${folder}/${file}`),
  outdir: 'dist/bench',
  bundle: true,
  platform: 'node',
  target: 'node20',
  format: 'esm',
  packages: 'external',
  external: ['./scripts/lib.mjs'], // it knows the checkout by where it lies
  logLevel: 'warning',
});
for (const name of ['finder', 'command', 'lists', 'stream', 'lists-streamed', 'slider', 'desk-live', 'first-load'])
  run(process.execPath, [`dist/bench/${name}.bench.js`], { stdout: 1 });
