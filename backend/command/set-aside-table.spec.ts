import { mkdirSync, mkdtempSync, readFileSync, rmSync, truncateSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import Papa from 'papaparse';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { type SetAsideReason } from '#shared/reconcile/record';
import { RecordStore } from './record-store';
import { ResultFile } from './result-folder';
import { type ReadLog, writeSetAside } from './set-aside-table';

let folder: string;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'set-aside-'));
});
afterEach(() => {
  rmSync(folder, { recursive: true });
});

/** A log of the given lines, and where each stands. */
function log(name: string, ...lines: string[]): ReadLog & { readonly places: readonly { offsetBytes: number; lengthBytes: number }[] } {
  const path = join(folder, name);
  mkdirSync(join(path, '..'), { recursive: true });
  writeFileSync(path, lines.map((line) => `${line}\n`).join(''));
  let offsetBytes = 0;
  const places = lines.map((line) => {
    const lengthBytes = Buffer.byteLength(line);
    const place = { offsetBytes, lengthBytes };
    offsetBytes += lengthBytes + 1;
    return place;
  });
  return { path, name: name.replace(/.*\//, ''), places };
}

/** The table of records named by log, line (from 1) and reason. */
async function tableOf(
  logs: readonly ReturnType<typeof log>[],
  aside: readonly [file: number, line: number, reason: SetAsideReason][],
): Promise<string> {
  const store = new RecordStore(1);
  for (const [file, line, reason] of aside) store.setAside(reason, 0, file, { line, ...logs[file]!.places[line - 1]! });
  const path = join(folder, 'set-aside.csv');
  const file = new ResultFile('set-aside.csv', path);
  await writeSetAside(store.finish(), logs, file, { breathe: () => Promise.resolve() });
  file.finish();
  const table = readFileSync(path, 'utf8');
  rmSync(path);
  return table;
}

describe('the table of what is set aside', () => {
  it('is sorted by name of the file, then line as a number', async () => {
    const lines = Array.from({ length: 10 }, (_, n) => `line ${n + 1}`);
    const logs = [log('b.csv', ...lines), log('a.csv', ...lines), log('B.csv', ...lines)];
    const table = await tableOf(logs, [[0, 10, 'sigma'], [0, 9, 'date'], [1, 2, 'kind'], [2, 1, 'site']]); // prettier-ignore
    expect(table).toBe('B.csv,1,site,line 1\na.csv,2,kind,line 2\nb.csv,9,date,line 9\nb.csv,10,sigma,line 10\n');
  });

  it('has the record as it stands, quoted where CSV needs it', async () => {
    const records = ['ORL,"1"', 'a "b"', 'caf\u00e9 \u{1d11e}', ' blanks ', 'ends in a return\r'];
    const table = await tableOf([log('a.csv', ...records)], records.map((_, at) => [0, at + 1, 'columns'])); // prettier-ignore
    expect(Papa.parse<string[]>(table, { newline: '\n', skipEmptyLines: true }).data.map((row) => row[3])).toEqual(records);
    expect(table.split('\n')[0]).toBe('a.csv,1,columns,"ORL,""1"""');
  });

  it('has a record of megabytes whole, whatever stands where it is read in pieces', async () => {
    const text = `"${'\u20ac'.repeat(700_000)}${'"\u{1d11e}\n'.repeat(100_000)}`; // 3 and 4 bytes a character: no piece ends where one does
    const [row] = Papa.parse<string[]>(await tableOf([log('a.csv', text)], [[0, 1, 'columns']]), { newline: '\n' }).data;
    expect(row?.slice(0, 3)).toEqual(['a.csv', '1', 'columns']);
    expect(row?.[3] === text).toBe(true);
  });

  it('tells two files of one name apart by their folders, however they were named', async () => {
    const one = log('one/x.csv', 'from one');
    const two = log('two/x.csv', 'from two');
    const expected = 'x.csv,1,sigma,from one\nx.csv,1,sigma,from two\n';
    expect(await tableOf([one, two], [[0, 1, 'sigma'], [1, 1, 'sigma']])).toBe(expected); // prettier-ignore
    expect(await tableOf([two, one], [[0, 1, 'sigma'], [1, 1, 'sigma']])).toBe(expected); // prettier-ignore
  });

  it('is not written when a log has become shorter', async () => {
    const short = log('a.csv', 'one', 'two');
    truncateSync(short.path, 5);
    await expect(tableOf([short], [[0, 2, 'sigma']])).rejects.toThrow(`${short.path} became shorter while it was read`);
  });
});
