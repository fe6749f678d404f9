import { defineConfig } from '@playwright/test';

export default defineConfig({
  testDir: '.',
  testMatch: '*.e2e.ts',
  outputDir: '../../test-results/browser',
  reporter: [['line'], ['json', { outputFile: '../../test-results/browser.json' }]],
  forbidOnly: Boolean(process.env['CI']),
  workers: 1,
  timeout: 180_000, // a walk over all pages, on a machine that does other work too
  expect: { timeout: 30_000 },
  use: {
    browserName: 'chromium',
    launchOptions: { executablePath: process.env['CHROMIUM'] ?? '/usr/bin/chromium' },
    screenshot: 'only-on-failure',
  },
});
