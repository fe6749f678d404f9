// Preloaded into a server (NODE_OPTIONS=--import), writes how much memory the process has (RSS, which counts both threads), the most so far,
// and how late the event loop of its HTTP thread is, to the file MEASURED.
import { renameSync, writeFileSync } from 'node:fs';
import { monitorEventLoopDelay } from 'node:perf_hooks';
import process from 'node:process';
import { setInterval } from 'node:timers';
import { isMainThread } from 'node:worker_threads';

const LOOK_MS = 100;
const RESOLUTION_MS = 1;

if (isMainThread) {
  const lag = monitorEventLoopDelay({ resolution: RESOLUTION_MS });
  lag.enable();
  let mostRssBytes = 0;
  setInterval(() => {
    const rssBytes = process.memoryUsage.rss();
    mostRssBytes = Math.max(mostRssBytes, rssBytes);
    const lateP99Ms = lag.percentile(99) / 1e6 - RESOLUTION_MS;
    const { MEASURED } = process.env;
    writeFileSync(`${MEASURED}.new`, JSON.stringify({ rssBytes, mostRssBytes, lateP99Ms }));
    renameSync(`${MEASURED}.new`, MEASURED); // whoever reads it finds it whole
  }, LOOK_MS).unref();
}
