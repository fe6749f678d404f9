import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { audit, preferences } from '#schema/schema';
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

const NOTHING_SAID = {
  theme: null,
  scale: null,
  shortcuts: null,
  mails: { 'new-browser': 'on', role: 'on', mention: 'on', 'out-of-date': 'on' },
};

describe('how a person likes things', () => {
  it('is nothing until they say so, and then theirs in every session and nobody else\u2019s', async () => {
    const here = world.as('analyst');
    expect((await here.get('/me/preferences')).body).toEqual(NOTHING_SAID);
    expect((await here.patch('/me/preferences', { theme: 'dark' })).body).toEqual({ ...NOTHING_SAID, theme: 'dark' });
    expect((await here.patch('/me/preferences', { scale: 'TAI', shortcuts: 'off' })).status).toBe(200);
    const elsewhere = world.as('analyst');
    expect((await elsewhere.get('/me/preferences')).body).toEqual({ ...NOTHING_SAID, theme: 'dark', scale: 'TAI', shortcuts: 'off' });
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

  it('holds which mails they want, each kind for itself, and what they never said is as usual', async () => {
    const here = world.as('coordinator');
    const off = await here.patch('/me/preferences', { mails: { role: 'off' } });
    expect(off.body).toEqual({ ...NOTHING_SAID, mails: { 'new-browser': 'on', role: 'off', mention: 'on', 'out-of-date': 'on' } });
    await here.patch('/me/preferences', { scale: 'GPS' });
    await here.patch('/me/preferences', { mails: { 'new-browser': 'off' } });
    const said = { ...NOTHING_SAID, scale: 'GPS', mails: { 'new-browser': 'off', role: 'off', mention: 'on', 'out-of-date': 'on' } };
    expect((await here.get('/me/preferences')).body).toEqual(said);
    const { body } = app.ground.db.select().from(preferences).where(eq(preferences.personId, world.people.coordinator)).get()!;
    expect(JSON.parse(body)).toEqual({ scale: 'GPS', mails: { 'new-browser': 'off', role: 'off' } });
    const details = app.ground.db.select({ details: audit.details }).from(audit).where(eq(audit.action, 'my-preferences:changed')).all();
    expect(details.map(({ details: one }) => JSON.parse(one) as unknown)).toContainEqual({ 'mails.role': 'off' });
  });

  it('is refused of a mail that is not known or always comes, and in a word that is none of a switch', async () => {
    const here = world.as('otherCoordinator');
    const unknown = await here.patch('/me/preferences', { mails: { 'password-changed': 'off' } });
    expect(unknown.status).toBe(400);
    expect(unknown.body).toMatchObject({ where: 'mails.password-changed' });
    expect(unknown.text).toContain('known here: new-browser, role, mention, out-of-date');
    expect((await here.patch('/me/preferences', { mails: { role: 'daily' } })).body).toMatchObject({ status: 400, where: 'mails.role' });
    expect((await here.patch('/me/preferences', { mails: ['role'] })).body).toMatchObject({ status: 400, where: 'mails' });
    expect((await here.get('/me/preferences')).body).toEqual(NOTHING_SAID);
  });
});
