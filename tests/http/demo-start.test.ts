import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { describe, expect, it } from 'vitest';
import { type Me } from '#shared/contract/people';
import { Client } from '../support/client';
import { newFolder } from '../support/folder';
import { PRODUCTION, runServer, startServer, type RunningServer } from '../support/server';

const LINE = /^ {2}(\w+) +(\S+@example\.org) +(\S+)$/gm;
const END_MS = 5_000; // as the server itself promises

/** The accounts that a server has printed. */
const accountsIn = (stdout: string) =>
  [...stdout.matchAll(LINE)].map(([, role = '', email = '', password = '']) => ({ role, email, password }));

/** The processes of this machine that stream the demo of a data folder. */
const feedsOf = (dataDir: string): string[] =>
  readdirSync('/proc').filter((pid) => {
    try {
      const words = readFileSync(join('/proc', pid, 'cmdline'), 'utf8').split('\0');
      return words.some((word) => word.endsWith('demo-feed.js')) && words.includes(dataDir);
    } catch {
      return false; // no process, or one that has just ended
    }
  });

async function until(isSo: () => boolean): Promise<boolean> {
  const startMs = performance.now();
  while (!isSo() && performance.now() - startMs < END_MS) await sleep(50);
  return isSo();
}

const demoIn = (dataDir: string): Promise<RunningServer> => startServer({ DATA_DIR: dataDir, DEMO: 'on', LOG_LEVEL: 'error' });

describe('a server with the demo', () => {
  it('lets in each role with what it prints, at every start', async () => {
    const dataDir = newFolder('demo');
    const server = await demoIn(dataDir);
    let said = '';
    try {
      const read = (): string => (said = server.said());
      expect(await until(() => accountsIn(read()).length === 5)).toBe(true);
      const accounts = accountsIn(said);
      expect(new Set(accounts.map(({ role }) => role))).toEqual(new Set(['coordinator', 'analyst', 'reviewer', 'operator']));
      for (const { role, email, password } of accounts) {
        const { status, body } = await new Client(server.url.replace(/\/$/, '')).post('/sign-in', { email, password });
        expect(status, email).toBe(200);
        const { roles } = body as Me;
        expect(new Set(roles.map((held) => held.role))).toEqual(new Set([role]));
        expect(roles).toHaveLength(role === 'operator' ? 2 : 1);
      }
    } finally {
      await server.stop();
    }
    const again = await demoIn(dataDir);
    try {
      expect(await until(() => accountsIn(again.said()).length === 5)).toBe(true);
      expect(accountsIn(again.said())).toEqual(accountsIn(said));
    } finally {
      await again.stop();
    }
    const { code, stderr } = await runServer({ ...PRODUCTION, PORT: '0', DATA_DIR: dataDir }).ended;
    expect(stderr).toMatch(/^skewline: DATA_DIR=.* cannot be used: it holds a demo [^\n]*\n$/);
    expect(code).toBe(2);
  });

  it.each(['SIGTERM', 'SIGKILL'] as const)('has a process that streams, which ends with it by %s', async (signal) => {
    const dataDir = newFolder('demo-feed');
    const server = await demoIn(dataDir);
    expect(await until(() => feedsOf(dataDir).length === 1)).toBe(true);
    await server.stop(signal);
    expect(await until(() => feedsOf(dataDir).length === 0)).toBe(true);
  });

  it('5 is not there in production, whatever DEMO says', async () => {
    const { code, stderr } = await runServer({ ...PRODUCTION, PORT: '0', DATA_DIR: newFolder('no-demo'), DEMO: 'on' }).ended;
    expect(stderr).toBe('skewline: DEMO="on" cannot be used: it must be "off" in production, which has no demo.\n');
    expect(code).toBe(2);
  });
});
