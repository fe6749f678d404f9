import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startLiveApp, type LiveApp } from '../live/live-app';
import { memoryOfStopped } from '../live/stopped';

let app: LiveApp;
beforeAll(async () => {
  app = await startLiveApp();
});
afterAll(() => app.close());

describe('20 stopped browsers', () => {
  it('cost at most 50 MB while 300,000 records come', async () => {
    expect(await memoryOfStopped(app, 20, 334)).toBeLessThan(50);
  });
});
