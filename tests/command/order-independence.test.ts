import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { seededRandom } from '../makers/quiet-network';
import { skewline } from '../support/command';
import { newFolder } from '../support/folder';
import { filesOf, RESULT_FILES } from '../support/results';
import { smallNetwork } from '../support/small-network';

const COLUMNS = ['site', 'sequence', 'reading', 'sigma_ns', 'amplitude', 'series', 'kind', 'note'] as const;
type Column = (typeof COLUMNS)[number];
type Line = Readonly<Record<Column, string>>;

const SEED = Number(process.env['SEED'] ?? 20260301);
/** Enough that all kinds of coincidence, neighbour and crowding occur. */
const LINES = 600;

/** The files of one way to hand the lines over: the logs as arguments, and what is in each. */
type Split = Readonly<Record<string, string>>;

const random = seededRandom(SEED);
const upTo = (n: number): number => Math.floor(random() * n);
const oneOf = <T>(...choices: readonly T[]): T => choices[upTo(choices.length)]!;

/** Bursts of a few ms in 20 s, with ties, long and doubled sequences, quotes and line breaks; every seventh line is said again, changed or spoilt. */
function makeLines(): readonly Line[] {
  const lines: Line[] = [];
  for (let n = 0; n < LINES; n++) {
    const ms = 1000 * upTo(20) + upTo(40);
    const line: Line = {
      site: oneOf('A', 'B', 'C'),
      sequence: oneOf(String(n), `00${n}`, `9007199254740993${n}`),
      reading: `2020-01-02T00:00:${String(Math.floor(ms / 1000)).padStart(2, '0')}.${String(ms % 1000).padStart(3, '0')}`,
      sigma_ns: oneOf('', '5', '1e3'),
      amplitude: oneOf('', '2.50'),
      series: oneOf('', '', 'b'),
      kind: oneOf('', '', '', 'trigger', 'test', 'reference'),
      note: oneOf('', 'x', 'two\nlines', 'said "so", once'),
    };
    lines.push(line);
    if (n % 7 !== 0) continue;
    lines.push(
      oneOf(line, { ...line, note: 'another' }, { ...line, sigma_ns: '-1' }, { ...line, reading: '' }, { ...line, sequence: 'x' }),
    );
    if (n % 14 === 0) lines.push(line);
  }
  return lines;
}

const lines = makeLines();

function shuffled<T>(items: readonly T[]): readonly T[] {
  const order = [...items];
  for (let at = order.length - 1; at > 0; at--) {
    const other = upTo(at + 1);
    [order[at], order[other]] = [order[other]!, order[at]!];
  }
  return order;
}

interface Style {
  readonly columns?: readonly Column[];
  readonly end?: string;
  readonly mark?: string;
  readonly isQuoted?: boolean;
}

/** The lines as a log; line breaks within cells follow the style too. */
function logOf(of: readonly Line[], { columns = COLUMNS, end = '\n', mark = '', isQuoted = false }: Style = {}): string {
  const cell = (text: string): string => (isQuoted || /[",\n]/.test(text) ? `"${text.replaceAll('"', '""').replaceAll('\n', end)}"` : text);
  const row = (cells: readonly string[]): string => `${cells.map(cell).join(',')}${end}`;
  return mark + row(columns) + of.map((line) => row(columns.map((name) => line[name]))).join('');
}

const bySite = (site: string, style: Style = {}): string =>
  logOf(
    lines.filter((line) => line.site === site),
    { columns: COLUMNS.filter((name) => name !== 'site'), ...style },
  );

/** A column is left out of a log whose cells are all empty there. */
const withAndWithout = (column: Column, place: string): Split => {
  const without = COLUMNS.filter((name) => name !== column);
  const isEmpty = (line: Line): boolean => line[column] === '';
  return {
    [`${place}-without.csv`]: logOf(lines.filter(isEmpty), { columns: without }),
    [`${place}-with.csv`]: logOf(lines.filter((line) => !isEmpty(line))),
  };
};

const network = smallNetwork({
  frames: [{ code: 'fast', velocity: { beta: [0.6, 0.1, 0] } }],
  rule: { code: 'r', window: { kind: 'light-time', speed_c: 2 } },
  neighbours: { within_ns: 2e6 },
});

let place: string;
let count = 0;

/** The results of one way to hand the lines over, and the number of records that it set aside. */
async function resultsOf(split: Split): Promise<Readonly<Record<string, string>>> {
  const folder = join(place, String(count++));
  mkdirSync(folder);
  writeFileSync(join(folder, 'network.json'), JSON.stringify(network));
  for (const [name, text] of Object.entries(split)) writeFileSync(join(folder, name.replace(/^.*=/, '')), text);
  const args = ['reconcile', '--network', 'network.json', '--out', 'out', '--limit', '12', ...Object.keys(split)];
  const { code, stderr } = await skewline(args, folder);
  expect(stderr).toMatch(/^\d+ events, /);
  expect(code).toBe(0);
  return filesOf(join(folder, 'out'));
}

/** All that may not depend on order and files: everything but `set-aside.csv` and its hash. */
function lasting(files: Readonly<Record<string, string>>): Readonly<Record<string, string>> {
  const { 'set-aside.csv': aside, ...others } = files;
  expect(aside).toMatch(/^file,line,reason,text\n/);
  return { ...others, 'summary.json': others['summary.json']!.replace(/"set-aside\.csv": "[0-9a-f]{64}"/, '"set-aside.csv": ""') };
}

let plain: Readonly<Record<string, string>>;
beforeAll(async () => {
  place = newFolder('order');
  plain = await resultsOf({ 'log.csv': logOf(lines) });
});

describe(`whatever the order of lines and files (seed ${SEED})`, () => {
  it('there is enough in the results to tell', () => {
    expect(Object.keys(plain).sort()).toEqual([...RESULT_FILES]);
    const summary = JSON.parse(plain['summary.json']!) as Record<string, Record<string, number>>;
    for (const [name, least] of [
      ['coincidences', 50],
      ['set_aside', 50],
      ['pairs', 3],
    ] as const)
      // prettier-ignore
      expect(Object.values(summary[name]!).reduce((sum, n) => sum + n), name).toBeGreaterThan(least);
    for (const name of ['neighbours', 'repeated', 'crowded']) expect(summary[name], name).toBeGreaterThan(0);
    expect(summary['set_aside']).toMatchObject({ conflict: expect.any(Number) as number, sigma: expect.any(Number) as number });
  });

  it.each<[string, () => Split]>([
    ['the same lines', () => ({ 'log.csv': logOf(lines) })],
    ['another file name', () => ({ 'other.csv': logOf(lines) })],
    ['lines from last to first', () => ({ 'log.csv': logOf(lines.toReversed()) })],
    ['shuffled lines', () => ({ 'log.csv': logOf(shuffled(lines)) })],
    [
      'lines dealt to five files',
      () => Object.fromEntries([0, 1, 2, 3, 4].map((k) => [`${k}.csv`, logOf(lines.filter((_, at) => at % 5 === k))])),
    ],
    ['a log for each site without its column', () => ({ 'C=c.csv': bySite('C'), 'A=a.csv': bySite('A'), 'B=b.csv': bySite('B') })],
    [
      'one site’s log without its column, the rest with',
      () => ({ 'B=b.csv': bySite('B'), 'rest.csv': logOf(lines.filter(({ site }) => site !== 'B')) }),
    ],
    ['columns from last to first', () => ({ 'log.csv': logOf(lines, { columns: COLUMNS.toReversed() }) })],
    [
      'columns shuffled, and another order in another file',
      () => ({
        'a.csv': logOf(lines.slice(0, 300), { columns: shuffled(COLUMNS) }),
        'b.csv': logOf(lines.slice(300), { columns: shuffled(COLUMNS) }),
      }),
    ],
    ['an empty column left out', () => withAndWithout('note', 'note')],
    ['no series where it is empty', () => withAndWithout('series', 'series')],
    ['CRLF', () => ({ 'log.csv': logOf(lines, { end: '\r\n' }) })],
    [
      'CRLF in one file, LF in the other',
      () => ({ 'a.csv': logOf(lines.slice(0, 301), { end: '\r\n' }), 'b.csv': logOf(lines.slice(301)) }),
    ],
    ['a byte order mark', () => ({ 'log.csv': logOf(lines, { mark: '\ufeff' }) })],
    ['quotes round every cell', () => ({ 'log.csv': logOf(lines, { isQuoted: true }) })],
    [
      'all at once',
      () => ({
        'C=c.csv': bySite('C', { end: '\r\n', mark: '\ufeff', isQuoted: true }),
        'rest.csv': logOf(shuffled(lines.filter(({ site }) => site !== 'C')), { columns: shuffled(COLUMNS) }),
      }),
    ],
  ])('the results are the same with %s', async (_what, split) => {
    expect(lasting(await resultsOf(split()))).toEqual(lasting(plain));
  });

  it('and a record more, or one cell changed, is seen', async () => {
    const [first, ...rest] = lines.filter(({ kind, sigma_ns }) => kind === '' && sigma_ns === '5');
    const others = lines.filter((line) => line !== first);
    expect(rest.length).toBeGreaterThan(0);
    const changed = lasting(await resultsOf({ 'log.csv': logOf([...others, { ...first!, sigma_ns: '6' }]) }));
    expect(changed['summary.json']).not.toBe(lasting(plain)['summary.json']);
  });

  it('and set-aside.csv tells the files apart', async () => {
    const other = await resultsOf({ 'other.csv': logOf(lines) });
    expect(other['set-aside.csv']).not.toBe(plain['set-aside.csv']);
    expect(other['set-aside.csv']!.replaceAll('other.csv', 'log.csv')).toBe(plain['set-aside.csv']);
  });
});
