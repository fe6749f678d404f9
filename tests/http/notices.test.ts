import { type AddressInfo } from 'node:net';
import { buffer } from 'node:stream/consumers';
import { eq } from 'drizzle-orm';
import PostalMime, { type Email } from 'postal-mime';
import { SMTPServer } from 'smtp-server';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { networks, people } from '#schema/schema';
import { type Letter } from '../../backend/mail/letters';
import { startApp, type RunningApp } from '../support/app';
import { Client } from '../support/client';
import { mailedTo, tokenMailedTo } from '../support/mails';
import { makeWorld, PASSWORD, type Persona, type World } from '../support/world';

const DAY_MS = 24 * 3600_000;
const OTHER_PASSWORD = 'another gravel omelette';
const FIREFOX = 'Mozilla/5.0 (X11; Linux x86_64; rv:150.0) Gecko/20100101 Firefox/150.0';
const NEXT_FIREFOX = FIREFOX.replaceAll('150', '151');
const CHROMIUM = 'Mozilla/5.0 (Windows NT 10.0; Win64; x64) AppleWebKit/537.36 (KHTML, like Gecko) Chrome/156.0.0.0 Safari/537.36';

let app: RunningApp;
let world: World;
/** Each letter as it is posted, in the transaction's wake and before the answer: what is not here by then was not sent. */
let posted: Letter[];

async function begin(smtpUrl?: string): Promise<void> {
  app = await startApp({ publicOrigin: 'https://skewline.example', ...(smtpUrl !== undefined && { smtpUrl }) });
  world = await makeWorld(app);
  posted = [];
  const { post } = app.ground;
  vi.spyOn(app.ground, 'post').mockImplementation((letter) => {
    posted.push(letter);
    post(letter);
  });
}

const kindsTo = (persona: Persona) => posted.filter(({ personId }) => personId === world.people[persona]).map(({ kind }) => kind);
/** The one mail that somebody got. */
const mailOf = async (persona: Persona) => (await mailedTo(app, world.emailOf(persona)))[0]!;
const switchOff = (persona: Persona, kind: string) => world.as(persona).patch('/me/preferences', { mails: { [kind]: 'off' } });

async function signIn(persona: Persona, userAgent: string, password = PASSWORD): Promise<Client> {
  const client = new Client(app.url);
  const { status } = await client.post('/sign-in', { email: world.emailOf(persona), password }, { headers: { 'user-agent': userAgent } });
  expect(status).toBe(200);
  return client;
}

async function giveRole(to: Persona, role: string, by: Persona = 'chief', expiresAt: string | null = null) {
  const given = { role, networkId: world.networks.first, siteId: null, expiresAt };
  const { status, body } = await world.as(by).post(`/people/${world.people[to]}/roles`, given);
  expect(status).toBe(201);
  return body as { id: number; version: number };
}

beforeEach(() => begin());
afterEach(async () => {
  await app.close();
});

describe('a new password', () => {
  it('is told by mail to whose it is, whatever they prefer', async () => {
    for (const kind of ['new-browser', 'role']) await switchOff('analyst', kind);
    const { status } = await world.as('analyst').post('/me/password', { current: PASSWORD, password: OTHER_PASSWORD });
    expect(status).toBe(204);
    const { subject, text } = await mailOf('analyst');
    expect(subject).toBe('Your password at Skewline was changed');
    expect(text).toMatch(/^Vera analyst,\n\n/);
    expect(text).toMatch(/When: \d{4}-\d\d-\d\d \d\d:\d\d:\d\d UTC/);
    expect(text).toContain('https://skewline.example/forgotten-password');
    expect(text).not.toContain(OTHER_PASSWORD);
    expect(posted.map(({ kind }) => kind)).toEqual(['password-changed']);
  });

  it('is told where it was chosen by a mailed link, and not where it is the first', async () => {
    await new Client(app.url).post('/resets', { email: world.emailOf('reviewer') });
    const token = await tokenMailedTo(app, world.emailOf('reviewer'));
    expect((await new Client(app.url).post('/resets/use', { token, password: OTHER_PASSWORD })).status).toBe(204);
    expect(kindsTo('reviewer')).toEqual(['reset', 'password-changed']);
    const role = { role: 'analyst', networkId: world.networks.first, siteId: null, expiresAt: null };
    await world.as('chief').post('/people', { email: 'ida@example.org', name: 'Ida Novak', role });
    const invited = await tokenMailedTo(app, 'ida@example.org');
    expect((await new Client(app.url).post('/invitations/accept', { token: invited, password: OTHER_PASSWORD })).status).toBe(204);
    expect(posted.filter(({ to }) => to === 'ida@example.org').map(({ kind }) => kind)).toEqual(['invitation']);
  });

  it('is not told where it was refused', async () => {
    expect((await world.as('analyst').post('/me/password', { current: 'not the password', password: OTHER_PASSWORD })).status).toBe(403);
    expect((await world.as('analyst').post('/me/password', { current: PASSWORD, password: 'password1234' })).status).toBe(400);
    expect(posted).toEqual([]);
  });
});

describe('a sign-in', () => {
  it('from a browser that its person has not used is told by mail, once, and not for its next version', async () => {
    await signIn('analyst', FIREFOX);
    expect(posted).toEqual([]); // the password was chosen a moment ago, and this is the first sign-in with it
    await signIn('analyst', CHROMIUM);
    const { subject, text } = await mailOf('analyst');
    expect(subject).toBe('Sign-in to Skewline from a new browser');
    expect(text).toContain('It calls itself: Chromium on Windows');
    expect(text).toContain('https://skewline.example/account');
    for (const again of [CHROMIUM, FIREFOX, NEXT_FIREFOX]) await signIn('analyst', again);
    expect(kindsTo('analyst')).toEqual(['new-browser']);
  });

  it('from a browser that was last used 30 days ago is told, also where there was no session at all since', async () => {
    await signIn('analyst', FIREFOX);
    app.forwardMs(29 * DAY_MS);
    await signIn('analyst', FIREFOX);
    expect(posted).toEqual([]);
    app.forwardMs(30 * DAY_MS + 60_000);
    await signIn('analyst', FIREFOX);
    expect(kindsTo('analyst')).toEqual(['new-browser']);
  });

  it('of somebody else in the same browser is as new as ever', async () => {
    await signIn('analyst', FIREFOX);
    await signIn('reviewer', CHROMIUM);
    await signIn('reviewer', FIREFOX);
    expect([kindsTo('analyst'), kindsTo('reviewer')]).toEqual([[], ['new-browser']]);
  });

  it('that is refused is told to nobody', async () => {
    await signIn('analyst', FIREFOX);
    const wrong = { email: world.emailOf('analyst'), password: 'not the password' };
    expect((await new Client(app.url).post('/sign-in', wrong, { headers: { 'user-agent': CHROMIUM } })).status).toBe(401);
    expect(posted).toEqual([]);
  });

  it('is not told to who does not want that, and is again once they do', async () => {
    await signIn('analyst', FIREFOX);
    await switchOff('analyst', 'new-browser');
    await signIn('analyst', CHROMIUM);
    expect(posted).toEqual([]);
    await world.as('analyst').patch('/me/preferences', { mails: { 'new-browser': 'on' } });
    await signIn('analyst', 'curl/8.1');
    expect(kindsTo('analyst')).toEqual(['new-browser']);
  });
});

describe('a role', () => {
  it('that is given, changed or ended by somebody else is told by mail, with its place and who did it', async () => {
    const { id } = await giveRole('nobodySpecial', 'reviewer');
    const { text, subject } = await mailOf('nobodySpecial');
    expect(subject).toBe('You were given a role at Skewline');
    expect(text).toContain('Vera chief gave you a role at Skewline.\n\nRole: reviewer in FIRST\n');
    expect(text).toContain('Held until: it is taken away');
    const end = '2099-03-01T12:00:00.000Z';
    expect((await world.as('chief').patch(`/roles/${id}`, { expiresAt: end, version: 1 })).status).toBe(200);
    expect((await mailedTo(app, world.emailOf('nobodySpecial'), 2)).at(-1)?.text).toContain('Held until: 2099-03-01 12:00:00 UTC');
    expect((await world.as('coordinator').post(`/roles/${id}/take`, { version: 2 })).status).toBe(204);
    const ended = (await mailedTo(app, world.emailOf('nobodySpecial'), 3)).at(-1);
    expect(ended?.subject).toBe('A role of yours at Skewline was ended');
    expect(ended?.text).toContain('Vera coordinator ended a role that you held at Skewline.');
    expect(kindsTo('nobodySpecial')).toEqual(['role', 'role', 'role']);
  });

  it('at a site, and of the whole deployment, is told as such', async () => {
    const operator = { role: 'operator', networkId: world.networks.second, siteId: world.sites.gamma, expiresAt: null };
    await world.as('chief').post(`/people/${world.people.nobodySpecial}/roles`, operator);
    const chief = { role: 'coordinator', networkId: null, siteId: null, expiresAt: null };
    await world.as('chief').post(`/people/${world.people.analyst}/roles`, chief);
    expect((await mailOf('nobodySpecial')).text).toContain('Role: operator of site GAMMA in SECOND');
    expect((await mailOf('analyst')).text).toContain('Role: coordinator of the whole deployment');
  });

  it('is not told to who does not want that', async () => {
    await switchOff('nobodySpecial', 'role');
    const { id } = await giveRole('nobodySpecial', 'reviewer');
    await world.as('chief').patch(`/roles/${id}`, { expiresAt: '2099-03-01T12:00:00.000Z', version: 1 });
    await world.as('chief').post(`/roles/${id}/take`, { version: 2 });
    expect(posted).toEqual([]);
    await giveRole('nobodySpecial', 'analyst');
    expect(posted).toEqual([]);
  });

  it('is not told to who did it, nor where nothing changed or the change was refused', async () => {
    await giveRole('chief', 'analyst');
    const { id } = await giveRole('nobodySpecial', 'reviewer');
    expect(kindsTo('nobodySpecial')).toEqual(['role']);
    expect((await world.as('chief').patch(`/roles/${id}`, { expiresAt: null, version: 1 })).status).toBe(200);
    expect((await world.as('chief').post(`/roles/${id}/take`, { version: 1 })).status).toBe(409);
    expect([kindsTo('chief'), kindsTo('nobodySpecial')]).toEqual([[], ['role']]);
  });

  it('is told to nobody who cannot sign in: disabled, or not yet in', async () => {
    const { db } = app.ground;
    const at = '2026-01-01T00:00:00.000Z';
    db.update(people).set({ disabledAt: at }).where(eq(people.id, world.people.analyst)).run();
    db.update(people).set({ passwordHash: null, passwordSetAt: null }).where(eq(people.id, world.people.reviewer)).run();
    await giveRole('analyst', 'reviewer');
    await giveRole('reviewer', 'analyst');
    expect(posted).toEqual([]);
  });
});

describe('20 a mail', () => {
  it('has both its forms, in which names and what a browser calls itself are words and nothing else', async () => {
    const came: Email[] = [];
    const mailServer = new SMTPServer({
      disabledCommands: ['AUTH', 'STARTTLS'],
      onData: (stream, _session, done) => {
        void buffer(stream)
          .then((raw) => PostalMime.parse(raw))
          .then((mail) => came.push(mail))
          .finally(done);
      },
    });
    await new Promise<void>((resolve) => mailServer.listen(0, '127.0.0.1', resolve));
    const { port } = mailServer.server.address() as AddressInfo;
    await app.close();
    await begin(`smtp://127.0.0.1:${port}`);
    const odd = '<img src=x onerror="alert(1)"> & \u202eevil';
    const { db } = app.ground;
    db.update(people).set({ name: odd }).where(eq(people.id, world.people.chief)).run();
    db.update(networks).set({ name: "<b>O'Hara</b>" }).where(eq(networks.id, world.networks.first)).run();
    await giveRole('nobodySpecial', 'reviewer');
    await signIn('nobodySpecial', FIREFOX);
    await signIn('nobodySpecial', '<script>alert(1)</script>\x85 a.example');
    await vi.waitFor(() => expect(came).toHaveLength(2), 5_000);
    await new Promise<void>((resolve) => mailServer.close(resolve));
    const [role, browser] = ['You were given', 'Sign-in'].map((begins) => came.find(({ subject }) => subject?.startsWith(begins))!);
    expect(role!.text).toContain('<img src=x onerror="alert(1)"> &  evil gave you a role at Skewline.');
    expect(role!.text).toContain("Role: reviewer in <b>O'Hara</b>");
    expect(role!.html).toContain('&lt;img src=x onerror=&quot;alert(1)&quot;&gt; &amp;  evil gave you a role at Skewline.');
    expect(role!.html).toContain('Role: <strong>reviewer in &lt;b&gt;O&#39;Hara&lt;/b&gt;</strong>');
    expect(role!.html).toContain('<a href="https://skewline.example/account">');
    expect(browser!.html).toContain('&lt;script&gt;alert(1)&lt;/script&gt;');
    for (const { html = '', text = '' } of came) {
      expect(html).not.toMatch(/<(?:img|b|script)\b/);
      expect(`${html}${text}`).not.toMatch(/[\u0080-\u009f\u202e]/);
    }
  });
});
