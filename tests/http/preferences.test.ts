import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startApp, type RunningApp } from '../support/app';
import { makeWorld, type World } from '../support/world';

let app: RunningApp;
let world: World;
beforeAll(async () => {
  app = await startApp();
  world = await makeWorld(app);
});
afterAll(async () => {
  await app.close();
});

const NOTHING_SAID = { theme: null, scale: null, shortcuts: null };

describe('how a person likes things', () => {
  it('is nothing until they say so, and then theirs in every session and nobody else\u2019s', async () => {
    const here = world.as('analyst');
    expect((await here.get('/me/preferences')).body).toEqual(NOTHING_SAID);
    expect((await here.patch('/me/preferences', { theme: 'dark' })).body).toEqual({ ...NOTHING_SAID, theme: 'dark' });
    expect((await here.patch('/me/preferences', { scale: 'TAI', shortcuts: 'off' })).status).toBe(200);
    const elsewhere = world.as('analyst');
    expect((await elsewhere.get('/me/preferences')).body).toEqual({ theme: 'dark', scale: 'TAI', shortcuts: 'off' });
    expect((await world.as('reviewer').get('/me/preferences')).body).toEqual(NOTHING_SAID);
  });

  it('is refused in a word that is not known, and kept as it was', async () => {
    const here = world.as('operator');
    await here.patch('/me/preferences', { theme: 'light' });
    const refused = await here.patch('/me/preferences', { theme: 'purple' });
    expect(refused.status).toBe(400);
    expect(refused.text).toContain('it must be one of');
    expect((await here.patch('/me/preferences', { colour: 'dark' })).status).toBe(400);
    expect((await here.get('/me/preferences')).body).toEqual({ ...NOTHING_SAID, theme: 'light' });
  });
});
