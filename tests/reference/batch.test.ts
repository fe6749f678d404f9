import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { reconcileFiles } from '../../backend/command/reconcile-command';
import { newFolder } from '../support/folder';
import { differencesOf, type Expected, readExpected, readResults, type Results, type Row, TABLES } from './batch/differences';

// Whole reconciliations against an independent program, batch/independent.py: written from the description of the file formats alone, with
// ERFA 2.0.0 (IAU 2006/2000A, epv00), exact fractions and 50 digits. Its results stand beside each case.

const CASES = ['leap-second', 'window-edges', 'light-cone', 'frames', 'mixed-logs'] as const;
const NO_LIMIT = 10_000;

interface Case {
  readonly about: string;
  readonly logs: readonly (readonly [string | null, string])[];
  readonly live?: string;
  readonly earthOrientation?: string;
  readonly limit?: number;
}
interface FrameOfFile {
  readonly code: string;
  readonly kind?: string;
  readonly parent?: string;
  readonly velocity?: { readonly toward?: { readonly baseline?: unknown } };
}

const pathOf = (name: string, file: string): string => join(import.meta.dirname, 'batch', name, file);
const jsonOf = (name: string, file: string): unknown => JSON.parse(readFileSync(pathOf(name, file), 'utf8'));
const caseOf = (name: string): Case => jsonOf(name, 'case.json') as Case;

/** The frames of a case that do not turn with the Earth: what one is bound to, its parents have a say in. */
function freeFrames(name: string): ReadonlyMap<string, 'free' | 'barycentric'> {
  const { frames = [] } = jsonOf(name, 'network.json') as { readonly frames?: readonly FrameOfFile[] };
  const chainOf = (code: string): readonly FrameOfFile[] =>
    frames.filter((frame) => frame.code === code).flatMap((frame) => [frame, ...chainOf(frame.parent ?? 'geocentric')]);
  return new Map(
    frames.flatMap(({ code }) => {
      const chain = chainOf(code);
      if (chain.some(({ velocity }) => velocity?.toward?.baseline !== undefined)) return [];
      return [[code, chain.some(({ kind }) => kind === 'barycentric') ? 'barycentric' : 'free'] as const];
    }),
  );
}

async function reconciled(name: string): Promise<Results> {
  const { logs, live, earthOrientation, limit = NO_LIMIT } = caseOf(name);
  const out = newFolder(name);
  await reconcileFiles(
    {
      network: pathOf(name, 'network.json'),
      out,
      logs: logs.map(([site, file]) => `${site === null ? '' : `${site}=`}${pathOf(name, file)}`),
      live: live && pathOf(name, live),
      earthOrientation: earthOrientation && pathOf(name, earthOrientation),
      limit,
    },
    {
      signal: new AbortController().signal,
      progress: { begin: () => undefined, at: () => undefined, end: () => undefined },
      say: () => undefined,
    },
  );
  return readResults(out);
}

describe.each(CASES)('the case %s', (name) => {
  const expected = readExpected(pathOf(name, 'expected'));
  const frames = freeFrames(name);

  it(`gives what the independent program gives: ${caseOf(name).about}`, async () => {
    expect(differencesOf(expected, await reconciled(name), frames)).toEqual([]);
  });

  it('is compared so closely that a hundredth of any number, or one letter, is seen', () => {
    expect(differencesOf(expected, expected, frames)).toEqual([]);
    for (const table of TABLES) {
      for (const column of Object.keys(expected.tables[table][0] ?? {})) {
        const at = largest(expected.tables[table], column);
        if (at < 0) continue;
        const found = differencesOf(
          expected,
          { ...expected, tables: { ...expected.tables, [table]: faulty(expected.tables[table], at, column) } },
          frames,
        );
        expect(found.join('\n'), `${table}, ${column}`).toContain(column);
      }
    }
  });

  it('is compared so closely that a missing row, two rows that changed places, and another count are seen', () => {
    for (const table of TABLES) {
      const rows = expected.tables[table];
      if (rows.length === 0) continue;
      const withRows = (others: readonly Row[]): Results => ({ ...expected, tables: { ...expected.tables, [table]: others } });
      expect(differencesOf(expected, withRows(rows.slice(1)), frames)).not.toEqual([]);
      if (rows.length > 1) expect(differencesOf(expected, withRows([rows[1]!, rows[0]!, ...rows.slice(2)]), frames)).not.toEqual([]);
    }
    for (const [path, count] of expected.counts)
      expect(differencesOf(expected, { ...expected, counts: new Map(expected.counts).set(path, count + 1) }, frames)).toHaveLength(1);
  });
});

/** The row with the largest number of a column, the first with a text, or -1 where all cells are empty. */
function largest(rows: readonly Row[], column: string): number {
  const sizes = rows.map((row) => (row[column] === '' ? -1 : Math.abs(Number(row[column])) || 0));
  return sizes.reduce((best, size, at) => (size > (sizes[best] ?? -1) ? at : best), -1);
}

/** A table with one cell changed: a number by a hundredth, a text by a letter. */
function faulty(rows: readonly Row[], at: number, column: string): readonly Row[] {
  const value = rows[at]![column]!;
  const number = Number(value);
  const other = Number.isNaN(number) ? `${value}x` : String(Number.isFinite(number) && number !== 0 ? number * 0.99 : 0.99);
  return rows.map((row, index) => (index === at ? { ...row, [column]: other } : row));
}

describe('all cases together', () => {
  let cases: readonly Expected[] = [];
  beforeAll(() => (cases = CASES.map((name) => readExpected(pathOf(name, 'expected')))));
  const seen = (table: 'pairs' | 'orders' | 'events' | 'set-aside', column: string): ReadonlySet<string | undefined> =>
    new Set(cases.flatMap(({ tables }) => tables[table].map((row) => row[column])));

  it('hold every class, order, kind and source of an error', () => {
    expect(seen('pairs', 'class')).toEqual(new Set(['timelike', 'spacelike', 'undecided']));
    expect(seen('orders', 'order')).toEqual(new Set(['a', 'b', 'tie']));
    expect(seen('events', 'kind')).toEqual(new Set(['trigger', 'reference', 'test']));
    expect(seen('events', 'sigma_from')).toEqual(new Set(['record', 'site', 'resolution']));
  });
});
