#!/usr/bin/env node
// The skewline command inside a checkout: installs and builds what is missing, all of it told on stderr, then runs the built command in
// this process, so that stdout, signals and the exit status are its own.
import { buildBackend, checkNode, installPackages } from '../scripts/lib.mjs';

checkNode();
installPackages();
buildBackend();
process.setSourceMapsEnabled(true);
await import('../dist/backend/skewline.js');
