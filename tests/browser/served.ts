import { test as base } from '@playwright/test';
import { newFolder } from '../support/folder';
import { type RunningServer, startServer } from '../support/server';

/** What a person would see in the browser's console as a fault, or never ought to be asked for. */
export interface Watch {
  readonly faults: string[];
  readonly foreign: string[];
}

/** Browser tests against the built server: one for all of a worker, with a data folder of its own. */
export const test = base.extend<{ watch: Watch }, { server: RunningServer }>({
  server: [
    // eslint-disable-next-line no-empty-pattern -- Playwright reads the fixtures that are needed off this pattern
    async ({}, use) => {
      const server = await startServer({ DATA_DIR: newFolder('browser') });
      await use(server);
      await server.stop();
    },
    { scope: 'worker' },
  ],
  baseURL: async ({ server }, use) => {
    await use(server.url);
  },
  watch: async ({ page, server }, use) => {
    const watch: Watch = { faults: [], foreign: [] };
    page.on('console', (message) => {
      if (['error', 'warning'].includes(message.type())) watch.faults.push(message.text());
    });
    page.on('pageerror', (fault) => watch.faults.push(String(fault)));
    page.on('request', (request) => {
      if (!request.url().startsWith(server.url) && !request.url().startsWith('data:')) watch.foreign.push(request.url());
    });
    await use(watch);
  },
});
