import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { ResultFile, ResultFolder } from './result-folder';
import { UsageProblem } from './usage-problem';

const BUFFER_BYTES = 1 << 18;

let place: string;
beforeEach(() => {
  place = mkdtempSync(join(tmpdir(), 'result-folder-'));
});
afterEach(() => {
  rmSync(place, { recursive: true });
});

/** What a file holds after `write`, and the hash that it says. */
function written(write: (file: ResultFile) => void): { text: string; hash: string } {
  const path = join(place, 'x.csv');
  const file = new ResultFile('x.csv', path);
  write(file);
  const hash = file.finish();
  return { text: readFileSync(path, 'utf8'), hash };
}

describe('a result file', () => {
  it('puts cells one behind the other', () => {
    const { text } = written((file) => file.text('ORL').comma().number(17).comma().number(0.1).endLine());
    expect(text).toBe('ORL,17,0.1\n');
  });

  it('knows the SHA-256 of what it holds', () => {
    const { text, hash } = written((file) => file.text('Orléns').endLine());
    expect(hash).toBe(createHash('sha256').update(text).digest('hex'));
  });

  // Edges of binary64 (IEEE 754) and of the printing of numbers (ECMA-262, Number::toString: exponents from 1e21 and below 1e-6).
  it.each([
    [0, '0'],
    [-0, '0'],
    [1e21, '1e+21'],
    [123456789012345680000, '123456789012345680000'],
    [1e-7, '1e-7'],
    [0.000001, '0.000001'],
    [5e-324, '5e-324'],
    [1.7976931348623157e308, '1.7976931348623157e+308'],
    [0.1 + 0.2, '0.30000000000000004'],
    [Infinity, 'Infinity'],
    [-Infinity, '-Infinity'],
  ])('prints %d so that it is read back', (value, printed) => {
    const { text } = written((file) => file.number(value));
    expect(text).toBe(printed);
    expect(Number(text) === value).toBe(true);
  });

  it.each([
    ['short cells', 'ab'],
    ['cells of 64 characters', 'a'.repeat(64)],
    ['cells of 65 characters', 'b'.repeat(65)],
    ['cells of two, three and four bytes a character', '\u00e9\u2192\u{1d11e}'],
    ['long cells of three bytes a character', '\u2192'.repeat(3001)],
    ['cells as large as its buffer', 'c'.repeat(BUFFER_BYTES)],
    ['cells larger than its buffer', '\u2192'.repeat(BUFFER_BYTES)],
  ])('loses nothing where its buffer is full: %s', (_what, cell) => {
    const cells = Math.ceil((2.5 * BUFFER_BYTES) / cell.length);
    const { text, hash } = written((file) => {
      for (let n = 0; n < cells; n++) file.text(cell).comma();
    });
    expect(text === `${cell},`.repeat(cells)).toBe(true);
    expect(hash).toBe(createHash('sha256').update(text).digest('hex'));
  });

  it('fills its buffer to the last byte with commas and line ends', () => {
    const { text } = written((file) => {
      for (let n = 0; n <= BUFFER_BYTES; n++) file.endLine();
    });
    expect(text === '\n'.repeat(BUFFER_BYTES + 1)).toBe(true);
  });
});

describe('a folder of results', () => {
  /** Everything below the place, hidden names too. */
  const names = (): string[] => readdirSync(place, { recursive: true, encoding: 'utf8' }).sort();

  const filled = (path: string): ResultFolder => {
    const folder = new ResultFolder(path);
    folder.file('a.csv').text('new a\n');
    folder.file('b.csv').text('new b\n');
    folder.finishFiles();
    return folder;
  };

  it('shows nothing until it is published, and then all', () => {
    const out = join(place, 'deep', 'out');
    const folder = filled(out);
    expect(existsSync(out)).toBe(false);
    folder.publish(['a.csv', 'b.csv']);
    expect(names()).toEqual(['deep', 'deep/out', 'deep/out/a.csv', 'deep/out/b.csv']);
    expect(readFileSync(join(out, 'b.csv'), 'utf8')).toBe('new b\n');
  });

  it('replaces its own files and leaves the others', () => {
    const out = join(place, 'out');
    mkdirSync(out);
    writeFileSync(join(out, 'a.csv'), 'old a\n');
    writeFileSync(join(out, 'notes.txt'), 'mine');
    filled(out).publish(['a.csv', 'b.csv']);
    expect(names()).toEqual(['out', 'out/a.csv', 'out/b.csv', 'out/notes.txt']);
    expect(readFileSync(join(out, 'a.csv'), 'utf8')).toBe('new a\n');
  });

  it('is as it was when it is discarded', () => {
    const out = join(place, 'out');
    mkdirSync(out);
    writeFileSync(join(out, 'a.csv'), 'old a\n');
    filled(out).discard();
    expect(names()).toEqual(['out', 'out/a.csv']);
    expect(readFileSync(join(out, 'a.csv'), 'utf8')).toBe('old a\n');
  });

  it('moves nothing when one of its names is taken by a folder', () => {
    const out = join(place, 'out');
    mkdirSync(join(out, 'b.csv'), { recursive: true });
    writeFileSync(join(out, 'a.csv'), 'old a\n');
    const folder = filled(out);
    expect(() => folder.publish(['a.csv', 'b.csv'])).toThrow(UsageProblem);
    folder.discard();
    expect(names()).toEqual(['out', 'out/a.csv', 'out/b.csv']);
    expect(readFileSync(join(out, 'a.csv'), 'utf8')).toBe('old a\n');
  });

  it('gives the hash of each file once', () => {
    const folder = new ResultFolder(join(place, 'out'));
    folder.file('a.csv').text('x\n');
    expect([...folder.finishFiles()]).toEqual([['a.csv', createHash('sha256').update('x\n').digest('hex')]]);
    expect(folder.finishFiles().size).toBe(0);
    folder.discard();
  });

  it('is refused where a file stands, or none can be made', () => {
    writeFileSync(join(place, 'file'), '');
    expect(() => new ResultFolder(join(place, 'file'))).toThrow(/^--out: ".*file" is a file; it must be a folder/);
    expect(() => new ResultFolder(join(place, 'file', 'out'))).toThrow(/^--out: ".*out" cannot be made \(.*\); it must be a place/);
    symlinkSync(join(place, 'nothing'), join(place, 'link'));
    expect(() => new ResultFolder(join(place, 'link'))).toThrow(/^--out: ".*link" is a link to what does not exist; it must be a folder/);
    expect(names()).toEqual(['file', 'link']);
  });

  it.runIf(existsSync('/proc/self')).each(['/proc/nope', '/proc/nope/x'])('is refused where the system lets nobody make one: %s', (out) => {
    expect(() => new ResultFolder(out)).toThrow(UsageProblem);
  });
});
