import { AxeBuilder } from '@axe-core/playwright';
import { expect, test } from '@playwright/test';
import { newFolder } from '../support/folder';
import { startServer } from '../support/server';
import { demoAccount, enter } from './demo-account';

const WCAG = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];
const NOTICED_MS = 30_000; // asked every 15 s where no socket tells it sooner
const FOUND_MS = 60_000; // the longest wait between two tries, and the start of the server

test('a server that is gone is told with the age of what is shown, and found again without a reload', async ({ browser }) => {
  test.setTimeout(180_000);
  const dataDir = newFolder('browser-offline');
  const first = await startServer({ DATA_DIR: dataDir, DEMO: 'on' });
  const context = await browser.newContext({ baseURL: first.url, viewport: { width: 1440, height: 900 } });
  const page = await context.newPage();
  await enter(page, demoAccount(dataDir, 'coordinator'));
  await page.getByRole('link', { name: 'Sites' }).first().click();
  await expect(page.getByRole('main')).toContainText('Ombra Pan');
  await page.evaluate(() => (document.documentElement.dataset['since'] = 'before'));
  await first.stop();

  const banner = page.locator('sw-offline-banner');
  await expect(banner).toContainText(/The server was last reached at \d{4}-\d\d-\d\d \d\d:\d\d:\d\d UTC/, { timeout: NOTICED_MS });
  await expect(page.getByRole('main')).toContainText('Ombra Pan');
  await expect(page.locator('sw-connection-mark')).toContainText('Offline');
  for (const colorScheme of ['light', 'dark'] as const) {
    await page.emulateMedia({ colorScheme });
    expect((await new AxeBuilder({ page }).withTags(WCAG).analyze()).violations).toEqual([]);
  }

  // A part of the application that was not fetched yet.
  await page.getByRole('main').focus();
  await page.keyboard.press('g');
  await page.keyboard.press('r');
  const toast = page.locator('sw-toasts');
  await expect(toast).toContainText('cannot be loaded while the server is away');
  await expect(page.getByRole('main')).toContainText('Ombra Pan');

  const second = await startServer({ DATA_DIR: dataDir, DEMO: 'on', PORT: new URL(first.url).port });
  await expect(banner.getByRole('button')).toHaveCount(0, { timeout: FOUND_MS });
  await expect(page.locator('sw-connection-mark')).not.toContainText('Offline');
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('Rules');
  await expect(toast).not.toContainText('cannot be loaded');
  await expect(page.locator('tbody tr').first()).toBeVisible();
  expect(await page.evaluate(() => document.documentElement.dataset['since'])).toBe('before'); // not reloaded
  await context.close();
  await second.stop();
});
