import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type Page } from '@playwright/test';
import { build } from 'esbuild';
import { root } from '../../scripts/lib.mjs';
import { meterOf, openBrowser, signedIn, type PageMeter } from './desk-page';
import { alongBaseline, fillWideEvents, type WideEvent } from './earth-wide-events';
import { startMeasuredServer } from './measured-server';
import { median, ratioText } from './medians';

const EVENTS = Number(process.env['EVENTS'] ?? 50_000);
const ROUNDS = 6; // the first one warms up
const ROUND_S = 3;
const STEPS = 48; // speeds of the slider, from one end to the other and back
const MOST_C = 0.8;
const EDGE_PX = 16; // of the slider, on both sides of its groove
const LEAST_TO_PAINTING = 0.7;
const HELD_MS = 160; // time from the first event to the last
const LOADED_MS = 120_000;

/** Spans of time shown: all events lie in the box, and are inked as a density; or so few that they are marks. */
const SPANS_MS = [200, 60];
/** As the desk begins: so much of the span lies above the event, so much of what the pair leaves free to its left. */
const [ABOVE, LEFT, LEAST_LEFT_MS] = [0.72, 0.62, 3];

/** Frames that showed something new, and how long the page's main thread was busy for each. */
interface Run {
  readonly perS: number;
  readonly busyMs: number;
}

const speeds = Array.from({ length: STEPS }, (_, step) => {
  const way = (2 * step) / STEPS;
  return MOST_C * (way < 1 ? 2 * way - 1 : 3 - 2 * way);
});

async function framesOf(page: Page, meter: PageMeter, run: () => Promise<{ readonly frames: number; readonly ms: number }>): Promise<Run> {
  await page.bringToFront();
  const before = await meter.taskMs();
  const { frames, ms } = await run();
  return { perS: (frames / ms) * 1e3, busyMs: ((await meter.taskMs()) - before) / frames };
}

/** Drags the slider: a new place of the pointer for each frame, as a browser gives them. A frame counts once the slider shows its speed. */
const dragged = (page: Page) =>
  page.evaluate(
    ({ seconds, speeds, edgePx }) => {
      const slider = document.querySelector('sw-speed-slider [role=slider]');
      if (!slider) throw new Error('there is no slider');
      const { left, top, width } = slider.getBoundingClientRect();
      const startMs = performance.now();
      let [frames, at, shown] = [0, 0, slider.getAttribute('aria-valuenow')];
      return new Promise<{ frames: number; ms: number }>((resolve) => {
        const frame = (): void => {
          const now = slider.getAttribute('aria-valuenow');
          if (now !== shown) frames++;
          shown = now;
          const ms = performance.now() - startMs;
          if (ms > seconds * 1e3) {
            resolve({ frames, ms });
            return;
          }
          const clientX = left + edgePx + (((speeds[at++ % speeds.length] ?? 0) + 1) / 2) * (width - 2 * edgePx);
          slider.dispatchEvent(new PointerEvent('pointermove', { clientX, clientY: top + 34, bubbles: true, buttons: 1 }));
          requestAnimationFrame(frame);
        };
        requestAnimationFrame(frame);
      });
    },
    { seconds: ROUND_S, speeds, edgePx: EDGE_PX },
  );

/** The baseline: a page that paints the same points at the same speeds by the product's own painter; where they stand was computed before. */
async function openPainting(page: Page, given: object): Promise<void> {
  const { outputFiles } = await build({
    stdin: {
      contents: `export { paintMarks } from './frontend/src/app/diagrams/paint-marks';
        export { oneScale } from './frontend/src/app/diagrams/one-scale';
        export { boostPlane, emptyPlane } from './frontend/src/app/diagrams/plane';
        export { speedFromC } from './shared/relativity/speed';`,
      resolveDir: root,
      loader: 'ts',
    },
    bundle: true,
    write: false,
    minify: true,
    format: 'iife',
    globalName: 'product',
  });
  await page.setContent('<!doctype html><body style="margin:0"><canvas></canvas>');
  await page.addScriptTag({ content: outputFiles[0]?.text ?? '' });
  await page.addScriptTag({
    content: `{
      const { box, sight, xMs, tMs, kinds, speeds } = ${JSON.stringify(given)};
      const { paintMarks, oneScale, boostPlane, emptyPlane, speedFromC } = product;
      const { x, y } = oneScale(sight, box);
      const rest = { count: xMs.length, xMs: Float64Array.from(xMs), tMs: Float64Array.from(tMs) };
      const isIn = (plane, i) => {
        const [px, py] = [x(plane.xMs[i]), y(plane.tMs[i])];
        return px >= -1 && py >= -1 && px <= box.width + 1 && py <= box.height + 1;
      };
      const planes = speeds.map((speedC) => {
        const plane = emptyPlane(rest.count);
        boostPlane(rest, speedFromC(speedC, 'speed').value, plane);
        let inBox = 0;
        for (let i = 0; i < plane.count; i++) if (isIn(plane, i)) inBox++;
        return { plane, inBox };
      });
      const canvas = document.querySelector('canvas');
      const dense = devicePixelRatio;
      Object.assign(canvas, { width: Math.round(box.width * dense), height: Math.round(box.height * dense) });
      Object.assign(canvas.style, { width: box.width + 'px', height: box.height + 'px' });
      const context = canvas.getContext('2d');
      context.setTransform(dense, 0, 0, dense, 0, 0);
      const colours = { page: '#fff', sheet: '#fff', ink: '#123', timelike: '#a50', spacelike: '#05a', undecided: '#555' };
      window.inBox = planes.map(({ inBox }) => inBox);
      window.painted = (seconds) => new Promise((resolve) => {
        const startMs = performance.now();
        let frames = 0;
        const frame = () => {
          const ms = performance.now() - startMs;
          if (ms > seconds * 1e3) return resolve({ frames, ms });
          paintMarks(context, { ...planes[frames++ % planes.length], kinds: Uint8Array.from(kinds), x, y, box, colours });
          requestAnimationFrame(frame);
        };
        requestAnimationFrame(frame);
      });
    }`,
  });
}

const painted = (page: Page) => page.evaluate<{ frames: number; ms: number }>(`painted(${ROUND_S})`);

const folder = mkdtempSync(join(tmpdir(), 'skewline-slider-'));
const browser = await openBrowser();
try {
  let events: readonly WideEvent[] = [];
  const server = await startMeasuredServer(folder, (db, measured) => {
    db.$client.transaction(() => (events = fillWideEvents(db, measured, EVENTS, HELD_MS)))();
  });
  const context = await signedIn(browser, server);
  const [from, to] = [events[EVENTS >> 1], events[(EVENTS >> 1) + 3]];
  if (!from || !to) throw new Error('there are no events');
  const along = alongBaseline(events, from, to);
  console.log(`slider: dragged with ${EVENTS} events on the desk, in Chromium, ${from.id} to ${to.id} along their baseline`);
  for (const spanMs of SPANS_MS) {
    const desk = await context.newPage();
    const askedMs = performance.now();
    await desk.goto(`/desk?view=baseline&event=${from.id}&other=${to.id}&span=${spanMs}`);
    await desk.locator('sw-diagram canvas.used').waitFor({ timeout: LOADED_MS });
    const loadedS = (performance.now() - askedMs) / 1e3;
    const slider = desk.getByRole('slider');
    await slider.hover();
    await desk.mouse.down();
    const { width, height } = (await desk.locator('sw-diagram canvas').boundingBox()) ?? { width: 0, height: 0 };
    const pxPerMs = height / spanMs;
    const sight = { pxPerMs, topMs: spanMs * ABOVE, leftMs: -Math.max(LEAST_LEFT_MS, (width / pxPerMs - along.baselineMs) * LEFT) };
    const page = await browser.newPage({ viewport: { width: 1440, height: 900 } });
    const kinds = along.isSpacelike.map((is) => (is ? 2 : 1)); // by their places in MARK_KINDS
    await openPainting(page, { box: { left: 0, top: 0, width, height }, sight, xMs: along.xMs, tMs: along.tMs, kinds, speeds });
    const inBox = await page.evaluate<number[]>('inBox');
    const [deskMeter, pageMeter] = [await meterOf(desk), await meterOf(page)];
    const [ours, theirs]: [Run[], Run[]] = [[], []];
    for (let round = 0; round < ROUNDS; round++) {
      const run = await framesOf(desk, deskMeter, () => dragged(desk));
      const baseline = await framesOf(page, pageMeter, () => painted(page));
      if (round === 0) continue;
      ours.push(run);
      theirs.push(baseline);
    }
    const [perS, paintedPerS] = [ours.map((run) => run.perS), theirs.map((run) => run.perS)];
    console.log(`  ${spanMs} ms shown, ${Math.min(...inBox)} to ${Math.max(...inBox)} marks in view, there after ${loadedS.toFixed(1)} s`);
    console.log(
      `    frames/s / painting the same points alone   ${ratioText(perS, paintedPerS)}   at least ${LEAST_TO_PAINTING}   (${median(perS).toFixed(1)} and ${median(paintedPerS).toFixed(1)};`,
    );
    console.log(
      `     the main thread busy for ${median(ours.map(({ busyMs }) => busyMs)).toFixed(1)} and ${median(theirs.map(({ busyMs }) => busyMs)).toFixed(1)} ms a frame)`,
    );
    await desk.close();
    await page.close();
  }
  await server.stop();
} finally {
  await browser.close();
  rmSync(folder, { recursive: true, force: true });
}
