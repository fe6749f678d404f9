import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { readConfig } from './config';
import { root } from './paths';

describe('the configuration', () => {
  const defaults = { port: 4210, host: '127.0.0.1', dataDir: join(root, 'data'), logLevel: 'warn', production: false };

  it('has a default for everything', () => {
    expect(readConfig({})).toEqual({ ok: true, value: defaults, warnings: [] });
  });

  it('takes an empty variable as absent', () => {
    expect(readConfig({ PORT: '', HOST: '', DATA_DIR: '', LOG_LEVEL: '', NODE_ENV: '' })).toMatchObject({ value: defaults });
  });

  it('takes what is given', () => {
    const env = { PORT: '0', HOST: '::1', DATA_DIR: '/srv/skewline', LOG_LEVEL: 'debug', NODE_ENV: 'production' };
    const value = { port: 0, host: '::1', dataDir: '/srv/skewline', logLevel: 'debug', production: true };
    expect(readConfig(env)).toMatchObject({ value });
  });

  it.each(['65536', '1.5', ' 80', '0x50', '1e3', '−1', '100000'])('refuses %j as a port', (PORT) => {
    expect(readConfig({ PORT })).toMatchObject({ ok: false, problem: { where: 'PORT' } });
  });

  it('names the first of several faults', () => {
    expect(readConfig({ LOG_LEVEL: 'x', PORT: 'x' })).toMatchObject({ ok: false, problem: { where: 'PORT' } });
  });
});
