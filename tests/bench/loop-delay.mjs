// Loaded into a measured server (NODE_OPTIONS=--import): writes how late the event loop of its HTTP thread is to the file LOOP_DELAY, anew
// whenever that file is gone.
import { existsSync, renameSync, writeFileSync } from 'node:fs';
import { monitorEventLoopDelay } from 'node:perf_hooks';
import process from 'node:process';
import { setInterval } from 'node:timers';
import { isMainThread } from 'node:worker_threads';

const LOOK_MS = 100;
const RESOLUTION_MS = 1;

if (isMainThread && process.env.LOOP_DELAY !== undefined) {
  const delay = monitorEventLoopDelay({ resolution: RESOLUTION_MS });
  delay.enable();
  setInterval(() => {
    if (!existsSync(process.env.LOOP_DELAY)) delay.reset();
    const lateMs = (percentile) => Math.max(0, delay.percentile(percentile) / 1e6 - RESOLUTION_MS);
    const figures = { p99Ms: lateMs(99), mostMs: lateMs(100), rssMB: process.memoryUsage.rss() / 2 ** 20 };
    writeFileSync(`${process.env.LOOP_DELAY}.part`, JSON.stringify(figures)); // whole, or not there
    renameSync(`${process.env.LOOP_DELAY}.part`, process.env.LOOP_DELAY);
  }, LOOK_MS).unref();
}
