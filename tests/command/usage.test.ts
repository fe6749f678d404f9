import { mkdirSync, readdirSync, readFileSync, symlinkSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { root } from '../../scripts/lib.mjs';
import { skewline, SKEWLINE, startProgram } from '../support/command';
import { newFolder } from '../support/folder';
import { smallNetwork } from '../support/small-network';

const ONE_LINE = /^skewline: [^\n]+\n$/;

let folder: string;
beforeAll(() => {
  folder = newFolder('usage');
  const write = (name: string, text: string): void => writeFileSync(join(folder, name), text);
  write('network.json', JSON.stringify(smallNetwork(), null, 2));
  write('log.csv', 'site,sequence,reading\nA,1,2020-01-02T00:00:00\n');
  write('nosite.csv', 'sequence,reading\n1,2020-01-02T00:00:00\n');
  write('live.csv', 'site,from,to\nA,2020-01-01T00:00:00Z,yesterday\n');
  write('word.json', '{\n  "network": Three,\n  "run": 1\n}\n');
  write('comma.json', '{\n  "network": "Three",\n}\n');
  write('mistake.json', JSON.stringify(smallNetwork({ rule: { code: 'r', minimum_fold: 1, window: { kind: 'light-time' } } })));
  write('selection.json', JSON.stringify(smallNetwork({ selections: [{ code: 's', events: ['A:1', 'A:2'] }] })));
  write('semicolons.csv', 'site;sequence;reading\nA;1;2020-01-02T00:00:00\n');
  write('tabs.csv', 'sequence\treading\n1\t2020-01-02T00:00:00\n');
  write('noreading.csv', 'sequence\n1\n');
  writeFileSync(join(folder, 'utf16.csv'), Buffer.from('\ufeffsite,sequence,reading\n', 'utf16le'));
  write('mark.json', `\ufeff${JSON.stringify(smallNetwork())}`);
  write('events.csv', 'no log at all');
  mkdirSync(join(folder, 'old'));
  write('old/pairs.csv', 'no log at all');
  symlinkSync('old', join(folder, 'oldlink'));
  symlinkSync('events.csv', join(folder, 'eventslink.csv'));
  symlinkSync('nothing', join(folder, 'link'));
  const list = readFileSync(join(root, 'shared/time/shipped-leap-seconds.ts'), 'utf8');
  write('broken.list', list.slice(list.indexOf('`') + 1, list.lastIndexOf('`')).replace('3692217600', '3692217601'));
});

const run = (...args: string[]) => skewline(args, folder);
const reconcile = (...args: string[]) => run('reconcile', '--network', 'network.json', '--out', 'out', ...args);

describe('help', () => {
  it('says what the program is for and which commands it has', async () => {
    const { code, stdout, stderr } = await run('--help');
    expect(stdout).toMatch(/^Usage: skewline \[options\] \[command\]\n/);
    expect(stdout).toMatch(/\n {2}reconcile .*from log files to events/);
    expect([code, stderr]).toEqual([0, '']);
  });

  it('of a command names its arguments, every option with its default, and the exit status', async () => {
    const { code, stdout, stderr } = await run('reconcile', '--help');
    expect(stdout).toMatch(/^Usage: skewline reconcile \[options\] <log\.\.\.>\n/);
    const options = [...stdout.matchAll(/^ {2}(?:-\w, )?(--[\w-]+)/gm)].map(([, option]) => option);
    expect(options).toEqual(['--network', '--out', '--live', '--leap-seconds', '--earth-orientation', '--limit', '--help']);
    expect(stdout).toContain('(default: 10000)');
    expect(stdout).toMatch(/Exit status: 0 done .*, 2 unusable arguments or network file, 1 anything else\.\n$/);
    expect([code, stderr]).toEqual([0, '']);
    expect(await run('help', 'reconcile')).toEqual({ code, stdout, stderr, signal: null });
  });

  it('is quiet when whoever reads it has had enough', async () => {
    const command = `${SKEWLINE.join(' ')} reconcile --help | true; exit \${PIPESTATUS[0]}`;
    const { code, stderr } = await startProgram(['bash', '-c', command]).ended;
    expect([code, stderr]).toEqual([0, '']);
  });

  it('is not asked for to know the version', async () => {
    const { version } = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8')) as { version: string };
    expect(await run('--version')).toEqual({ code: 0, signal: null, stdout: `${version}\n`, stderr: '' });
  });
});

describe('arguments that cannot be used are one line and status 2', () => {
  it.each<[string[], string]>([
    [[], 'no command is given; name one, such as reconcile (skewline --help tells more)'],
    [['reconcil'], "unknown command 'reconcil'"],
    [['--colour'], "unknown option '--colour'"],
    [['reconcile'], "required option '--network <file>' not specified"],
    [['reconcile', '--network', 'network.json', 'log.csv'], "required option '--out <folder>' not specified"],
    [['reconcile', '--network', 'network.json', '--out', 'out'], "missing required argument 'log'"],
    [['reconcile', '--network', 'network.json', '--out'], "option '--out <folder>' argument missing"],
    [['reconcile', '--network', 'network.json', '--out', 'out', 'log.csv', '--colour'], "unknown option '--colour'"],
    [
      ['reconcile', '--network', 'network.json', '--out', 'out', 'log.csv', '--lime', 'x'],
      "unknown option '--lime' (Did you mean --live?)",
    ],
  ])('%j', async (args, text) => {
    const { code, stdout, stderr } = await run(...args);
    expect(stderr).toMatch(ONE_LINE);
    expect(stderr).toContain(`skewline: ${text}`);
    expect([code, stdout]).toEqual([2, '']);
  });

  it.each(['0', '-1', '1.5', 'many', '1e3', '', '9007199254740993'])('--limit %j', async (limit) => {
    const { code, stdout, stderr } = await reconcile('log.csv', `--limit=${limit}`);
    expect(stderr).toBe(`skewline: option '--limit <n>' argument '${limit}' is invalid. It must be a whole number, at least 1.\n`);
    expect([code, stdout]).toEqual([2, '']);
  });
});

describe('files that cannot be used are one line and status 2, and nothing is written', () => {
  it.each<[string, string[], string]>([
    ['no network file', ['--network', 'none.json', 'log.csv'], '--network: none.json cannot be read (ENOENT'],
    ['a network file that is a folder', ['--network', '.', 'log.csv'], '--network: . cannot be read (EISDIR'],
    ['a word that is no JSON', ['--network', 'word.json', 'log.csv'], 'word.json: is not JSON ('],
    ['a comma too many', ['--network', 'comma.json', 'log.csv'], 'comma.json: is not JSON ('],
    [
      'a mistake in the network',
      ['--network', 'mistake.json', 'log.csv'],
      'mistake.json: rule.minimum_fold: is 1; it must be a whole number, at least 2',
    ],
    [
      'a selection of what was not seen',
      ['--network', 'selection.json', 'log.csv'],
      'selection.json: selections[0].events[1]: is "A:2"; it must be the name of an accepted event, such as ORL:17',
    ],
    ['no log', ['none.csv'], 'none.csv: cannot be read (ENOENT'],
    ['a log that is a folder', ['log.csv', '.'], '.: is not a file; it is read twice, so it must be a file and no pipe or folder'],
    ['a log of an unknown site', ['X=log.csv'], 'X=log.csv: "X" is no site of the network; before the = stands one of A, B, C'],
    [
      'a log that names no site',
      ['nosite.csv'],
      'nosite.csv: line 1: the header "sequence,reading" has no column site; name the site as in ORL=nosite.csv',
    ],
    [
      'a log with semicolons',
      ['semicolons.csv'],
      'semicolons.csv: line 1: the header "site;sequence;reading" has semicolons; fields must be separated by commas',
    ],
    ['a log with tabs', ['A=tabs.csv'], 'tabs.csv: line 1: the header "sequence\\treading" has tabs; fields must be separated by commas'],
    [
      'a log of a site without readings',
      ['A=noreading.csv'],
      'noreading.csv: line 1: the header "sequence" has no column reading; needed are sequence and reading',
    ],
    ['a log in UTF-16', ['utf16.csv'], 'utf16.csv: is in UTF-16; it must be in UTF-8'],
    ['no live times', ['log.csv', '--live', 'none.csv'], '--live: none.csv: cannot be read (ENOENT'],
    ['a wrong live time', ['log.csv', '--live', 'live.csv'], 'live.csv: line 2, to: "yesterday" is not of the form'],
    ['no leap seconds', ['log.csv', '--leap-seconds', 'none.list'], '--leap-seconds: none.list cannot be read (ENOENT'],
    ['leap seconds that were changed', ['log.csv', '--leap-seconds', 'broken.list'], 'broken.list: '],
    ['no Earth orientation', ['log.csv', '--earth-orientation', 'none.txt'], '--earth-orientation: none.txt cannot be read (ENOENT'],
    ['an Earth orientation that is none', ['log.csv', '--earth-orientation', 'log.csv'], 'log.csv: '],
    ['results where a file is', ['log.csv', '--out', 'log.csv'], '--out: "log.csv" is a file; it must be a folder'],
    ['results where a link to nothing is', ['log.csv', '--out', 'link'], '--out: "link" is a link to what does not exist; it must be'],
    ['results where the system lets nobody make them', ['log.csv', '--out', '/proc/nope/x'], '--out: "/proc/nope/x" cannot be made ('],
    [
      'a log that a result would replace',
      ['log.csv', 'events.csv', '--out', '.'],
      '--out: the results in "." would take the place of events.csv; name another folder',
    ],
    [
      'a log of a site that a result would replace, by another name of its folder',
      ['A=old/pairs.csv', '--out', 'oldlink/'],
      '--out: the results in "oldlink/" would take the place of old/pairs.csv; name another folder',
    ],
    [
      'live times that a result would replace, by a link',
      ['log.csv', '--live', 'eventslink.csv', '--out', '.'],
      '--out: the results in "." would take the place of eventslink.csv; name another folder',
    ],
    ['results below a file', ['log.csv', '--out', 'log.csv/out'], '--out: "log.csv/out" cannot be made ('],
  ])('%s', async (_what, args, text) => {
    const before = readdirSync(folder);
    const { code, stdout, stderr } = await reconcile(...args);
    expect(stderr).toMatch(ONE_LINE);
    expect(stderr).toContain(`skewline: ${text}`);
    expect([code, stdout]).toEqual([2, '']);
    expect(readdirSync(folder)).toEqual(before);
  });
});

describe('a run that is done', () => {
  it('says its counts in one line on stderr, nothing on stdout, with status 0', async () => {
    const { code, stdout, stderr } = await reconcile('log.csv', 'A=nosite.csv', '--out', 'done');
    expect(stderr).toBe('1 event, 0 coincidences; 0 records set aside, 1 repeated\n');
    expect([code, stdout]).toEqual([0, '']);
  });

  it('takes a network file with a byte order mark, as it takes a log with one', async () => {
    const { code, stderr } = await reconcile('log.csv', '--network', 'mark.json', '--out', 'marked');
    expect([code, stderr]).toEqual([0, '1 event, 0 coincidences; 0 records set aside, 0 repeated\n']);
  });
});
