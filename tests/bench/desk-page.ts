import { type Browser, type BrowserContext, chromium, type CDPSession, type Page } from '@playwright/test';
import { type MeasuredServer } from './measured-server';

export const openBrowser = (): Promise<Browser> => chromium.launch({ executablePath: process.env['CHROMIUM'] ?? '/usr/bin/chromium' });

/** By it the application knows that its browser has a session. */
const RENEWED_AT = 'skewline-renewed-at-ms';

/** A window of the browser, with nothing stored but that the analyst of a measured server has just signed in. */
export const signedIn = (browser: Browser, { url, client }: Pick<MeasuredServer, 'url' | 'client'>): Promise<BrowserContext> =>
  browser.newContext({
    baseURL: url,
    viewport: { width: 1440, height: 900 },
    storageState: {
      cookies: [...client.cookies].map(([name, value]) => ({
        ...{ name, value, domain: new URL(url).hostname, path: '/', expires: -1 },
        ...{ httpOnly: true, secure: true, sameSite: 'Strict' as const },
      })),
      origins: [{ origin: url, localStorage: [{ name: RENEWED_AT, value: String(Date.now()) }] }],
    },
  });

/** What the browser's own counters say of a page. */
export interface PageMeter {
  /** How long tasks of the page's main thread have run so far, ms. */
  readonly taskMs: () => Promise<number>;
  /** What its scripts hold after all has been collected that they no longer reach. */
  readonly heapMB: () => Promise<number>;
}

export async function meterOf(page: Page): Promise<PageMeter> {
  const session: CDPSession = await page.context().newCDPSession(page);
  await session.send('Performance.enable');
  const read = async (name: string): Promise<number> => {
    const { metrics } = await session.send('Performance.getMetrics');
    return metrics.find((metric) => metric.name === name)?.value ?? NaN;
  };
  return {
    taskMs: async () => (await read('TaskDuration')) * 1e3,
    heapMB: async () => {
      for (let i = 0; i < 3; i++) await session.send('HeapProfiler.collectGarbage'); // what a finalizer frees goes with the next one
      return (await read('JSHeapUsedSize')) / 2 ** 20;
    },
  };
}
