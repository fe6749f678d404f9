import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { AxeBuilder } from '@axe-core/playwright';
import { expect, type Page, test as base } from '@playwright/test';
import { SiteClient } from '../../backend/site-client/site-client';
import { newFolder } from '../support/folder';
import { type RunningServer, startServer } from '../support/server';
import { demoAccount, enter } from './demo-account';

const WCAG = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];
const SIZES = [
  { width: 1440, height: 900 },
  { width: 390, height: 844 },
];
/** Where each role begins, and what it may not see when the address is typed by hand. */
const ROLES = {
  operator: { begins: '/sites', heading: 'Sites', not: ['/people', '/audit', '/first-steps'] },
  analyst: { begins: '/desk', heading: 'Desk', not: ['/people', '/mails'] },
  reviewer: { begins: '/desk', heading: 'Desk', not: ['/people', '/audit'] },
} as const;

interface Demo {
  readonly server: RunningServer;
  readonly dataDir: string;
}
/** One demo for all tests here. */
const test = base.extend<object, { demo: Demo }>({
  demo: [
    // eslint-disable-next-line no-empty-pattern -- Playwright reads the fixtures that are needed off this pattern
    async ({}, use) => {
      const dataDir = newFolder('browser-roles');
      const server = await startServer({ DATA_DIR: dataDir, DEMO: 'on' });
      await use({ server, dataDir });
      await server.stop();
    },
    { scope: 'worker' },
  ],
  baseURL: async ({ demo }, use) => {
    await use(demo.server.url);
  },
});

const heading = (page: Page) => page.getByRole('heading', { level: 1 });

for (const [role, { begins, not }] of Object.entries(ROLES))
  test(`the ${role} begins at ${begins}, finds no link that leads nowhere, and reads why a page is not theirs`, async ({
    page,
    demo: { dataDir },
  }) => {
    const faults: string[] = [];
    page.on('console', (message) => message.type() === 'error' && faults.push(message.text()));
    page.on('pageerror', (fault) => faults.push(String(fault)));
    await enter(page, demoAccount(dataDir, role));
    await expect(page).toHaveURL(new RegExp(`${begins}(?:\\?|$)`));
    const links = await page.getByRole('navigation', { name: 'Main', exact: true }).getByRole('link').all();
    const paths = await Promise.all(links.map((link) => link.getAttribute('href')));
    expect(paths.length).toBeGreaterThan(2);
    for (const path of paths) {
      await page.goto(path ?? '/');
      await expect(heading(page)).toBeVisible();
      await expect(heading(page)).not.toHaveText(/Not permitted|No such page/);
    }
    for (const path of not) {
      expect(paths).not.toContain(path);
      await page.goto(path);
      await expect(heading(page)).toHaveText('Not permitted');
      await expect(page.getByRole('main')).toContainText(`You are ${role} here`);
    }
    expect(faults).toEqual([]);
  });

test('a malformed record of the demo is read as it came, refused as it came, and dismissed with a reason', async ({
  page,
  demo: { dataDir },
}) => {
  await enter(page, demoAccount(dataDir, 'coordinator'));
  await page.getByRole('link', { name: 'Set-asides' }).first().click();
  const rows = page.locator('sw-set-asides tbody tr');
  await expect(async () => {
    await page.getByRole('button', { name: 'Read again' }).click();
    expect(await rows.count()).toBeGreaterThan(0);
  }).toPass({ timeout: 40_000 });
  await rows.first().getByRole('button').click();
  await expect(page).toHaveURL(/open=\d+/);
  const detail = page.locator('sw-set-aside-detail');
  await expect(detail).toContainText('As the site sent it');
  const url = page.url();
  await detail.getByRole('button', { name: 'Dismiss it' }).click();
  await detail.getByRole('button', { name: 'Dismiss the record' }).click();
  await expect(detail.getByText('It must be why it is dismissed.')).toBeVisible();
  await detail.getByLabel('Why').fill('The logger was restarted.');
  await detail.getByRole('button', { name: 'Dismiss the record' }).click();
  await expect(page.getByText('Record dismissed: it stays set aside for good.')).toBeVisible();
  await page.goto(`${url}&state=dismissed`);
  await expect(detail).toContainText('The logger was restarted.');
});

test('20: what a site wrote is shown as text, whatever it wrote', async ({ page, demo: { dataDir, server } }) => {
  const wrote = `<img src=x onerror="document.title='taken'"> {{ 7 * 7 }}`;
  const { keys } = JSON.parse(readFileSync(join(dataDir, 'demo.json'), 'utf8')) as { keys: Record<string, string> };
  const client = new SiteClient({ url: server.url, key: keys['GIL']!, software: 'test' });
  await client.push({ series: '', sequence: '9000001', kind: '', reading: wrote, readingForm: 'iso', sigmaNs: '', amplitude: '' });
  await client.finish();
  await enter(page, demoAccount(dataDir, 'coordinator'));
  const answer = await page.request.get('api/networks/1/set-asides?limit=200');
  const { items } = (await answer.json()) as { items: { id: number; sequence: string | null }[] };
  const { id } = items.find(({ sequence }) => sequence === '9000001')!;
  await page.goto(`/set-asides?open=${id}`);
  const detail = page.locator('sw-set-aside-detail');
  await expect(detail).toContainText(wrote);
  await expect(page.locator('main img')).toHaveCount(0);
  await expect(page).not.toHaveTitle('taken');
});

for (const colorScheme of ['light', 'dark'] as const)
  for (const viewport of SIZES)
    test.describe(`${colorScheme}, ${viewport.width} px`, () => {
      test.use({ colorScheme, viewport });
      test('axe finds nothing where an operator begins and at the set-asides, and neither scrolls sideways', async ({
        page,
        demo: { dataDir },
      }) => {
        await enter(page, demoAccount(dataDir, 'operator'));
        for (const path of ['/sites', '/set-asides', '/set-asides?state=all', '/people']) {
          await page.goto(path);
          await expect(heading(page)).toBeVisible();
          await expect(page.locator('sw-skeleton')).toHaveCount(0);
          const { violations } = await new AxeBuilder({ page }).withTags(WCAG).analyze();
          expect({ path, violations }).toEqual({ path, violations: [] });
          expect({ path, width: await page.evaluate(() => document.documentElement.scrollWidth) }).toEqual({ path, width: viewport.width });
        }
      });
    });
