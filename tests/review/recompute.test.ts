import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type FrozenInputs, type FrozenResults } from '#shared/contract/certificate';
import { recomputed } from '#shared/contract/recompute';
import { instantOf } from '#shared/time/instant';
import { createTaiWriter } from '#shared/time/format';
import { reconcileFiles } from '../../backend/command/reconcile-command';
import { earthBarycentricVelocityMS } from '../../backend/frames/ephemeris';
import { newFolder } from '../support/folder';
import { randomInputs } from '../support/random-inputs';
import { rowsOf } from '../support/results';

const COLUMNS = ['site', 'sequence', 'series', 'kind', 'reading', 'sigmaNs', 'amplitude'] as const;
const HEADER = 'site,sequence,series,kind,reading,sigma_ns,amplitude';
const progress = { begin: () => undefined, at: () => undefined, end: () => undefined };

const resultsOf = (inputs: FrozenInputs): FrozenResults => {
  const results = recomputed(inputs, earthBarycentricVelocityMS);
  if (!results.ok) throw new Error(`${results.problem.where}: ${results.problem.text}`);
  return results.value;
};

let folder = '';
let runs = 0;

/** The tables of the batch command for the same records, with all of them as a selection. */
async function batchTables(
  inputs: FrozenInputs,
  names: readonly string[],
): Promise<(name: string) => readonly Readonly<Record<string, string>>[]> {
  folder = folder === '' ? newFolder('recompute') : folder;
  const here = join(folder, String(++runs));
  mkdirSync(here);
  const write = (name: string, text: string): string => {
    writeFileSync(join(here, name), text);
    return join(here, name);
  };
  const lines = inputs.records.map((record) => COLUMNS.map((column) => record[column]).join(','));
  const out = join(here, 'out');
  await reconcileFiles(
    {
      network: write('network.json', JSON.stringify({ ...inputs.network, selections: [{ code: 'all', events: names }] })),
      logs: [write('log.csv', [HEADER, ...lines, ''].join('\n'))],
      leapSeconds: write('leap-seconds.list', inputs.leapSeconds),
      ...(inputs.orientation !== null && { earthOrientation: write('finals.txt', inputs.orientation) }),
      out,
      limit: 10_000,
    },
    { signal: new AbortController().signal, progress, say: () => undefined },
  );
  return (name) => rowsOf(readFileSync(join(out, name), 'utf8'));
}

const taiText = createTaiWriter();
const numberOr = (text: string | undefined): number | null => (text === '' ? null : Number(text));

/** Each case runs the whole command. */
const CASES = process.env['LONG'] ? 500 : 25;

describe('recomputed results', () => {
  it('are those of the batch command, bit for bit', async () => {
    const seen = new Set<string>();
    await fc.assert(
      fc.asyncProperty(randomInputs, async (inputs) => {
        const { events, frames, pairs } = resultsOf(inputs);
        const names = events.map(({ name }) => name);
        const table = await batchTables(inputs, names);
        expect(events.map(({ name, at, sigmaNs, placeM }) => [name, taiText(instantOf(at.taiS, at.ps)), sigmaNs, ...placeM])).toEqual(
          table('events.csv').map((row) => [
            [row['site'], ...(row['series'] === '' ? [] : [row['series']]), row['sequence']].join(':'),
            row['tai'],
            ...['sigma_ns', 'x_m', 'y_m', 'z_m'].map((column) => Number(row[column])),
          ]),
        );
        const theirs = table('pairs.csv').filter(({ set }) => set === 'all');
        expect(
          pairs.map((pair) => [
            ...[names[pair.a - 1], names[pair.b - 1], pair.class, pair.dtNs, pair.distanceM, pair.sigmaDtNs, pair.sigmaGapNs],
            ...[Number(pair.marginSigma), Number(pair.reverseMarginSigma), pair.intervalM2],
            pair.properDistanceM ?? (pair.properTimeS && pair.properTimeS),
            ...[pair.turning?.speedC ?? null, pair.turning?.sigmaC ?? null, ...(pair.turning?.toward ?? [null, null, null])],
          ]),
        ).toEqual(
          theirs.map((row) => [
            ...[row['a'], row['b'], row['class']],
            ...['dt_ns', 'distance_m', 'sigma_dt_ns', 'sigma_gap_ns'].map((column) => Number(row[column])),
            ...['margin_sigma', 'reverse_margin_sigma', 'interval_m2'].map((column) => Number(row[column])),
            ...['proper', 'turning_speed', 'turning_sigma', 'toward_x', 'toward_y', 'toward_z'].map((column) => numberOr(row[column])),
          ]),
        );
        expect(
          pairs.flatMap((pair) =>
            pair.orders.map(({ dtNs, sigmaNs, order }, at) => [
              names[pair.a - 1],
              names[pair.b - 1],
              frames[at]?.code,
              dtNs,
              sigmaNs,
              order,
            ]),
          ),
        ).toEqual(
          table('orders.csv')
            .filter(({ set }) => set === 'all')
            .map((row) => [row['a'], row['b'], row['frame'], Number(row['dt_ns']), Number(row['sigma_ns']), row['order']]),
        );
        for (const pair of pairs) seen.add(pair.class);
        for (const { code } of frames) seen.add(code);
      }),
      { numRuns: CASES },
    );
    // The networks are such that all of these come up.
    expect([...seen]).toEqual(expect.arrayContaining(['timelike', 'spacelike', 'geocentric', 'bary', 'fast', 'along', 'fixed', 'chain']));
  });

  it('do not depend on the order of records', () => {
    fc.assert(
      fc.property(
        randomInputs.chain((inputs) =>
          fc.tuple(fc.constant(inputs), fc.shuffledSubarray([...inputs.records], { minLength: inputs.records.length })),
        ),
        ([inputs, records]) => {
          expect(resultsOf({ ...inputs, records })).toEqual(resultsOf(inputs));
        },
      ),
    );
  });

  it('of a site that changed between two records are those of two sites that stand at different places, under one name', () => {
    fc.assert(
      fc.property(randomInputs, (inputs) => {
        const [first, second] = inputs.network.sites;
        if (!first || !second) throw new Error('two sites at least');
        // Every record of the second site is one of the first, read by the second's entry.
        const records = inputs.records.map((record) =>
          record.site === second.code ? { ...record, site: first.code, entry: second.code } : record,
        );
        const [plain, asOne] = [resultsOf(inputs), resultsOf({ ...inputs, records })];
        expect(asOne.pairs.map(({ dtNs, sigmaGapNs, class: kind }) => ({ dtNs, sigmaGapNs, kind }))).toEqual(
          plain.pairs.map(({ dtNs, sigmaGapNs, class: kind }) => ({ dtNs, sigmaGapNs, kind })),
        );
        expect(asOne.events.map(({ site }) => site)).not.toContain(second.code);
      }),
    );
  });
});

describe('inputs that give no results', () => {
  const [inputs] = fc.sample(randomInputs, { numRuns: 1, seed: 1 });
  if (!inputs) throw new Error('no sample');
  const [record] = inputs.records;
  if (!record) throw new Error('no record');
  const with1 = (more: object): FrozenInputs => ({ ...inputs, records: [record, { ...record, sequence: '99', ...more }] });

  it.each<[string, FrozenInputs, string]>([
    [
      'a leap-second list that was altered',
      { ...inputs, leapSeconds: inputs.leapSeconds.replace('2272060800', '2272060801') },
      'inputs.leapSeconds, line ',
    ],
    ['an orientation that is none', { ...inputs, orientation: 'no table' }, 'inputs.orientation, line 1'],
    ['an orientation without a day', { ...inputs, orientation: '' }, 'inputs.orientation, '],
    ['a site that is not there', with1({ site: 'NIX' }), 'inputs.records[1].site'],
    ['an entry that is not there', with1({ entry: 'NIX' }), 'inputs.records[1].entry'],
    ['a reading that is none', with1({ reading: 'noon' }), 'inputs.records[1]'],
    ['a reading outside of the run', with1({ reading: '2027-03-01T12:00:00' }), 'inputs.records[1]'],
    ['a record that stands twice', { ...inputs, records: [record, record] }, 'inputs.records[1]'],
    [
      'a clock that is not there',
      { ...inputs, network: { ...inputs.network, clocks: [], sites: inputs.network.sites.map((one) => ({ ...one, clock: 'c9' })) } },
      'inputs.network.sites[0].clock',
    ],
  ])('name the place: %s', (_, given, where) => {
    const results = recomputed(given, earthBarycentricVelocityMS);
    expect(results.ok ? '' : results.problem.where).toContain(where);
  });

  it('are read without a rule as with one, and as pairs of whole numbers of TAI as in words', () => {
    const network = { ...inputs.network, rule: undefined };
    expect(resultsOf({ ...inputs, network })).toEqual(resultsOf(inputs));
    const noon = instantOf(1_772_366_437, 123_000_000_000); // 2026-03-01T12:00:00.123 UTC, TAI - UTC 37 s (IERS Bulletin C)
    const tai = { ...inputs, network: { ...network, sites: network.sites.map((one) => ({ ...one, scale: 'TAI' as const })) } };
    const one = (more: object): FrozenInputs => ({ ...tai, records: [{ ...record, sigmaNs: '5', ...more }] });
    const pair = one({ readingForm: 'tai-pair', reading: `${noon.taiS} ${noon.ps}` });
    expect(resultsOf(pair)).toEqual(resultsOf(one({ reading: '2026-03-01T12:00:37.123' })));
  });
});
