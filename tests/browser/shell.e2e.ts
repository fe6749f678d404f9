import { AxeBuilder } from '@axe-core/playwright';
import { type BrowserContext, expect, type Page, test } from '@playwright/test';
import { type RunningServer } from '../support/server';
import { EMAIL, PASSWORD, serverWithInvitation, signIn } from './invited';

const WCAG = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];
const SIZES = [
  { width: 1440, height: 900 },
  { width: 390, height: 844 },
];
const PATHS = [
  '/first-steps',
  '/desk',
  '/people',
  '/people/1',
  '/network',
  '/sites',
  '/frames',
  '/rules',
  '/tables',
  '/audit',
  '/mails',
  '/account',
];

test.describe.configure({ mode: 'serial' });

let server: RunningServer;
let invitation: string;
let context: BrowserContext;
let page: Page;
const faults: string[] = [];
const foreign: string[] = [];

test.beforeAll(async ({ browser }) => {
  ({ server, invitation } = await serverWithInvitation());
  context = await browser.newContext({ baseURL: server.url, viewport: SIZES[0] ?? null });
  page = await context.newPage();
  page.on('console', (message) => {
    if (['error', 'warning'].includes(message.type())) faults.push(message.text());
  });
  page.on('pageerror', (fault) => faults.push(String(fault)));
  page.on('request', (request) => {
    if (!request.url().startsWith(server.url) && !request.url().startsWith('data:')) foreign.push(request.url());
  });
});
test.afterAll(async () => {
  await context.close();
  await server.stop();
});

const heading = (text: string) => expect(page.getByRole('heading', { level: 1 })).toHaveText(text);

test('12: an invitation is accepted, and its token stays neither in the address nor in storage', async () => {
  const token = invitation.split('#')[1] ?? '';
  expect(token).toMatch(/^[\w-]{22}$/);
  await page.goto(invitation);
  await heading('Welcome');
  expect(page.url()).not.toContain(token);
  await page.getByLabel('New password').fill('short');
  await page.getByRole('button', { name: 'Choose this password' }).click();
  await expect(page.getByText('It must be 12 to 128 characters.')).toBeVisible();
  await page.getByLabel('New password').fill(PASSWORD);
  await page.getByRole('button', { name: 'Choose this password' }).click();
  await heading('Sign in');
  const kept = await page.evaluate(() => JSON.stringify([Object.entries(localStorage), Object.entries(sessionStorage), history.state]));
  expect(kept).not.toContain(token);
  expect(kept).not.toContain(PASSWORD);
});

test('who is not signed in signs in first, and comes to the page that they wanted', async () => {
  await page.goto('/people');
  await heading('Sign in');
  await signIn(page);
  await heading('People');
  await expect(page).toHaveTitle('People: Skewline');
  await expect(page.getByRole('link', { name: 'People', exact: true }).first()).toHaveAttribute('aria-current', 'page');
});

test('someone is invited, and the mail with their link is kept', async () => {
  await page.getByRole('button', { name: 'Invite someone' }).click();
  await page.getByLabel('Email').fill('bea@example.org');
  await page.getByLabel('Name', { exact: true }).fill('Bea Okafor');
  await page.getByLabel('Role').selectOption('coordinator');
  await page.getByRole('button', { name: 'Send the invitation' }).click();
  await expect(page.getByRole('status').filter({ hasText: 'Invitation sent to bea@example.org.' })).toBeVisible();
  await page.getByRole('link', { name: 'Bea Okafor' }).click();
  await heading('Bea Okafor');
  await expect(page.getByRole('main')).toBeFocused();
  await page.goto('/mails');
  await expect(page.getByRole('article').getByRole('link', { name: /\/invitation#/ })).toBeVisible();
});

test('an act that is undone is undone', async () => {
  await page.goto('/people/2');
  await page.getByRole('button', { name: 'Disable' }).click();
  await expect(page.getByText('Bea Okafor is disabled and signed out.')).toBeVisible();
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect(page.getByText('Bea Okafor can sign in again.')).toBeVisible();
});

test('instants carry the scale that a key chooses, and it is kept', async () => {
  await page.goto('/account');
  await expect(page.locator('sw-instant').first()).toHaveText(/^\d{4}-\d\d-\d\d \d\d:\d\d:\d\d UTC$/);
  await page.keyboard.press('t');
  await expect(page.locator('sw-instant').first()).toHaveText(/TAI$/);
  await page.reload();
  await expect(page.locator('sw-instant').first()).toHaveText(/TAI$/);
});

test('the theme is there before the first paint, and stays', async () => {
  await page.getByRole('button', { name: 'Dark', exact: true }).click();
  await page.reload({ waitUntil: 'commit' });
  await page.waitForFunction(() => document.documentElement.dataset['theme'] === 'dark');
  await expect(page.locator('body')).toHaveCSS('background-color', 'rgb(15, 21, 19)');
  await page.getByRole('button', { name: 'System', exact: true }).click();
});

test('the palette finds a page by its words, and single keys can be switched off', async () => {
  await page.keyboard.press('Control+k');
  await page.getByRole('combobox', { name: 'Find a page, site or command' }).fill('audit');
  await page.keyboard.press('Enter');
  await heading('Audit trail');
  await page.keyboard.press('?');
  await page.getByRole('checkbox', { name: 'Single keys act' }).uncheck();
  await page.keyboard.press('Escape');
  await page.keyboard.press('g');
  await page.keyboard.press('p');
  await heading('Audit trail');
  await page.evaluate(() => localStorage.setItem('skewline-shortcuts', 'on'));
});

test('a session that ended asks for the password in place, and what was typed stays', async () => {
  await page.goto('/people');
  await page.getByRole('button', { name: 'Invite someone' }).click();
  await page.getByLabel('Email').fill('cleo@example.org');
  await page.getByLabel('Name', { exact: true }).fill('Cleo Marsh');
  await page.getByLabel('Role').selectOption('coordinator');
  await context.clearCookies();
  await page.getByRole('button', { name: 'Send the invitation' }).click();
  const dialog = page.getByRole('dialog');
  await expect(dialog).toContainText(`Sign in again as ${EMAIL}. What you typed stays.`);
  await dialog.getByLabel('Password', { exact: true }).fill(PASSWORD);
  await dialog.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByText('Invitation sent to cleo@example.org.')).toBeVisible();
  expect(faults.splice(0).every((text) => text.includes('401'))).toBe(true); // what the browser says of a refused request
});

test('the desk of a deployment without a network says so, and leads to the first steps', async () => {
  await page.goto('/desk');
  await expect(page.getByRole('main')).toContainText('No network yet');
  await page.getByRole('link', { name: 'Begin the first steps' }).click();
  await expect(page).toHaveURL(/first-steps$/);
});

test('an address that leads nowhere says so inside the application', async () => {
  await page.goto('/no/such/page');
  await heading('No such page');
  await expect(page.getByRole('navigation', { name: 'Main', exact: true })).toBeVisible();
});

for (const colorScheme of ['light', 'dark'] as const)
  for (const viewport of SIZES)
    test(`17: every page keeps the content policy, and axe finds nothing, ${colorScheme}, ${viewport.width} px`, async () => {
      await page.setViewportSize(viewport);
      await page.emulateMedia({ colorScheme });
      for (const path of PATHS) {
        await page.goto(path);
        await expect(page.getByRole('heading', { level: 1 })).toBeVisible();
        await expect(page.locator('sw-skeleton')).toHaveCount(0);
        const { violations } = await new AxeBuilder({ page }).withTags(WCAG).analyze();
        expect({ path, violations }).toEqual({ path, violations: [] });
        expect({ path, width: await page.evaluate(() => document.documentElement.scrollWidth) }).toEqual({ path, width: viewport.width });
      }
    });

test('nothing was said in the console, and nothing asked of another machine', () => {
  expect(faults).toEqual([]);
  expect(foreign).toEqual([]);
});

test('after signing out nothing is left but choices', async () => {
  await page.setViewportSize({ width: 1440, height: 900 });
  await page.goto('/account');
  await page.getByRole('button', { name: 'Sign out everywhere' }).click();
  await page.getByRole('dialog').getByRole('textbox').fill('sign out');
  await page.getByRole('dialog').getByRole('button', { name: 'Sign out everywhere' }).click();
  await heading('Sign in');
  expect(await page.evaluate(() => Object.keys(localStorage).sort())).not.toContain('skewline-renewed-at-ms');
  await page.goto('/people');
  await heading('Sign in');
});
