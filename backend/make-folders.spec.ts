import { existsSync, mkdtempSync, rmSync, statSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { makeFolders } from './make-folders';

let place: string;
beforeEach(() => {
  place = mkdtempSync(join(tmpdir(), 'make-folders-'));
});
afterEach(() => {
  rmSync(place, { recursive: true });
});

describe('making folders', () => {
  it('makes all that are absent, with the mode', () => {
    makeFolders(join(place, 'a', 'b', 'c'), 0o700);
    for (const path of ['a', 'a/b', 'a/b/c']) expect(statSync(join(place, path)).mode & 0o777).toBe(0o700);
  });

  it('leaves one that exists', () => {
    makeFolders(place);
    expect(statSync(place).isDirectory()).toBe(true);
  });

  it('ends with the fault below a file, and at a link to nothing', () => {
    writeFileSync(join(place, 'file'), '');
    symlinkSync(join(place, 'nothing'), join(place, 'link'));
    expect(() => makeFolders(join(place, 'file', 'a', 'b'))).toThrow('ENOTDIR');
    expect(() => makeFolders(join(place, 'link', 'a'))).toThrow('EEXIST');
  });

  it.runIf(existsSync('/proc/self'))('ends with the fault where the system lets nobody make one', () => {
    expect(() => makeFolders('/proc/nope/a')).toThrow(/ENOENT|EACCES|EPERM/);
  });
});
