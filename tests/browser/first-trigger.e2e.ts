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

test('the first trigger of a network appears on the desk that was open before it', async ({ browser }) => {
  const context = await signedIn(browser, server);
  const page = await context.newPage();
  await page.goto('/desk');
  await expect(page.getByRole('main')).toContainText('No triggers yet');
  const [key] = server.keys;
  const client = new SiteClient({ url: server.url, key: key!, software: 'test' });
  const triggers = new SiteTriggers('', 1, Date.now() - 10_000, 1);
  await client.push(triggers.take());
  await client.drained();
  await expect(page.locator('sw-diagram > svg')).toHaveAttribute('aria-label', /^1 trigger/);
  await client.push(triggers.take());
  await client.finish();
  await expect(page.locator('sw-diagram > svg')).toHaveAttribute('aria-label', /^2 triggers/);
  await context.close();
});
