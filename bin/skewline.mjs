#!/usr/bin/env node
// The skewline command inside a checkout: installs and builds what is missing, all of it told on stderr, then runs the built command in
// this process, so that stdout, signals and the exit status are its own.
import { buildBackend, checkNode, install, installPackages } from '../scripts/lib.mjs';

checkNode();
// Reconciling needs no database; people are kept in one.
if (process.argv[2] === 'user') install();
else installPackages();
buildBackend();
process.setSourceMapsEnabled(true);
await import('../dist/backend/skewline.js');
