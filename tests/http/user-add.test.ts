import { spawnSync } from 'node:child_process';
import { join } from 'node:path';
import { statSync } from 'node:fs';
import Database from 'better-sqlite3';
import { describe, expect, it } from 'vitest';
import { root } from '../../scripts/lib.mjs';
import { appliedMigrations, closeDb, databaseFile, holdDataDir, openDb } from '../../backend/db';
import { Client } from '../support/client';
import { newFolder } from '../support/folder';
import { PRODUCTION, runServer, startServer } from '../support/server';

const PASSWORD = 'lantern gravel 47 omelette';

function userAdd(folder: string, email: string, env: Record<string, string> = PRODUCTION) {
  const { status, stdout, stderr } = spawnSync(
    process.execPath,
    [join(root, 'bin/skewline.mjs'), 'user', 'add', '--email', email, '--name', 'Ida Novak'],
    {
      cwd: root,
      env: { PATH: process.env['PATH'], DATA_DIR: folder, ...env },
      encoding: 'utf8',
    },
  );
  return { status, stdout, stderr };
}

describe('5 skewline user add', () => {
  it('lets the first coordinator of production in beside the running server, once', async () => {
    const folder = newFolder('user-add');
    const server = await startServer({ DATA_DIR: folder, ...PRODUCTION });
    try {
      const { status, stdout, stderr } = userAdd(folder, 'Ida@Example.org');
      expect([status, stderr]).toEqual([0, '']);
      const token = /^https:\/\/skewline\.example\/invitation#([A-Za-z0-9_-]{22})\n$/.exec(stdout)?.[1];
      const client = new Client(server.url.replace(/\/$/, ''));
      expect((await client.post('/invitations/accept', { token, password: PASSWORD })).status).toBe(204);
      const { body } = await client.post('/sign-in', { email: 'ida@example.org', password: PASSWORD });
      expect(body).toMatchObject({ name: 'Ida Novak', roles: [{ role: 'coordinator', networkId: null }] });
      const again = userAdd(folder, 'odo@example.org');
      expect([again.status, again.stdout]).toEqual([2, '']);
      expect(again.stderr).toContain('a coordinator of the deployment has signed up already');
      expect(statSync(join(folder, 'audit-head')).mode & 0o777).toBe(0o600);
    } finally {
      await server.stop();
    }
  });

  it('leaves the data folder to the server that uses it', async () => {
    const folder = newFolder('user-add-held');
    const server = await startServer({ DATA_DIR: folder });
    try {
      expect(userAdd(folder, 'ida@example.org', { NODE_ENV: 'test' })).toMatchObject({ status: 0, stderr: '' });
      const second = await runServer({ DATA_DIR: folder, PORT: '0' }).ended;
      expect(second.code).toBe(2);
      expect(second.stderr).toContain('is in use by another server');
      expect((await fetch(new URL('/api/health', server.url))).status).toBe(200);
    } finally {
      await server.stop();
    }
  });

  it('brings no table up to date while a server holds the data folder', () => {
    const folder = newFolder('user-add-behind');
    closeDb(openDb(folder));
    const behind = new Database(databaseFile(folder));
    const dropped = behind.prepare(
      'DELETE FROM __drizzle_migrations WHERE created_at = (SELECT max(created_at) FROM __drizzle_migrations)',
    );
    expect(dropped.run().changes).toBe(1);
    const applied = appliedMigrations(behind);
    const lock = holdDataDir(folder);
    try {
      const { status, stdout, stderr } = userAdd(folder, 'ida@example.org', { NODE_ENV: 'test' });
      expect([status, stdout]).toEqual([2, '']);
      expect(stderr).toContain('lacks 1 migrations of this Skewline');
      expect(appliedMigrations(behind)).toEqual(applied);
    } finally {
      lock.release();
      behind.close();
    }
  });

  it('refuses an address that is none, and a configuration that cannot be used, in one line', () => {
    const folder = newFolder('user-add-bad');
    expect(userAdd(folder, 'nobody')).toEqual({
      status: 2,
      stdout: '',
      stderr: 'skewline: --email is "nobody"; it must be an e-mail address, at most 254 characters\n',
    });
    expect(userAdd(folder, 'a@example.org', { ...PRODUCTION, TLS: 'none' }).stderr).toContain('TLS="none" cannot be used');
  });
});
