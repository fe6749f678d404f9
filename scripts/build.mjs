// npm run build: both halves, each only when its sources changed.
import { buildBackend, buildFrontend, checkNode, install } from './lib.mjs';

checkNode();
install();
buildBackend();
buildFrontend();
