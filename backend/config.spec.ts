import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { readConfig } from './config';
import { root } from './paths';

describe('the configuration', () => {
  const defaults = {
    port: 4210,
    host: '127.0.0.1',
    dataDir: join(root, 'data'),
    logLevel: 'info',
    production: false,
    demo: true,
    publicOrigin: undefined,
    trustedProxies: [],
    sessionSecret: undefined,
    smtpUrl: undefined,
    mailFrom: undefined,
  };
  const production = { NODE_ENV: 'production', TLS: 'proxy', PUBLIC_ORIGIN: 'https://skewline.example', SMTP_URL: 'smtps://mail.example' };

  it('has a default for everything', () => {
    expect(readConfig({})).toEqual({ ok: true, value: defaults, warnings: [] });
  });

  it('takes an empty variable as absent', () => {
    expect(readConfig({ PORT: '', HOST: '', DATA_DIR: '', LOG_LEVEL: '', NODE_ENV: '' })).toMatchObject({ value: defaults });
  });

  it('takes what is given', () => {
    const env = { PORT: '0', HOST: '::1', DATA_DIR: '/srv/skewline', LOG_LEVEL: 'debug', ...production };
    const value = {
      port: 0,
      host: '::1',
      dataDir: '/srv/skewline',
      logLevel: 'debug',
      production: true,
      publicOrigin: 'https://skewline.example',
      smtpUrl: 'smtps://mail.example',
    };
    expect(readConfig(env)).toMatchObject({ value });
  });

  it.each([
    ['on in development', {}, true],
    ['off in tests', { NODE_ENV: 'test' }, false],
    ['off in production', production, false],
    ['off where it is said to be', { DEMO: 'off' }, false],
    ['on where it is said to be', { NODE_ENV: 'test', DEMO: 'on' }, true],
  ])('has the demo %s', (_where, env, demo) => {
    expect(readConfig(env)).toMatchObject({ ok: true, value: { demo } });
  });

  it('refuses the demo in production', () => {
    const problem = { where: 'DEMO', text: 'DEMO="on" cannot be used: it must be "off" in production, which has no demo.' };
    expect(readConfig({ ...production, DEMO: 'on' })).toMatchObject({ ok: false, problem });
  });

  it.each(['65536', '1.5', ' 80', '0x50', '1e3', '−1', '100000'])('refuses %j as a port', (PORT) => {
    expect(readConfig({ PORT })).toMatchObject({ ok: false, problem: { where: 'PORT' } });
  });

  it.each([
    ['PUBLIC_ORIGIN', 'https://skewline.example/'],
    ['PUBLIC_ORIGIN', 'https://skewline.example/app'],
    ['PUBLIC_ORIGIN', 'skewline.example'],
    ['PUBLIC_ORIGIN', 'ftp://skewline.example'],
    ['TRUSTED_PROXIES', 'proxy.example'],
    ['TRUSTED_PROXIES', '10.0.0.0/33'],
    ['TRUSTED_PROXIES', '10.0.0.0/8/8'],
    ['TRUSTED_PROXIES', Array.from({ length: 101 }, () => '10.0.0.1').join()],
    ['SESSION_SECRET', 'x'.repeat(31)],
    ['SESSION_SECRET', 'x'.repeat(1_025)],
    ['SMTP_URL', 'https://mail.example'],
    ['MAIL_FROM', 'a@example.org, b@example.org'],
    ['TLS', 'yes'],
  ])('refuses %s=%j', (name, text) => {
    expect(readConfig({ [name]: text })).toMatchObject({ ok: false, problem: { where: name } });
  });

  it('takes lists of proxies', () => {
    expect(readConfig({ TRUSTED_PROXIES: '10.0.0.0/8, 2001:db8::/32 ,127.0.0.1' })).toMatchObject({
      value: { trustedProxies: ['10.0.0.0/8', '2001:db8::/32', '127.0.0.1'] },
    });
  });

  it('never repeats a secret', () => {
    for (const env of [{ SESSION_SECRET: 'a short secret' }, { SMTP_URL: 'http://me:a short secret@mail.example' }]) {
      const read = readConfig(env);
      expect(read.ok ? '' : read.problem.text).toMatch(/^\w+=a secret cannot be used: it must be /);
    }
  });

  it.each(['TLS', 'PUBLIC_ORIGIN', 'SMTP_URL'] as const)('wants %s in production', (name) => {
    expect(readConfig(production)).toMatchObject({ ok: true });
    expect(readConfig({ ...production, [name]: '' })).toMatchObject({ ok: false, problem: { where: name } });
  });

  it('wants https in production', () => {
    expect(readConfig({ ...production, PUBLIC_ORIGIN: 'http://skewline.example' })).toMatchObject({ problem: { where: 'PUBLIC_ORIGIN' } });
  });

  it('names the first of several faults', () => {
    expect(readConfig({ LOG_LEVEL: 'x', PORT: 'x' })).toMatchObject({ ok: false, problem: { where: 'PORT' } });
  });
});
