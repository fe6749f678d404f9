import { rmSync } from 'node:fs';
import { join } from 'node:path';
import { AxeBuilder } from '@axe-core/playwright';
import { expect } from '@playwright/test';
import { LIMITS } from '#shared/limits';
import { newFolder } from '../support/folder';
import { startServer } from '../support/server';
import { test } from './served';

const WCAG = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];
const SIZES = [
  { width: 1440, height: 900 },
  { width: 390, height: 844 },
];
const GROUND = { light: 'rgb(238, 241, 234)', dark: 'rgb(15, 21, 19)' };

for (const colorScheme of ['light', 'dark'] as const)
  for (const viewport of SIZES)
    test.describe(`the page about Skewline, ${colorScheme}, ${viewport.width} px wide`, () => {
      test.use({ colorScheme, viewport });

      test('says what Skewline is, its limits, and that the database answers', async ({ page, watch }) => {
        await page.goto('/about');
        await expect(page).toHaveTitle('One order, where there is one: Skewline');
        await expect(page.getByRole('heading', { level: 1 })).toHaveText('Some orders depend on the frame.');
        await expect(page.getByRole('main')).toContainText('reconciles the trigger logs of a distributed detector network');
        for (const limit of LIMITS) await expect(page.getByRole('main')).toContainText(limit);
        expect(LIMITS.join(' ')).toMatch(/neglect gravitational time dilation.*Not for navigation, aviation, or any safety-of-life timing/);
        await expect(page.getByRole('main').getByRole('status')).toContainText('The database answers.');
        await expect(page.getByRole('img', { name: /light cone/ })).toBeVisible();
        expect(watch.faults).toEqual([]);
        expect(watch.foreign).toEqual([]);
      });

      test('stands in its own colours and fonts and within its width', async ({ page }) => {
        await page.goto('/about');
        await expect(page.getByRole('main').getByRole('status')).toContainText('The database answers.');
        expect(await page.evaluate(() => getComputedStyle(document.body).backgroundColor)).toBe(GROUND[colorScheme]);
        await page.evaluate(() => document.fonts.ready);
        const families = await page.evaluate(() =>
          [...document.fonts].filter((f) => f.status === 'loaded').map((f) => f.family.replaceAll('"', '')),
        );
        expect(families).toContain('Commissioner Variable');
        expect(families).toContain('Source Code Pro Variable');
        expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBe(viewport.width);
        await page.screenshot({ path: `test-results/first-page-${colorScheme}-${viewport.width}.png`, fullPage: true });
      });

      test('draws light at 45 degrees', async ({ page }) => {
        await page.goto('/about');
        const ray = await page.locator('sw-turning-picture path.light').first().getAttribute('d');
        const [x1 = 0, y1 = 0, x2 = 0, y2 = 0] = (ray ?? '').match(/-?[\d.]+/g)?.map(Number) ?? [];
        expect(Math.abs((y2 - y1) / (x2 - x1))).toBeCloseTo(1, 4);
      });

      test('has no fault that axe finds, also when the database or the server is gone', async ({ page }) => {
        await page.goto('/about');
        await expect(page.getByRole('main').getByRole('status')).toContainText('The database answers.');
        const faults = async () => (await new AxeBuilder({ page }).withTags(WCAG).analyze()).violations;
        expect(await faults()).toEqual([]);
        await page.route('**/api/health', (route) =>
          route.fulfill({ status: 503, contentType: 'application/problem+json', body: '{"detail":"It was moved.","id":"1"}' }),
        );
        await page.reload();
        await expect(page.getByRole('main').getByRole('status')).toContainText('It was moved.');
        expect(await faults()).toEqual([]);
        await page.route('**/api/health', (route) => route.abort());
        await page.getByRole('button', { name: 'Ask again' }).click();
        await expect(page.getByRole('main').getByRole('status')).toContainText('The server does not answer.');
        expect(await faults()).toEqual([]);
      });
    });

test('a database that is deleted is told on the page, and again well after a restart', async ({ page }) => {
  const folder = newFolder('browser-gone');
  const first = await startServer({ DATA_DIR: folder });
  await page.goto(`${first.url}about`);
  await expect(page.getByRole('main').getByRole('status')).toContainText('The database answers.');
  rmSync(join(folder, 'skewline.sqlite'));
  await page.reload();
  await expect(page.getByRole('main').getByRole('status')).toContainText('The database does not answer.');
  await expect(page.getByRole('main').getByRole('status')).toContainText('moved, replaced or deleted');
  const { port } = new URL(first.url);
  await first.stop();
  await page.getByRole('button', { name: 'Ask again' }).click();
  await expect(page.getByRole('main').getByRole('status')).toContainText('The server does not answer.');
  const second = await startServer({ DATA_DIR: folder, PORT: port });
  await page.getByRole('button', { name: 'Ask again' }).click();
  await expect(page.getByRole('main').getByRole('status')).toContainText('The database answers.');
  await second.stop();
});

test('the skip link leads past the header by the keyboard', async ({ page }) => {
  await page.goto('/about');
  await expect(page.getByRole('main')).toBeVisible();
  await page.keyboard.press('Tab');
  await expect(page.getByRole('link', { name: 'Skip to the content' })).toBeFocused();
  await page.keyboard.press('Enter');
  await expect(page.getByRole('main')).toBeFocused();
  expect(new URL(page.url()).pathname).toBe('/about');
});

test('an address that leads nowhere says so and leads back', async ({ page, watch }) => {
  await page.goto('/no/such/page');
  await expect(page).toHaveTitle('No such page: Skewline');
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('No such page');
  expect((await new AxeBuilder({ page }).withTags(WCAG).analyze()).violations).toEqual([]);
  await page.getByRole('link', { name: 'the first page' }).click();
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('Sign in');
  expect(watch.faults).toEqual([]);
});

test('17: an injected script does not run', async ({ page }) => {
  await page.goto('/about');
  const outcome = await page.evaluate(() => {
    const box = document.createElement('div');
    try {
      box.innerHTML = '<img src="x" onerror="document.title = \'taken\'">';
      document.body.append(box);
    } catch (fault) {
      return fault instanceof TypeError ? 'refused' : 'other';
    }
    return 'taken';
  });
  expect(outcome).toBe('refused'); // Trusted Types: text becomes no markup outside Angular's own policy
  const script = page.evaluate(() => {
    document.createElement('script').src = 'data:text/javascript,document.title="taken"';
  });
  await expect(script).rejects.toThrow('TrustedScriptURL');
  await expect(page).not.toHaveTitle('taken');
});
