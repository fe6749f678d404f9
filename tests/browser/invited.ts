import { execFile } from 'node:child_process';
import { promisify } from 'node:util';
import { type Page } from '@playwright/test';
import { root } from '../../scripts/lib.mjs';
import { type RunningServer, startServer } from '../support/server';
import { newFolder } from '../support/folder';

export const EMAIL = 'ida@example.org';
export const PASSWORD = 'seventeen grey herons';

/** A server of its own, and the path with token that lets its first coordinator in. */
export async function serverWithInvitation(): Promise<{ server: RunningServer; dataDir: string; invitation: string }> {
  const dataDir = newFolder('browser-shell');
  const server = await startServer({ DATA_DIR: dataDir });
  const { stdout } = await promisify(execFile)(
    process.execPath,
    ['dist/backend/skewline.js', 'user', 'add', '--email', EMAIL, '--name', 'Ida Novak'],
    { cwd: root, env: { PATH: process.env['PATH'], NODE_ENV: 'test', DATA_DIR: dataDir } },
  );
  return { server, dataDir, invitation: /\/invitation#\S+/.exec(stdout)?.[0] ?? 'none' };
}

/** Signs in on the page that asks for it. */
export async function signIn(page: Page): Promise<void> {
  await page.getByLabel('Email').fill(EMAIL);
  await page.getByLabel('Password', { exact: true }).fill(PASSWORD);
  await page.getByRole('button', { name: 'Sign in' }).click();
}
