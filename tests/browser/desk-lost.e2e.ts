import { expect, type Page, test } from '@playwright/test';
import { newFolder } from '../support/folder';
import { startServer } from '../support/server';
import { demoAccount, enter } from './demo-account';

const NOTICED_MS = 30_000; // asked every 15 s where no socket tells it sooner
const FOUND_MS = 60_000; // the longest wait between two tries, and the start of the server
const STREAMED_MS = 60_000; // until the demo's minutes before its start are there
const AGAIN_MS = 60_000; // until the demo's sites stream to the second server, and the desk has caught up
const SPAN_MS = 60_000;
const HELD_S = 131.072; // of a minute in the window the desk holds the least power of two over 1.3 times it, ms

interface Listed {
  readonly id: number;
  readonly at: { readonly taiS: number; readonly ps: number };
}

/** How many triggers the desk says that it holds. */
const heldCount = async (page: Page): Promise<number> =>
  Number(/^\d+/.exec((await page.locator('sw-diagram > svg').getAttribute('aria-label')) ?? '')?.[0]);

/** The triggers that the server lists of the time that the desk holds, the latest first. */
async function listed(page: Page): Promise<Listed[]> {
  const all: Listed[] = [];
  const isHeld = ({ at }: Listed): boolean => (all[0]?.at.taiS ?? 0) - at.taiS + ((all[0]?.at.ps ?? 0) - at.ps) / 1e12 <= HELD_S;
  for (let cursor: string | null = ''; cursor !== null;) {
    const more = cursor === '' ? '' : `&cursor=${encodeURIComponent(cursor)}`;
    const answer = await page.request.get(`api/networks/1/events?order=down&limit=200${more}`);
    const { items, next } = (await answer.json()) as { items: Listed[]; next: string | null };
    all.push(...items);
    cursor = items.every(isHeld) ? next : null;
  }
  return all.filter(isHeld);
}

test('a server that goes under the desk and comes back on the same data brings what is new, nothing doubled, without a reload', async ({
  browser,
}) => {
  test.setTimeout(300_000);
  const dataDir = newFolder('browser-desk-lost');
  const first = await startServer({ DATA_DIR: dataDir, DEMO: 'on' });
  const context = await browser.newContext({ baseURL: first.url, viewport: { width: 1440, height: 900 } });
  const page = await context.newPage();
  await enter(page, demoAccount(dataDir, 'analyst'));
  await page.goto(`/desk?span=${SPAN_MS}`);
  await expect.poll(() => heldCount(page), { timeout: STREAMED_MS }).toBeGreaterThan(100);
  const latest = (await listed(page))[0]!;
  await page.evaluate(() => (document.title = 'not reloaded'));
  await first.stop();

  const banner = page.locator('sw-offline-banner');
  await expect(banner).toContainText(/The server was last reached at \d{4}-\d\d-\d\d \d\d:\d\d:\d\d UTC/, { timeout: NOTICED_MS });
  expect(await heldCount(page)).toBeGreaterThan(100); // what was there stays to be read
  const strip = page.locator('sw-site-strip');
  await expect(strip.locator('li').first()).toContainText(/not known since \d\d:\d\d:\d\d/);
  await expect(strip.getByRole('img', { name: 'streaming' })).toHaveCount(0);
  const ages = await strip.innerText();
  await expect.poll(() => strip.innerText()).not.toBe(ages); // they grow though nothing comes

  const second = await startServer({ DATA_DIR: dataDir, DEMO: 'on', PORT: new URL(first.url).port });
  await expect(banner.getByRole('button')).toHaveCount(0, { timeout: FOUND_MS });
  await expect(strip).not.toContainText('not known', { timeout: FOUND_MS });
  await expect.poll(async () => (await listed(page)).filter(({ id }) => id > latest.id).length, { timeout: AGAIN_MS }).toBeGreaterThan(10);
  // As many as the server has: what was missed is there, and nothing twice.
  await expect
    .poll(
      async () => {
        const [before, held, after] = [await listed(page), await heldCount(page), await listed(page)];
        const isSettled = before.length === after.length && before[0]?.id === after[0]?.id;
        return isSettled ? held - after.length : 'more came meanwhile';
      },
      { timeout: AGAIN_MS, intervals: [100] },
    )
    .toBe(0);
  const sets = await page.locator('sw-set-table [role=row].row').evaluateAll((rows) => rows.map(({ id }) => id));
  expect(sets.length).toBeGreaterThan(0);
  expect(new Set(sets).size).toBe(sets.length);
  expect(await page.title()).toBe('not reloaded');
  await context.close();
  await second.stop();
});
