import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { buildNetwork } from '#shared/contract/build-network';
import { parseNetworkFile } from '#shared/contract/network-file';
import { constantOrientation } from '#shared/earth/earth-orientation';
import { earthRotation } from '#shared/earth/rotation';
import { type Network } from '#shared/reconcile/network';
import { SET_ASIDE_REASONS } from '#shared/reconcile/record';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { logArguments, readLogs } from './read-logs';
import { UsageProblem } from './usage-problem';

const leapSeconds = shippedLeapSeconds();

/** A network of the sites ORL and VES, in TAI, from 2026 on. */
function twoSites(): Network {
  const site = (code: string, x: number) => ({ code, scale: 'TAI', clock: 'exact', position: { itrs_m: [x, 0, 0] } });
  const file = parseNetworkFile({
    network: 'Two',
    run: { from: '2026-01-01T00:00:00 TAI' },
    sites: [site('ORL', 1), site('VES', 2)],
    rule: { code: 'r', window: { kind: 'light-time' } },
  });
  if (!file.ok) throw new Error(file.problem.text);
  const network = buildNetwork(file.value, {
    leapSeconds,
    rotationFor: () => earthRotation(constantOrientation(-37)),
    earthBarycentricVelocityMS: () => [0, 0, 0],
  });
  if (!network.ok) throw new Error(network.problem.text);
  return network.value;
}

const network = twoSites();
const T = '2026-01-02T00:00:00';

let folder: string;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'read-logs-'));
});
afterEach(() => {
  rmSync(folder, { recursive: true });
});

/** Reads logs given as text, `ORL=` before one that names its site so; says what became of the lines. */
async function outcomeOf(...texts: string[]): Promise<{ events: number; repeated: number; aside: string[]; lines: number[] }> {
  const logs = texts.map((text, at) => {
    const [, site = '', content = ''] = /^(ORL=|VES=)?(.*)$/s.exec(text) ?? [];
    const path = join(folder, `${at}.csv`);
    writeFileSync(path, content);
    return `${site}${path}`;
  });
  const store = await readLogs(logArguments(logs, network), network, leapSeconds, {
    pace: { breathe: () => Promise.resolve() },
    onBytes: () => undefined,
    warn: () => undefined,
  });
  const { rows, counts, setAside, setAsideCount } = store.finish();
  const aside = Array.from({ length: setAsideCount }, (_, k) => {
    const reason = SET_ASIDE_REASONS[setAside.reason[k]!]!;
    return `${setAside.file[k]!}.csv:${setAside.line[k]!} ${reason}`;
  });
  const repeated = counts.repeated.reduce((sum, count) => sum + count, 0);
  return { events: rows.length, repeated, aside: aside.sort(), lines: Array.from(counts.lines) };
}

describe('a log that is named on the command line', () => {
  it('is a path, or a site and a path', () => {
    const path = join(folder, 'x.csv');
    writeFileSync(path, '1234');
    expect(logArguments([path, `ORL=${path}`], network)).toEqual([
      { path, name: 'x.csv', site: undefined, sizeBytes: 4 },
      { path, name: 'x.csv', site: 'ORL', sizeBytes: 4 },
    ]);
  });

  it('may have = further on in its path', () => {
    const path = join(folder, 'a=b.csv');
    writeFileSync(path, '');
    expect(logArguments([path], network)[0]!.path).toBe(path);
    expect(logArguments([`ORL=${path}`], network)[0]).toMatchObject({ path, site: 'ORL' });
  });

  it.each([
    ['XXX=0.csv', 'XXX=0.csv: "XXX" is no site of the network; before the = stands one of ORL, VES'],
    ['none.csv', 'none.csv: cannot be read (ENOENT'],
    ['ORL=none.csv', 'none.csv: cannot be read (ENOENT'],
  ])('is refused as %s', (text, message) => {
    expect(() => logArguments([text], network)).toThrow(UsageProblem);
    expect(() => logArguments([text], network)).toThrow(message);
  });

  it('is refused when it is a folder, which cannot be read twice', () => {
    mkdirSync(join(folder, 'd'));
    expect(() => logArguments([join(folder, 'd')], network)).toThrow(/d: is not a file; it is read twice, so it must be a file/);
  });

  it('is one of at most 65,535', () => {
    expect(() =>
      logArguments(
        Array.from({ length: 65_536 }, () => 'x.csv'),
        network,
      ),
    ).toThrow('65536 logs; at most 65535');
  });
});

describe('a header', () => {
  it.each([
    ['', 'is empty; its first line must be a header such as site,sequence,reading,sigma_ns,amplitude'],
    ['\ufeff\n\n', 'is empty; its first line must be a header'],
    ['site,reading\n', 'line 1: the header "site,reading" has no column sequence; needed are site, sequence and reading'],
    ['\n\nsite,sequence,Reading\n', 'line 3: the header "site,sequence,Reading" has no column reading'],
    ['sequence,reading\n', 'line 1: the header "sequence,reading" has no column site; name the site as in ORL=0.csv'],
    ['site,sequence,reading,note,note\n', 'line 1: the column "note" stands twice; each column needs a name of its own'],
    [
      'site,"sequence,reading\n',
      'line 1: a quote in the header is not closed, or followed by something else than a comma; the header must be whole',
    ],
  ])('is refused as %j', async (text, message) => {
    const refusal = await outcomeOf(text).catch((fault: unknown) => fault);
    expect(refusal).toBeInstanceOf(UsageProblem);
    expect(String(refusal)).toContain(`${join(folder, '0.csv')}: ${message}`);
  });

  it('may have names that objects have too', async () => {
    const log = `site,sequence,reading,__proto__,constructor\nORL,1,${T},a,b\nORL,1,${T},a,c\n`;
    expect(await outcomeOf(log)).toMatchObject({ events: 0, aside: ['0.csv:2 conflict', '0.csv:3 conflict'] });
  });
});

describe('the same identity again', () => {
  const HEAD = 'site,sequence,reading,sigma_ns,amplitude,note\n';
  const again = { events: 1, repeated: 1, aside: [] };
  it.each([
    ['the same line', `${HEAD}ORL,1,${T},5,2,n\nORL,1,${T},5,2,n\n`],
    ['the same line in another file', `${HEAD}ORL,1,${T},5,2,n\n`, `${HEAD}ORL,1,${T},5,2,n\n`],
    ['other columns first', `${HEAD}ORL,1,${T},5,2,n\n`, `note,amplitude,site,sigma_ns,reading,sequence\nn,2,ORL,5,${T},1\n`],
    ['the site on the command line', `${HEAD}ORL,1,${T},5,2,n\n`, `ORL=sequence,reading,sigma_ns,amplitude,note\n1,${T},5,2,n\n`],
    ['the site twice', `${HEAD}ORL,1,${T},5,2,n\n`, `ORL=${HEAD}ORL,1,${T},5,2,n\n`],
    ['empty cells for missing columns', `${HEAD}ORL,1,${T},,,\n`, `site,sequence,reading,series,kind\nORL,1,${T},,\n`],
    ['quotes that are not needed', `${HEAD}ORL,1,${T},5,2,n\n"ORL","1","${T}","5","2","n"\n`],
    ['CRLF', `${HEAD}ORL,1,${T},5,2,n\n`, `${HEAD}ORL,1,${T},5,2,n\n`.replaceAll('\n', '\r\n')],
    ['CRLF within quotes', `${HEAD}ORL,1,${T},5,2,"n\nm"\n`, `${HEAD}ORL,1,${T},5,2,"n\nm"\n`.replaceAll('\n', '\r\n')],
    ['a byte order mark', `${HEAD}ORL,1,${T},5,2,n\n`, `\ufeff${HEAD}ORL,1,${T},5,2,n\n`],
  ])('is repeated with %s', async (_what, ...texts) => {
    expect(await outcomeOf(...texts)).toMatchObject(again);
  });

  it.each([
    ['007 and 7, which is the same number in another text', `${HEAD}ORL,7,${T},5,2,n\nORL,007,${T},5,2,n\n`],
    ['12.0 and 12.00', `${HEAD}ORL,1,${T},12.0,2,n\nORL,1,${T},12.00,2,n\n`],
    ['T and a blank', `${HEAD}ORL,1,${T},5,2,n\nORL,1,${T.replace('T', ' ')},5,2,n\n`],
    ['another note', `${HEAD}ORL,1,${T},5,2,n\nORL,1,${T},5,2,m\n`],
    ['a note and none', `${HEAD}ORL,1,${T},5,2,n\nORL,1,${T},5,2,\n`],
    ['a kind and none', `site,sequence,reading,kind\nORL,1,${T},trigger\nORL,1,${T},\n`],
    ['cells under each other’s names', `site,sequence,reading,a,b\nORL,1,${T},x,y\nORL,1,${T},y,x\n`],
  ])('is a conflict with %s', async (_what, text) => {
    expect(await outcomeOf(text)).toMatchObject({ events: 0, repeated: 0, aside: ['0.csv:2 conflict', '0.csv:3 conflict'] });
  });

  it('is another event under another series, and of another site', async () => {
    const log = `site,sequence,reading,series\nORL,1,${T},\nORL,1,${T},b\nVES,1,${T},\n`;
    expect(await outcomeOf(log)).toMatchObject({ events: 3, repeated: 0, aside: [], lines: [2, 1, 0] });
  });

  it('is not compared with a line that is set aside by itself', async () => {
    const log = `${HEAD}ORL,1,${T},5,2,n\nORL,1,${T},-5,2,n\nORL,1,2025-12-31T00:00:00,5,2,n\n`;
    expect(await outcomeOf(log)).toMatchObject({ events: 1, aside: ['0.csv:3 sigma', '0.csv:4 outside-run'] });
  });
});

describe('a line that is not whole', () => {
  it('is set aside as having other columns, and of no site', async () => {
    const log = `site,sequence,reading\n"ORL"x,1,${T}\nORL,2,${T}\nORL,3\n"ORL,4,${T}\nORL,5,${T}\n`;
    expect(await outcomeOf(log)).toEqual({
      events: 1,
      repeated: 0,
      aside: ['0.csv:2 columns', '0.csv:4 columns', '0.csv:5 columns'],
      lines: [1, 0, 3],
    });
  });
});
