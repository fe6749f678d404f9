// npm run tour: starts the demo on a data folder of its own, signs in as each role, and takes the pictures of the tour into results/tour/.
// Those that README.md shows are written to static/tour/ too when asked for by --keep.
/* global document */
import { spawn } from 'node:child_process';
import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { parseArgs } from 'node:util';
import { buildBackend, buildFrontend, checkNode, install, root } from './lib.mjs';

const WIDE = { width: 1024, height: 640 }; // so that a picture of the desk stays below MOST_KEPT_BYTES
const NARROW = { width: 390, height: 844 };
const MOST_KEPT_BYTES = 150_000;
const START_MS = 30_000;
/** Until the ten minutes before the first start are in, and their coincidences found. */
const FILL_MS = 45_000;
const SETTLE_MS = 1_500;

const { values } = parseArgs({ options: { keep: { type: 'boolean', default: false } } });
checkNode();
install();
buildBackend();
buildFrontend();
const { chromium } = await import('@playwright/test');

const dataDir = mkdtempSync(join(tmpdir(), 'skewline-tour-'));
const taken = join(root, 'results/tour');
const kept = join(root, 'static/tour');
mkdirSync(taken, { recursive: true });

const server = spawn(process.execPath, ['dist/backend/main.js'], {
  cwd: root,
  env: { PATH: process.env.PATH, NODE_ENV: 'development', DATA_DIR: dataDir, PORT: '0', DEMO: 'on', LOG_LEVEL: 'error' },
  stdio: ['ignore', 'pipe', 'inherit'],
});
const ended = new Promise((resolve) => server.once('exit', resolve));
const url = await new Promise((resolve, reject) => {
  const timer = setTimeout(() => reject(new Error(`the server named no URL in ${START_MS} ms`)), START_MS);
  let said = '';
  server.stdout.on('data', (text) => {
    said += text;
    const found = /http:\/\/\S+\//.exec(said);
    if (!found) return;
    clearTimeout(timer);
    resolve(found[0]);
  });
  void ended.then(() => reject(new Error('the server ended before it named its URL')));
});
const { people } = JSON.parse(readFileSync(join(dataDir, 'demo.json'), 'utf8'));
const browser = await chromium.launch({ executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium' });

/** Opens a browser of its own for a role, signed in. */
async function as(role, options = {}) {
  const { email, password } = people.find((person) => person.role === role);
  const context = await browser.newContext({ baseURL: url, viewport: WIDE, colorScheme: 'light', ...options });
  const page = await context.newPage();
  await page.goto('/sign-in');
  await page.getByLabel('Email').fill(email);
  await page.getByLabel('Password', { exact: true }).fill(password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.getByRole('heading', { level: 1 }).and(page.locator(':not(:text("Sign in"))')).waitFor();
  return page;
}

/** Takes a picture once nothing loads any more. */
async function picture(page, name, { keep = false } = {}) {
  await page.waitForFunction(() => document.querySelector('main h1') && !document.querySelector('sw-skeleton'));
  await page.evaluate(() => document.fonts.ready);
  await page.waitForTimeout(SETTLE_MS);
  const image = await page.screenshot({ animations: 'disabled' });
  writeFileSync(join(taken, `${name}.png`), image);
  console.error(`results/tour/${name}.png ${image.length} bytes`);
  if (!keep || !values.keep) return;
  if (image.length > MOST_KEPT_BYTES) throw new Error(`${name}.png has ${image.length} bytes; at most ${MOST_KEPT_BYTES} may be kept`);
  mkdirSync(kept, { recursive: true });
  writeFileSync(join(kept, `${name}.png`), image);
}

/** The pair whose order turns at the least speed: what the tour ends with. */
async function turningPair(page) {
  const read = async (path) => (await page.request.get(`/api${path}`)).json();
  const [network] = (await read('/networks')).items;
  const { items } = await read(`/networks/${network.id}/coincidences?sort=turning&class=spacelike&limit=1`);
  const { members, pairs } = await read(`/coincidences/${items[0].id}`);
  const { a, b } = pairs.find((pair) => pair.class === 'spacelike');
  return [members[a - 1].eventId, members[b - 1].eventId];
}

try {
  const analyst = await as('analyst');
  await analyst.waitForTimeout(FILL_MS);
  await analyst.goto('/desk');
  await picture(analyst, 'desk', { keep: true });
  const [eventA, eventB] = await turningPair(analyst);
  await analyst.goto(`/pair/${eventA}/${eventB}`);
  await picture(analyst, 'pair', { keep: true });
  await analyst.goto('/frames');
  await picture(analyst, 'frames', { keep: true });
  await analyst.goto('/rules');
  await picture(analyst, 'rules');
  const dark = await as('reviewer', { colorScheme: 'dark' });
  await picture(dark, 'desk-dark');
  const narrow = await as('reviewer', { viewport: NARROW });
  await picture(narrow, 'desk-narrow');

  const operator = await as('operator');
  await picture(operator, 'sites');
  await operator.getByRole('link', { name: 'OMB' }).click();
  await picture(operator, 'site', { keep: true });

  const coordinator = await as('coordinator');
  await coordinator.goto('/set-asides');
  await coordinator.locator('tbody button').first().click();
  await coordinator.locator('sw-set-aside-detail h2').waitFor();
  await picture(coordinator, 'set-asides', { keep: true });
  for (const path of ['network', 'people', 'tables', 'audit', 'account']) {
    await coordinator.goto(`/${path}`);
    await picture(coordinator, path);
  }
} finally {
  await browser.close();
  server.kill('SIGTERM');
  await ended;
  rmSync(dataDir, { recursive: true, force: true });
}
