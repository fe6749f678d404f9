import { spawnSync } from 'node:child_process';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { root } from '../../scripts/lib.mjs';

/** Runs a command in the checkout to its end. */
function ran(command: string, ...args: string[]) {
  const { status, stdout, stderr } = spawnSync(command, args, { cwd: root, encoding: 'utf8' });
  return { status, stdout, stderr };
}

describe('the skewline command in a checkout', () => {
  const direct = ran(process.execPath, join(root, 'bin/skewline.mjs'), '--help');

  it('says on stdout what it is used for, and nothing on stderr', () => {
    expect(direct.stdout).toMatch(/^Usage: skewline/);
    expect(direct.stderr).toBe('');
    expect(direct.status).toBe(0);
  });

  it('is the same through npm run and npx', () => {
    expect(ran('npm', 'run', '-s', 'skewline', '--', '--help')).toEqual(direct);
    expect(ran('npx', 'skewline', '--help')).toEqual(direct);
  });

  it('hands its exit status on', () => {
    const args = ['--no-such-option'];
    const { status } = ran(process.execPath, join(root, 'bin/skewline.mjs'), ...args);
    expect(status).toBe(2);
    expect(ran('npx', 'skewline', ...args).status).toBe(2);
    expect(ran('npm', 'run', '-s', 'skewline', '--', ...args).status).toBe(2);
  });
});
