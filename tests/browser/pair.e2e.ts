import { readFileSync } from 'node:fs';
import { AxeBuilder } from '@axe-core/playwright';
import { type BrowserContext, expect, type Page, test } from '@playwright/test';
import { C_M_S } from '#shared/constants';
import { type CoincidenceBrief, type CoincidenceInFull } from '#shared/contract/coincidence';
import { type EventInFull } from '#shared/contract/event-routes';
import { type PairsOfSet } from '#shared/contract/pair-routes';
import { newFolder } from '../support/folder';
import { type RunningServer, startServer } from '../support/server';
import { demoAccount, enter } from './demo-account';

const WCAG = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];
const SIZES = [
  { width: 1440, height: 900 },
  { width: 390, height: 844 },
];
const FILLED_MS = 60_000; // until the demo's minutes before the start are there
const MINUS = '\u2212';
/** What the browser itself says of a request that was answered 404. */
const NOT_FOUND = 'Failed to load resource: the server responded with a status of 404';

test.describe.configure({ mode: 'serial' });

let server: RunningServer;
let dataDir: string;
let context: BrowserContext;
let page: Page;
let set: CoincidenceInFull;
const faults: string[] = [];
const foreign: string[] = [];

const ask = async <T>(path: string): Promise<T> => (await (await page.request.get(`api${path}`)).json()) as T;
const heading = () => page.getByRole('heading', { level: 1 });
const pairOf = (a: number, b: number): Promise<PairsOfSet> => ask(`/networks/1/pairs?events=${a},${b}`);
/** The ids of a pair of the coincidence, by its place in the list. */
function idsAt(at: number): [number, number] {
  const { a, b } = set.pairs[at]!;
  const idOf = (place: number): number => set.members.find((member) => member.place === place)!.eventId;
  return [idOf(a), idOf(b)];
}
/** Digits of a figure on the screen, without its unit, gaps and true minus. */
const figure = (text: string | null): number => Number(/[-+]?[\d.]+/.exec((text ?? '').replace(/\u202f/g, '').replace(MINUS, '-'))?.[0]); // prettier-ignore

test.beforeAll(async ({ browser }) => {
  test.setTimeout(2 * FILLED_MS);
  dataDir = newFolder('browser-pair');
  server = await startServer({ DATA_DIR: dataDir, DEMO: 'on' });
  context = await browser.newContext({ baseURL: server.url, viewport: SIZES[0]!, acceptDownloads: true });
  page = await context.newPage();
  page.on('console', (message) => {
    if (['error', 'warning'].includes(message.type())) faults.push(message.text());
  });
  page.on('pageerror', (fault) => faults.push(String(fault)));
  page.on('request', (request) => {
    if (!request.url().startsWith(server.url) && !/^(?:data|blob|ws):/.test(request.url())) foreign.push(request.url());
  });
  await enter(page, demoAccount(dataDir, 'analyst'));
  await expect
    .poll(
      async () => {
        const list = await ask<{ items: CoincidenceBrief[] }>('/networks/1/coincidences?state=final&class=spacelike&sort=fold&order=down&limit=1'); // prettier-ignore
        if (list.items[0]) set = await ask(`/coincidences/${list.items[0].id}`);
        return list.items[0]?.fold ?? 0;
      },
      { timeout: FILLED_MS, message: 'a coincidence of three sites' },
    )
    .toBeGreaterThanOrEqual(3);
});
test.afterAll(async () => {
  await context.close();
  await server.stop();
});

const shortOf = (sigma: number): number => Number(Math.abs(sigma) < 1_000 ? sigma.toFixed(1) : sigma.toPrecision(3));

test('says in a sentence that the order depends on the frame, with the figures of the server', async () => {
  const [a, b] = idsAt(0);
  await page.goto(`/pair/${b}/${a}?set=${set.id}`);
  await expect(heading()).toHaveText('Order depends on the frame.');
  const { pairs, events } = await pairOf(a, b);
  const pair = pairs[0]!;
  await expect(page).toHaveTitle(`${events[0]!.name} and ${events[1]!.name}: Skewline`);
  const verdict = page.locator('header.verdict');
  // Above 1,000 three digits are shown, and all of them in the title.
  const margin = verdict.getByText(/^margin/);
  expect(figure(await margin.textContent())).toBe(shortOf(Number(pair.marginSigma)));
  expect(figure(await margin.getAttribute('title'))).toBeCloseTo(Number(pair.marginSigma), 0);
  const reverse = verdict.getByText(/^reverse margin/);
  expect(figure(await reverse.textContent())).toBe(shortOf(Number(pair.reverseMarginSigma)));
  expect(figure(await reverse.locator('.figure').getAttribute('title'))).toBeCloseTo(Number(pair.reverseMarginSigma), 0);
  await expect(verdict).toContainText(`Turning speed ${pair.turning!.speedC.toFixed(3)} c, counted from the geocentric frame`);
  expect(figure(await page.locator('.orders b.turning').textContent())).toBeCloseTo(pair.turning!.speedC, 3);
  const [geocentric] = pair.orders;
  const row = page.getByRole('row').filter({ hasText: 'Geocentric' });
  await expect(row).toContainText(geocentric!.order === 'tie' ? 'tie' : `${events[0]!.site} first`);
  const unit = { ms: 1e6, '\u00b5s': 1e3, ns: 1 }[(await page.getByRole('columnheader', { name: /^\u0394t/ }).textContent())!.split(', ')[1] as 'ms']; // prettier-ignore
  const printedNs = figure(await row.getByRole('cell').nth(2).textContent()) * unit;
  expect(Math.abs(printedNs - geocentric!.dtNs)).toBeLessThanOrEqual(0.000_501 * unit); // three decimals
  await expect(page.getByRole('row')).toHaveCount(1 + pair.orders.length);
  const printed = (await page.locator('dl').filter({ hasText: 'Proper distance' }).locator('small').textContent())!;
  const unitM = /\d\s*km/.test(printed) ? 1e3 : 1;
  const distance = pair.properDistanceM! / unitM;
  expect(figure(printed)).toBeCloseTo(distance, distance >= 1e3 ? -1 : 2);
});

test('adds the terms of the error up to what the margin is counted in', async () => {
  const [a, b] = idsAt(0);
  const { pairs } = await pairOf(a, b);
  const budget = page.getByRole('listitem').filter({ has: page.locator('.bar') });
  await expect(budget).toHaveCount(pairs[0]!.terms.length + 1);
  const squares = pairs[0]!.terms.reduce((sum, { sigmaNs }) => sum + sigmaNs ** 2, 0);
  expect(Math.sqrt(squares)).toBeCloseTo(pairs[0]!.sigmaGapNs, 6); // some roundings of a double
  const widths = await budget
    .locator('i')
    .evaluateAll((bars) => bars.map((bar) => bar.getBoundingClientRect().width / bar.parentElement!.clientWidth));
  pairs[0]!.terms.forEach(({ sigmaNs }, i) => expect(widths[i]).toBeCloseTo(sigmaNs / pairs[0]!.sigmaGapNs, 1));
});

test('stands both readings there as they were written, and every step to the events', async () => {
  const [a, b] = idsAt(0);
  for (const [name, id] of [
    ['reading-a', a],
    ['reading-b', b],
  ] as const) {
    // prettier-ignore
    const event = await ask<EventInFull>(`/events/${id}`);
    const reading = page.locator(`#${name}`);
    await expect(reading.getByText(event.record.reading, { exact: true })).toBeVisible();
    const { delayNs, takenOffNs } = event.current!.correction!;
    expect(figure(await reading.getByRole('listitem').filter({ hasText: 'Less cable delay' }).locator('.figure').first().textContent())).toBeCloseTo(-delayNs, 0); // prettier-ignore
    const whole = await reading.getByText(/^all taken off together/).textContent();
    expect(figure(whole)).toBeCloseTo(-takenOffNs, 0);
  }
});

test('leads the turning line through both marks of the diagram, and the cone at 45 degrees', async () => {
  const [a, b] = idsAt(0);
  const { pairs } = await pairOf(a, b);
  const ends = await page.locator('sw-diagram path.turning').evaluate((line: SVGPathElement) => {
    const [from, to] = [line.getPointAtLength(0), line.getPointAtLength(line.getTotalLength())];
    return { slope: -(to.y - from.y) / (to.x - from.x) };
  });
  const lightNs = (pairs[0]!.distanceM / C_M_S) * 1e9;
  expect(ends.slope).toBeCloseTo(pairs[0]!.dtNs / lightNs, 3); // a path is cut at hundredths of a pixel
  await page.locator('sw-diagram > svg').focus();
  await page.keyboard.press('ArrowRight');
  await expect(page.locator('sw-diagram .tip')).toContainText('the later, spacelike');
});

test('walks the pairs of its coincidence by J and K, and keeps where it came from', async () => {
  const count = set.pairs.length;
  await heading().click();
  await expect(page.getByText(`Pair 1 of ${count}`)).toBeVisible();
  await page.keyboard.press('j');
  await expect(page.getByText(`Pair 2 of ${count}`)).toBeVisible();
  await expect(page).toHaveURL(new RegExp(`/pair/${idsAt(1).join('/')}\\?set=${set.id}$`));
  await page.keyboard.press('k');
  await expect(page.getByText(`Pair 1 of ${count}`)).toBeVisible();
  await page.getByRole('button', { name: 'Next pair' }).click();
  await expect(page.getByText(`Pair 2 of ${count}`)).toBeVisible();
  await expect(page.locator('.parts').getByRole('link', { name: set.name.slice(0, 6) })).toBeVisible();
});

test('exports the numbers with all their digits, and the diagram as a picture', async () => {
  const [a, b] = idsAt(1);
  const save = async (item: string) => {
    await page.getByRole('button', { name: 'Export' }).click();
    const [download] = await Promise.all([page.waitForEvent('download'), page.getByRole('menuitem', { name: item }).click()]);
    return readFileSync(await download.path());
  };
  const numbers = JSON.parse((await save('Numbers as JSON')).toString()) as PairsOfSet;
  expect(numbers.pairs).toEqual((await pairOf(a, b)).pairs);
  expect((await save('Diagram as SVG')).toString()).toContain('positive = timelike');
  expect([...(await save('Diagram as PNG')).subarray(1, 4)]).toEqual([...Buffer.from('PNG')]);
});

test('shows two events of one site, in no coincidence', async () => {
  const { items } = await ask<{ items: { id: number; site: string; name: string }[] }>('/networks/1/events?limit=60');
  const [one, other] = items.filter(({ site }) => site === items[0]!.site);
  await page.goto(`/pair/${one!.id}/${other!.id}`);
  await expect(heading()).toHaveText(`${one!.name} comes first in every frame.`);
  await expect(page.getByText('its worldline is the only one')).toBeVisible();
  await expect(page.getByText('No frame turns this order.')).toBeVisible();
});

for (const colorScheme of ['light', 'dark'] as const)
  for (const viewport of SIZES)
    test(`17: axe finds nothing on a pair, ${colorScheme}, ${viewport.width} px, and it is as wide as the screen`, async () => {
      await page.setViewportSize(viewport);
      await page.emulateMedia({ colorScheme });
      for (const path of [`/pair/${idsAt(0).join('/')}?set=${set.id}`, '/pair/1/1']) {
        await page.goto(path);
        await expect(page.locator('main sw-skeleton')).toHaveCount(0);
        await expect(heading()).toBeVisible();
        const { violations } = await new AxeBuilder({ page }).withTags(WCAG).analyze();
        expect({ path, violations }).toEqual({ path, violations: [] });
        expect({ path, width: await page.evaluate(() => document.documentElement.scrollWidth) }).toEqual({ path, width: viewport.width });
      }
    });

test('has no words of its picture on one another at 390 px', async () => {
  await page.setViewportSize(SIZES[1]!);
  for (let at = 0; at < set.pairs.length; at++) {
    await page.goto(`/pair/${idsAt(at).join('/')}?set=${set.id}`);
    await expect(page.locator('sw-diagram .word').first()).toBeVisible();
    const touching = await page.locator('sw-diagram .word:not([transform*=rotate])').evaluateAll((words) => {
      const areas = words.map((word) => ({ text: word.textContent, area: word.getBoundingClientRect() }));
      const [acrossPx, overPx] = [0, 4]; // lines are higher than their letters
      return areas.flatMap(({ text, area: a }, i) =>
        areas
          .slice(i + 1)
          .filter(
            ({ area: b }) =>
              Math.min(a.right, b.right) - Math.max(a.left, b.left) > acrossPx &&
              Math.min(a.bottom, b.bottom) - Math.max(a.top, b.top) > overPx,
          )
          .map((other) => `${text} and ${other.text}`),
      );
    });
    expect(touching).toEqual([]);
  }
});

test('says that an event stands twice in the address, and nothing was said in the console until here', async () => {
  await page.goto('/pair/1/1');
  await expect(heading()).toHaveText('The same event twice');
  expect(faults).toEqual([]);
  expect(foreign).toEqual([]);
});

test('says which event is not there', async () => {
  await page.goto(`/pair/999999999/${idsAt(0)[0]}`);
  await expect(heading()).toHaveText('No such pair');
  await expect(page.getByText('There is no event with the id 999999999, or it is not yours to see.')).toBeVisible();
  expect(faults.splice(0).every((text) => text.includes(NOT_FOUND))).toBe(true);
});

test('shows an operator no event of another site, and a pair of their own', async ({ browser }) => {
  const theirs = await browser.newContext({ baseURL: server.url, viewport: SIZES[0]! });
  const operator = await theirs.newPage();
  await enter(operator, demoAccount(dataDir, 'operator'));
  const { items } = (await (await operator.request.get('api/networks/1/events?limit=60')).json()) as {
    items: { id: number; site: string }[];
  };
  const seen = new Set(items.map(({ site }) => site));
  const foreignEvent = set.members.find(({ site }) => !seen.has(site))!;
  await operator.goto(`/pair/${items[0]!.id}/${foreignEvent.eventId}`);
  await expect(operator.getByRole('heading', { level: 1 })).toHaveText('No such pair');
  await expect(operator.getByText(`There is no event with the id ${foreignEvent.eventId}`)).toBeVisible();
  await expect(operator.getByRole('main')).not.toContainText(foreignEvent.name);
  await operator.goto(`/pair/${items[0]!.id}/${items[1]!.id}`);
  await expect(operator.getByRole('heading', { level: 2, name: 'Order across frames' })).toBeVisible();
  await expect(operator.getByRole('heading', { name: 'Part of' })).toHaveCount(0);
  await theirs.close();
});
