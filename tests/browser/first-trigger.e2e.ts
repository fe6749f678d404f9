import { expect, test } from '@playwright/test';
import { SiteClient } from '../../backend/site-client/site-client';
import { signedIn } from '../bench/desk-page';
import { type MeasuredServer, startMeasuredServer } from '../bench/measured-server';
import { SiteTriggers } from '../bench/site-triggers';
import { newFolder } from '../support/folder';

let server: MeasuredServer;
test.beforeAll(async () => {
  server = await startMeasuredServer(newFolder('browser-first-trigger'));
});
test.afterAll(() => server.stop());

test('the first triggers of a network appear on the desk that was open before them, and their coincidence in its table', async ({
  browser,
}) => {
  const context = await signedIn(browser, server);
  const page = await context.newPage();
  await page.goto('/desk');
  await expect(page.getByRole('main')).toContainText('No triggers yet');
  const [one, other] = server.keys.slice(0, 2).map((key) => new SiteClient({ url: server.url, key, software: 'test' }));
  const triggers = new SiteTriggers('', 1, Date.now() - 10_000, 1);
  const record = triggers.take();
  await one!.push(record);
  await one!.drained();
  await expect(page.locator('sw-diagram > svg')).toHaveAttribute('aria-label', /^1 trigger/);
  const row = page.locator('sw-set-table [role=row].row');
  await expect(row).toHaveCount(0);
  await other!.push(record); // at the same instant as the first site: a coincidence
  await other!.drained();
  await expect(page.locator('sw-diagram > svg')).toHaveAttribute('aria-label', /^2 triggers/);
  await expect(row).toHaveCount(1);
  await expect(row).toContainText('S2 S1'); // by its record the clock of S2 is 40 ns ahead, so that its trigger came first
  await Promise.all([one!.finish(), other!.finish()]);
  await context.close();
});
