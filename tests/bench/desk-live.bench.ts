import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type Page } from '@playwright/test';
import { meterOf, openBrowser, signedIn } from './desk-page';
import { RATE_HZ, startMeasuredServer } from './measured-server';
import { percentile } from './medians';
import { startSitesProcess } from './sites-process';

const SECONDS = Number(process.env['SECONDS'] ?? 60);
/** The desk's usual span of 20 s keeps the events of 33 s: after so long it holds as many as it ever does, and has let the first ones go. */
const FILL_S = 40;
const MOST_GROWTH = 1.1;
const FRAME_MS = 1e3 / 60;

/** What a page saw of itself. */
interface Seen {
  readonly longTasksMs: readonly number[];
  readonly frames: number;
  /** Frames that the screen would have had, and the page did not. */
  readonly dropped: number;
}

/** Looks at frames and long tasks of a page from the beginning. */
const WATCH = `{
  const fresh = () => ({ longTasksMs: [], frames: 0, dropped: 0 });
  let seen = fresh();
  window.takeSeen = () => { const was = seen; seen = fresh(); return was; };
  new PerformanceObserver((list) => seen.longTasksMs.push(...list.getEntries().map(({ duration }) => duration))).observe({ type: 'longtask' });
  let beforeMs;
  const frame = (atMs) => {
    seen.frames++;
    if (beforeMs !== undefined) seen.dropped += Math.max(0, Math.round((atMs - beforeMs) / ${FRAME_MS}) - 1);
    beforeMs = atMs;
    requestAnimationFrame(frame);
  };
  requestAnimationFrame(frame);
}`;

const takeSeen = (page: Page): Promise<Seen> => page.evaluate<Seen>('takeSeen()');
const share = ({ frames, dropped }: Seen): number => dropped / (frames + dropped);
const shareText = (seen: Seen): string => `${seen.dropped} of ${seen.frames + seen.dropped} (${(100 * share(seen)).toFixed(1)} %)`;

const folder = mkdtempSync(join(tmpdir(), 'skewline-desk-live-'));
const sites = startSitesProcess();
// The baseline is in a browser of its own: a page behind another gets no frames.
const [browser, other] = [await openBrowser(), await openBrowser()];
try {
  const server = await startMeasuredServer(folder);
  await sites.tell({ is: 'begin', url: server.url, keys: server.keys, cookie: '', networkId: 0, bareUrl: '' });
  const context = await signedIn(browser, server);
  const faults: string[] = [];
  const desk = await context.newPage();
  desk.on('pageerror', (fault) => faults.push(String(fault)));
  await desk.addInitScript(WATCH);
  const empty = await other.newPage();
  await empty.addInitScript(WATCH);
  await empty.goto('data:text/html,<!doctype html>');
  await desk.goto('/desk');
  await desk.locator('sw-site-strip').waitFor();
  const meter = await meterOf(desk);
  const startMB = await meter.heapMB();
  await sites.tell({ is: 'pace', seconds: FILL_S, rateHz: RATE_HZ });
  const filledMB = await meter.heapMB();
  await Promise.all([takeSeen(desk), takeSeen(empty)]);
  const [busyBefore, startedMs] = [await meter.taskMs(), performance.now()];
  const { records } = await sites.tell({ is: 'pace', seconds: SECONDS, rateHz: RATE_HZ });
  const [seen, baseline] = await Promise.all([takeSeen(desk), takeSeen(empty)]);
  const busy = ((await meter.taskMs()) - busyBefore) / (performance.now() - startedMs);
  const endMB = await meter.heapMB();
  const rows = await desk.locator('sw-set-table [role=row].row').count();
  const label = (await desk.locator('sw-diagram > svg').getAttribute('aria-label')) ?? '';
  console.log(
    `desk: open for ${SECONDS} s while ${(records / SECONDS).toFixed(0)} triggers/s come, in Chromium, after ${FILL_S} s of the same`,
  );
  console.log(
    `  heap at the end / when the window it keeps was first full   ${(endMB / filledMB).toFixed(2)}   at most ${MOST_GROWTH}   (${endMB.toFixed(0)} and ${filledMB.toFixed(0)} MB; ${startMB.toFixed(0)} MB before the first trigger)`,
  );
  console.log(
    `  longest task ${Math.max(0, ...seen.longTasksMs).toFixed(0)} ms (p90 of the ${seen.longTasksMs.length} above 50 ms: ${percentile(seen.longTasksMs, 90).toFixed(0)} ms)`,
  );
  console.log(`  frames dropped ${shareText(seen)}, by a page that shows nothing, in a browser beside it, ${shareText(baseline)}`);
  console.log(`  (the main thread busy for ${(100 * busy).toFixed(0)} % of the time; ${rows} rows drawn; ${label})`);
  for (const fault of faults) console.log(`  FAULT ${fault}`);
  await server.stop();
} finally {
  sites.end();
  await Promise.all([browser.close(), other.close()]);
  rmSync(folder, { recursive: true, force: true });
}
