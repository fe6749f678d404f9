// Preloaded into a server (NODE_OPTIONS=--import), writes how much memory each of its two threads holds at most: heap and what hangs on it
// outside (buffers), each time after a collection, so that garbage does not count. To the files held-http and held-writer in the folder PLANTED.
import { renameSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import process from 'node:process';
import { setInterval } from 'node:timers';
import { setFlagsFromString } from 'node:v8';
import { runInNewContext } from 'node:vm';
import { isMainThread, workerData } from 'node:worker_threads';

const LOOK_MS = 250;

const thread = isMainThread ? 'http' : workerData?.config ? 'writer' : undefined;
if (thread) {
  setFlagsFromString('--expose-gc');
  const collect = runInNewContext('gc');
  let most = 0;
  setInterval(() => {
    collect();
    const { heapUsed, external } = process.memoryUsage(); // external counts array buffers too
    most = Math.max(most, heapUsed + external);
    const file = join(process.env.PLANTED, `held-${thread}`);
    writeFileSync(`${file}.new`, String(most));
    renameSync(`${file}.new`, file); // whoever reads it finds it whole
  }, LOOK_MS).unref();
}
