// Loaded into a measured server (NODE_OPTIONS=--import): writes how late the event loop of its HTTP thread is to the file LOOP_DELAY, anew
// whenever that file is gone.
import { existsSync } from 'node:fs';
import { rename, writeFile } from 'node:fs/promises';
import { monitorEventLoopDelay } from 'node:perf_hooks';
import process from 'node:process';
import { setTimeout } from 'node:timers';
import { isMainThread } from 'node:worker_threads';

const LOOK_MS = 100;
const RESOLUTION_MS = 1;

if (isMainThread && process.env.LOOP_DELAY !== undefined) {
  const delay = monitorEventLoopDelay({ resolution: RESOLUTION_MS });
  delay.enable();
  const tell = async () => {
    if (!existsSync(process.env.LOOP_DELAY)) delay.reset();
    const lateMs = (percentile) => Math.max(0, delay.percentile(percentile) / 1e6 - RESOLUTION_MS);
    const figures = { p99Ms: lateMs(99), mostMs: lateMs(100), rssMB: process.memoryUsage.rss() / 2 ** 20 };
    // Whole, or not there; and not in the loop that is measured, which the disk would delay.
    await writeFile(`${process.env.LOOP_DELAY}.part`, JSON.stringify(figures));
    await rename(`${process.env.LOOP_DELAY}.part`, process.env.LOOP_DELAY);
    setTimeout(tell, LOOK_MS).unref();
  };
  setTimeout(tell, LOOK_MS).unref();
}
