import { spawn } from 'node:child_process';
import { describe, expect, it } from 'vitest';
import { root } from '../../scripts/lib.mjs';
import { newFolder } from '../support/folder';

const END_MS = 5_000; // what whoever stops the server may count on
const START_MS = 90_000; // it may have to build
const LOOK_MS = 50;

const answers = (url: string): Promise<boolean> =>
  fetch(url).then(
    () => true,
    () => false,
  );

async function within(limitMs: number, done: () => boolean | Promise<boolean>): Promise<boolean> {
  const startMs = performance.now();
  while (!(await done())) {
    if (performance.now() - startMs > limitMs) return false;
    await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
  }
  return true;
}

describe('npm start', () => {
  it.each([
    ['Ctrl-C, which reaches all of it', 'SIGINT', true],
    ['SIGTERM to npm alone', 'SIGTERM', false],
    ['SIGKILL to npm alone', 'SIGKILL', false],
  ] as const)('leaves no server behind after %s', { timeout: 2 * START_MS }, async (_what, signal, toAll) => {
    const npm = spawn('npm', ['start'], {
      cwd: root,
      env: { PATH: process.env['PATH'], HOME: process.env['HOME'], PORT: '0', DATA_DIR: newFolder('start') },
      stdio: ['ignore', 'pipe', 'ignore'],
      detached: true, // a group of its own, as a terminal gives
    });
    const pid = npm.pid!;
    let said = '';
    npm.stdout.setEncoding('utf8').on('data', (text: string) => (said += text));
    try {
      expect(await within(START_MS, () => /http:\S+\n/.test(said))).toBe(true);
      const url = /http:\S+/.exec(said)![0];
      expect(await answers(url)).toBe(true);
      process.kill(toAll ? -pid : pid, signal);
      expect(await within(END_MS, async () => !(await answers(url)))).toBe(true);
    } finally {
      try {
        process.kill(-pid, 'SIGKILL');
      } catch {
        // nothing of the group is left, as it should be
      }
    }
  });
});
