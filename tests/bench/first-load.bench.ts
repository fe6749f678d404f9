import { mkdtempSync, rmSync } from 'node:fs';
import { createServer, request, type IncomingHttpHeaders } from 'node:http';
import { type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { gzipSync } from 'node:zlib';
import { type Browser, type Page } from '@playwright/test';
import { openBrowser, signedIn } from './desk-page';
import { fillStored } from './stored-coincidences';
import { type MeasuredServer, startMeasuredServer } from './measured-server';
import { median, ratioText } from './medians';

const LOADS = Number(process.env['LOADS'] ?? 12);
const WARM = 2;
const ROWS = 2_000; // stored events and as many coincidences
const AIM_KB = 250;
const FIRST_ROW = 'sw-set-table [role=row].row';
/** Any page of who is signed in that has next to nothing of its own. */
const BARE_PAGE = '/no-such-page';
const HASHED = /-[A-Z0-9]{8}\.(?:js|css)$/;

/** Says when the first row of the table was painted: of the desk, and of the page that is it without running. */
const WATCH = `{
  const look = () => {
    if (!document.querySelector(${JSON.stringify(FIRST_ROW)})) return requestAnimationFrame(look);
    requestAnimationFrame(() => (window.firstRowMs = performance.now()));
  };
  look();
}`;

interface Answer {
  readonly bytes: number;
  readonly headers: IncomingHttpHeaders;
}

/** An answer as it comes over the wire, asked for as a browser does. */
const fetched = (url: string): Promise<Answer> =>
  new Promise((resolve, reject) => {
    const headers = { accept: /\.\w+$/.test(url) ? '*/*' : 'text/html', 'accept-encoding': 'gzip' };
    request(url, { headers }, (res) => {
      let bytes = 0;
      res.on('data', (piece: Buffer) => (bytes += piece.length));
      res.on('end', () => resolve({ bytes, headers: res.headers }));
    })
      .on('error', reject)
      .end();
  });

/** What an answer lacks of how it should be compressed and kept. */
function faultsOf(url: string, { headers }: Answer, isSmall: boolean): string[] {
  const kept = headers['cache-control'] ?? '';
  const isKept = HASHED.test(url) ? kept.includes('immutable') && kept.includes('max-age=31536000') : kept.includes('no-cache');
  return [
    ...(isSmall || headers['content-encoding'] === 'gzip' ? [] : [`${url} comes uncompressed`]),
    ...(isKept ? [] : [`${url} is kept by '${kept}'`]),
  ];
}

/** The scripts that a page has fetched when it has come to rest. */
async function scriptsOf(browser: Browser, server: MeasuredServer, path: string, awaited: string): Promise<readonly string[]> {
  const context = await signedIn(browser, server);
  const page = await context.newPage();
  const scripts: string[] = [];
  page.on('request', (asked) => asked.resourceType() === 'script' && scripts.push(asked.url()));
  await page.goto(path);
  await page.locator(awaited).first().waitFor();
  await page.waitForLoadState('networkidle').catch(() => undefined);
  await context.close();
  return [...new Set(scripts)];
}

async function kbOf(scripts: readonly string[]): Promise<number> {
  const answers = await Promise.all(scripts.map(fetched));
  return answers.reduce((sum, { bytes }) => sum + bytes, 0) / 1e3;
}

async function firstRow(page: Page): Promise<number> {
  const at = await page.waitForFunction(() => (window as { firstRowMs?: number }).firstRowMs);
  return (await at.jsonValue()) ?? NaN;
}

/** The desk as it stands with its first rows, and everything that was fetched for it, as one document that runs nothing. */
async function asStatic(browser: Browser, server: MeasuredServer): Promise<string> {
  const context = await signedIn(browser, server);
  const page = await context.newPage();
  await page.addInitScript(WATCH);
  const bodies: Promise<string>[] = [];
  const styles: Promise<string>[] = [];
  page.on('response', (answer) => {
    const kind = answer.request().resourceType();
    if (kind === 'script' || kind === 'xhr' || kind === 'fetch') bodies.push(answer.text().catch(() => ''));
    if (kind === 'stylesheet') styles.push(answer.text());
  });
  await page.goto('/desk');
  await firstRow(page);
  const body = await page.evaluate(() => document.body.outerHTML);
  const own = await page.evaluate(() => [...document.querySelectorAll('head style')].map((style) => style.textContent).join('\n'));
  const inert = (await Promise.all(bodies)).map(
    (text) => `<script type="text/plain">${text.replaceAll('</script', '<\\/script')}</script>`,
  );
  const html = body.replaceAll(/<script[^>]*>[\s\S]*?<\/script>|<link[^>]*>/g, '');
  await context.close();
  return `<!doctype html><html><head><style>${(await Promise.all(styles)).join('\n')}\n${own}</style>${inert.join('')}</head>${html}</html>`;
}

/** A server that answers with a document alone, compressed beforehand. */
async function serveStatic(html: string) {
  const body = gzipSync(html);
  const server = createServer((_req, res) => {
    res.writeHead(200, { 'content-type': 'text/html; charset=utf-8', 'content-encoding': 'gzip' }).end(body);
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  return { url: `http://127.0.0.1:${(server.address() as AddressInfo).port}/`, kb: body.length / 1e3, close: () => server.close() };
}

const folder = mkdtempSync(join(tmpdir(), 'skewline-first-load-'));
const browser = await openBrowser();
try {
  const server = await startMeasuredServer(folder, (db, measured) => db.$client.transaction(() => fillStored(db, measured, ROWS))());
  const index = await fetched(`${server.url}/desk`);
  const before = await scriptsOf(browser, server, BARE_PAGE, 'main');
  const whole = await scriptsOf(browser, server, '/desk', FIRST_ROW);
  const faults = faultsOf('index.html', index, false);
  for (const script of whole.filter((url) => HASHED.test(url))) {
    const answer = await fetched(script);
    faults.push(...faultsOf(script, answer, answer.bytes < 1_100)); // which compression leaves as they are
  }
  console.log(`first load: of who is signed in, nothing kept from before, as the built server answers`);
  console.log(
    `  scripts, gzip   ${(await kbOf(before)).toFixed(0)} kB before a page's own part (aim ${AIM_KB}), ${(await kbOf(whole)).toFixed(0)} kB with the desk   (${before.length} and ${whole.length} files)`,
  );
  console.log(`  compressed, scripts kept for good and index.html asked for anew: ${faults.length === 0 ? 'all' : faults.join('; ')}`);

  const still = await serveStatic(await asStatic(browser, server));
  const [ours, theirs]: [number[], number[]] = [[], []];
  for (let load = 0; load < LOADS + WARM; load++) {
    const context = await signedIn(browser, server);
    const desk = await context.newPage();
    await desk.addInitScript(WATCH);
    await desk.goto('/desk');
    const deskMs = await firstRow(desk);
    await context.close();
    const page = await browser.newPage({ viewport: { width: 1440, height: 900 } });
    await page.addInitScript(WATCH);
    await page.goto(still.url);
    const stillMs = await firstRow(page);
    await page.close();
    if (load < WARM) continue;
    ours.push(deskMs);
    theirs.push(stillMs);
  }
  still.close();
  console.log(
    `  time to the desk's first row / the same bytes and rows as one page that runs nothing   ${ratioText(ours, theirs)}   (${median(ours).toFixed(0)} and ${median(theirs).toFixed(0)} ms, ${still.kb.toFixed(0)} kB)`,
  );
  await server.stop();
} finally {
  await browser.close();
  rmSync(folder, { recursive: true, force: true });
}
