import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { AxeBuilder } from '@axe-core/playwright';
import { type BrowserContext, expect, type Locator, type Page, test } from '@playwright/test';
import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { type PairsOfSet } from '#shared/contract/pair-routes';
import { newFolder } from '../support/folder';
import { type RunningServer, startServer } from '../support/server';

const WCAG = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];
const WIDE = { width: 1440, height: 900 };
const NARROW = { width: 390, height: 844 };
const FILLED_MS = 60_000; // until the demo's minutes before the start are there
const LEAST_FOLD = 4;
const LEAST_APART_M = 1e6; // a pixel of the slider is some 5e-3 c, over so much 17 us
const EDGE_PX = 16; // of the slider, on both sides of its groove

test.describe.configure({ mode: 'serial' });

let server: RunningServer;
let context: BrowserContext;
let page: Page;
let found: CoincidenceBrief | undefined;
let set: CoincidenceBrief;
let pairs: PairsOfSet;
const faults: string[] = [];
const foreign: string[] = [];

test.beforeAll(async ({ browser }) => {
  test.setTimeout(2 * FILLED_MS);
  const folder = newFolder('browser-desk');
  server = await startServer({ DATA_DIR: folder, DEMO: 'on' });
  const demo = JSON.parse(readFileSync(join(folder, 'demo.json'), 'utf8')) as {
    people: { role: string; email: string; password: string }[];
  };
  const analyst = demo.people.find(({ role }) => role === 'analyst')!;
  context = await browser.newContext({ baseURL: server.url, viewport: WIDE, acceptDownloads: true });
  page = await context.newPage();
  page.on('console', (message) => {
    if (['error', 'warning'].includes(message.type())) faults.push(message.text());
  });
  page.on('pageerror', (fault) => faults.push(String(fault)));
  page.on('request', (request) => {
    if (!request.url().startsWith(server.url) && !/^(?:data|blob|ws):/.test(request.url())) foreign.push(request.url());
  });
  await page.goto('/sign-in');
  await page.getByLabel('Email').fill(analyst.email);
  await page.getByLabel('Password', { exact: true }).fill(analyst.password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('Desk');
  await expect
    .poll(
      async () => {
        const list = await ask<{ items: CoincidenceBrief[] }>(
          '/networks/1/coincidences?state=final&class=spacelike&sort=fold&order=down&limit=1',
        );
        found = list.items[0];
        return found?.fold ?? 0;
      },
      { timeout: FILLED_MS, message: 'a coincidence of four sites' },
    )
    .toBeGreaterThanOrEqual(LEAST_FOLD);
  set = found!;
  pairs = await ask(`/networks/1/pairs?events=${set.members.map(({ eventId }) => eventId).join(',')}&frames=geocentric`);
});
test.afterAll(async () => {
  await context.close();
  await server.stop();
});

const ask = async <T>(path: string): Promise<T> => (await (await page.request.get(`api${path}`)).json()) as T;

/** The pair of the set's first event whose order turns at the least speed, with its other event; far enough apart that a pixel is a time that is printed. */
function turningPair() {
  const [first] = pairs.events;
  const pair = pairs.pairs
    .filter(({ a, turning, distanceM }) => a === 1 && turning && distanceM > LEAST_APART_M)
    .sort((x, y) => x.turning!.speedC - y.turning!.speedC)[0]!;
  return { first: first!, other: pairs.events[pair.b - 1]!, pair };
}

const rowOf = (name: string): Locator => page.locator('sw-event-table tbody tr').filter({ has: page.locator('th', { hasText: name }) });
const openEvent = (more = ''): Promise<unknown> => page.goto(`/desk?view=event&event=${set.members[0]!.eventId}${more}`);

test('shows all sites live, and a coincidence by its row and by its marks', async () => {
  await page.goto('/desk');
  await expect(page.getByRole('grid', { name: 'Coincidences' })).toBeVisible();
  const rows = page.locator('sw-set-table [role=row].row');
  await expect(rows.first()).toBeVisible();
  await expect(page.locator('sw-diagram .leader').first()).toBeAttached();
  await rows.nth(1).hover(); // rows stay under the pointer
  await rows.nth(1).click();
  await expect(rows.nth(1)).toHaveAttribute('aria-selected', 'true');
  await expect(page.locator('sw-diagram .ring').first()).toBeAttached();
  expect(page.url()).toContain('set=');
  const before = await page.locator('sw-diagram > svg').getAttribute('aria-label');
  await expect(page.locator('sw-diagram > svg')).not.toHaveAttribute('aria-label', before ?? '', { timeout: 20_000 }); // a trigger came
});

test('sets each event on its own time and light-time, and says of it what the server says', async () => {
  await openEvent();
  await expect(page.locator('sw-event-table tr.chosen')).toContainText(set.members[0]!.site);
  for (const [place, member] of set.members.slice(1).entries()) {
    const pair = pairs.pairs.find(({ a, b }) => a === 1 && b === place + 2)!;
    const row = rowOf(member.site).first();
    await expect(row).toContainText(pair.class);
    await expect(row).toContainText(`+${(pair.dtNs / 1e6).toFixed(3)}`);
  }
  // Light at 45 degrees.
  const light = await page.locator('sw-diagram path.light').first().getAttribute('d');
  const [x1 = 0, y1 = 0, x2 = 0, y2 = 0] = (light ?? '').match(/-?[\d.]+/g)?.map(Number) ?? [];
  expect((y2 - y1) / (x2 - x1)).toBeCloseTo(-1, 4);
});

test('turns a pair at its turning speed, to the pixel', async () => {
  const { first, other, pair } = turningPair();
  await page.goto(`/desk?view=baseline&event=${first.id}&other=${other.id}`);
  const slider = page.getByRole('slider');
  await expect(slider).toBeVisible();
  await expect(page.locator('sw-event-table tr.other')).toBeVisible();
  const box = (await slider.boundingBox())!;
  const at = (c: number): number => box.x + EDGE_PX + ((c + 1) / 2) * (box.width - 2 * EDGE_PX);
  const turnPx = at(pair.turning!.speedC);
  const time = async (): Promise<number> =>
    Number((await page.locator('sw-event-table tr.other td').first().innerText()).replace('\u2212', '-').replace(/\s/g, ''));
  await page.mouse.move(at(0), box.y + 34);
  await page.mouse.down();
  await page.mouse.move(Math.floor(turnPx) - 1, box.y + 34, { steps: 8 });
  await expect.poll(time).toBeGreaterThan(0);
  await expect(page.locator('sw-event-table tr.other')).not.toContainText(first.site);
  await page.mouse.move(Math.ceil(turnPx) + 1, box.y + 34);
  await expect.poll(time).toBeLessThan(0);
  await expect(page.locator('sw-event-table tr.other')).toContainText(first.site); // turned with it
  await expect(page.locator('.foot')).toContainText(`${other.site} now comes`);
  await page.mouse.up();
  await expect.poll(() => page.url()).toContain('speed=');
});

test('is the same view again by its address, and Back replays no drag', async () => {
  const url = page.url();
  const shown = await page.locator('sw-event-table tbody').innerText();
  await page.reload();
  await expect(page.locator('sw-event-table tr.other')).toBeVisible();
  await expect.poll(() => page.locator('sw-event-table tbody').innerText()).toBe(shown);
  expect(page.url()).toBe(url);
  await page.getByRole('button', { name: 'Around an event' }).click();
  await expect.poll(() => page.url()).not.toContain('baseline');
  await page.goBack();
  await expect.poll(() => page.url()).toBe(url);
  await page.goBack();
  await expect.poll(() => page.url()).not.toContain('view=baseline&event');
});

test('is set to a frame of the network, says what of it cannot be drawn, and pins the frame of its slider', async () => {
  const { first, other } = turningPair();
  await page.goto(`/desk?view=baseline&event=${first.id}&other=${other.id}`);
  const chip = page.locator('sw-frame-chip button');
  await expect(chip).toContainText('Geocentric');
  await chip.click();
  await page.getByRole('menuitemradio', { name: 'cmb' }).click();
  await expect(chip).toContainText('cmb');
  await expect.poll(() => page.url()).toContain('frame=cmb');
  // 369.82 km/s against the cosmic background, as measured by Planck (2018 results I, table 3).
  await expect(page.locator('.limits.off')).toContainText(/cmb moves at 0\.0013\sc, .?0\.00\d\d\sc of it along/);
  const answer = await ask<PairsOfSet>(`/networks/1/pairs?events=${first.id},${other.id}&frames=cmb`);
  const [along] = answer.frames.map(({ gamma, gammaBeta }) => {
    const [a, b] = answer.events.map(({ placeM }) => placeM);
    const step = a!.map((from, i) => b![i]! - from);
    return step.reduce((sum, x, i) => sum + x * gammaBeta[i]!, 0) / gamma / Math.hypot(...step);
  });
  const slider = page.getByRole('slider');
  await expect.poll(async () => Number(await slider.getAttribute('aria-valuenow'))).toBeCloseTo(along!, 6);

  await page.goto(`/desk?view=baseline&event=${first.id}&other=${other.id}&speed=0.45`);
  await expect(chip).toContainText(`toward ${other.site} at 0.450\u00a0c`);
  await chip.click();
  await page.getByRole('menuitem', { name: 'Pin this frame' }).click();
  const code = `to-${other.site}-450`;
  await expect(page.locator('sw-event-table thead')).toContainText(code);
  await chip.click();
  await page.getByRole('menuitemradio', { name: code }).click();
  await expect(chip).toContainText(code);
  // The same frame as the slider's, but for the Earth's turning between the two triggers.
  await expect.poll(async () => Number(await slider.getAttribute('aria-valuenow'))).toBeCloseTo(0.45, 4);
  await expect(page.locator('sw-event-table tr.other')).toContainText(first.site);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect(page.locator('sw-event-table thead')).not.toContainText(code);
  await expect(chip).toContainText('Geocentric');
});

test('is worked by the keyboard alone', async () => {
  await openEvent();
  const diagram = page.locator('sw-diagram > svg');
  await expect(page.locator('sw-event-table tr.chosen')).toBeVisible();
  await page.getByRole('button', { name: 'Export' }).focus();
  await page.keyboard.press('Tab');
  await expect(diagram).toBeFocused();
  await page.keyboard.press('ArrowRight');
  const active = page.locator('sw-diagram .active');
  await expect(active).toHaveAttribute('aria-label', /, .*(?:spacelike|timelike|undecided) to /);
  const name = await active.getAttribute('aria-label');
  await page.keyboard.press('Enter');
  await expect(page.locator('sw-event-table tr.other')).toHaveAttribute('aria-label', name ?? '');
  await page.keyboard.press('Escape');
  await page.keyboard.press('Escape');
  await expect(page.locator('sw-event-table tr.other')).toHaveCount(0);
  await page.keyboard.press('3');
  await expect(page.getByRole('slider')).toBeVisible();
  await page.getByRole('slider').focus();
  for (let i = 0; i < 3; i++) await page.keyboard.press('ArrowRight');
  await expect(page.getByRole('slider')).toHaveAttribute('aria-valuenow', '0.03');
});

test('gives the focus to what the keyboard opened', async () => {
  await page.goto('/desk');
  const grid = page.getByRole('grid', { name: 'Coincidences' });
  await expect(page.locator('sw-set-table [role=row].row').first()).toBeVisible();
  await grid.focus();
  await page.keyboard.press('Enter'); // chooses
  await expect(page.locator('sw-set-table [role=row][aria-selected=true]')).toBeVisible();
  await page.keyboard.press('Enter'); // opens
  await expect(page.locator('sw-event-table tr.chosen')).toBeFocused();
  await page.keyboard.press('1');
  await expect(grid).toBeFocused();
});

test('opens a baseline at a span that parts its two ends', async () => {
  const { first, other } = turningPair();
  const members = pairs.pairs.filter(({ a }) => a === 1);
  for (const { b, dtNs, distanceM } of members) {
    await page.goto(`/desk?view=baseline&event=${first.id}&other=${pairs.events[b - 1]!.id}`);
    await expect(page.locator('sw-event-table tr.other')).toBeVisible();
    const spanMs = Number(await page.getByLabel('Span of time').inputValue());
    const largerMs = Math.max(Math.abs(dtNs) / 1e6, distanceM / 299_792.458);
    expect(spanMs / largerMs).toBeGreaterThan(3);
    expect(spanMs / largerMs).toBeLessThan(10);
  }
  await page.goto(`/desk?view=baseline&event=${first.id}&other=${other.id}&span=60`);
  await expect(page.locator('sw-event-table tr.other')).toBeVisible();
  await expect(page.getByLabel('Span of time')).toHaveValue('60');
});

test('exports the table so that it comes back, and the diagram as a picture', async () => {
  await openEvent();
  await expect(page.locator('sw-event-table tr.chosen')).toBeVisible();
  await expect(rowOf(set.members[1]!.site).first()).toContainText('\u03c3');
  const exported = async (item: string): Promise<string> => {
    const download = page.waitForEvent('download');
    await page.getByRole('button', { name: 'Export' }).click();
    await page.getByRole('menuitem', { name: item }).click();
    return (await download).path();
  };
  const csv = readFileSync(await exported('Table as CSV'), 'utf8').split('\r\n').map((line) => line.split(',')); // prettier-ignore
  const dt = csv[0]!.indexOf('dt_ns');
  for (const { b, dtNs } of pairs.pairs.filter(({ a }) => a === 1)) {
    const line = csv.find(([name]) => name === pairs.events[b - 1]!.name)!;
    expect(Number(line[dt])).toBe(dtNs);
  }
  expect(readFileSync(await exported('Diagram as SVG'), 'utf8')).toMatch(
    /^<svg [^>]*xmlns="http:\/\/www.w3.org\/2000\/svg"[\s\S]*Around an event/,
  );
  const png = readFileSync(await exported('Diagram as PNG'));
  expect(png.subarray(1, 4).toString()).toBe('PNG');
  expect(png.readUInt32BE(16)).toBeGreaterThan(800); // its width
});

test('paints on a canvas where there are too many marks to be drawn one by one', async () => {
  await page.goto('/desk?span=3600000');
  const canvas = page.locator('sw-diagram canvas');
  await expect(canvas).toBeVisible({ timeout: 30_000 });
  const inked = await canvas.evaluate((element: HTMLCanvasElement) => {
    const { data } = element.getContext('2d')!.getImageData(0, 0, element.width, element.height);
    let points = 0;
    for (let i = 3; i < data.length; i += 4) if (data[i]! > 0) points++;
    return points;
  });
  expect(inked).toBeGreaterThan(500);
});

for (const colorScheme of ['light', 'dark'] as const)
  for (const viewport of [WIDE, NARROW])
    test(`has no fault that axe finds, ${colorScheme}, ${viewport.width} px wide`, async () => {
      test.setTimeout(120_000);
      await page.emulateMedia({ colorScheme });
      await page.setViewportSize(viewport);
      const { first, other } = turningPair();
      for (const view of ['', `?view=event&event=${first.id}`, `?view=baseline&event=${first.id}&other=${other.id}&speed=0.45`]) {
        await page.goto(`/desk${view}`);
        await expect(page.locator(view === '' ? 'sw-set-table [role=row].row' : 'sw-event-table tr.chosen').first()).toBeVisible();
        await expect(page.locator('sw-diagram .frame')).toBeAttached();
        expect((await new AxeBuilder({ page }).withTags(WCAG).analyze()).violations).toEqual([]);
        expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBe(viewport.width);
      }
    });

test('has said nothing in the console and asked nobody else', () => {
  expect(faults).toEqual([]);
  expect(foreign).toEqual([]);
});
