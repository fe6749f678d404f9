import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { compareText } from '#shared/compare-text';
import { createTaiWriter } from '#shared/time/format';
import { frameDtNs, frameSigmaNs, orderFrom } from '#shared/relativity/order';
import { pairOf } from '#shared/relativity/pair';
import { verdictOf } from '#shared/relativity/verdict';
import { type SiteRecord } from '#shared/contract/site-record';
import { reconcileFiles } from '../../backend/command/reconcile-command';
import { checkConservation } from '../../backend/ingest/conservation';
import { eventColumnsOf } from '../../backend/reconcile/event-columns';
import { framesInForce } from '../../backend/reconcile/frames-in-force';
import { root } from '../../scripts/lib.mjs';
import { newFolder } from '../support/folder';
import { newIngest, recordsOfLog, type IngestAtWork } from '../support/ingest';

const EXAMPLES = {
  cairnway: [...['KNF', 'CND', 'FRZ', 'BRW', 'TDW'].map((code) => [undefined, `logs/${code}.csv`] as const), ['OXB', 'shaft.csv'] as const],
  'burst-1987': ['KII', 'IMB', 'BAK'].map((code) => [code, `${code}.csv`] as const),
};

type Line = Readonly<Record<string, string>>;

const table = (path: string): readonly Line[] => Papa.parse<Line>(readFileSync(path, 'utf8'), { header: true, skipEmptyLines: true }).data;

async function batchResults(name: keyof typeof EXAMPLES): Promise<(file: string) => readonly Line[]> {
  const folder = join(root, 'examples', name);
  const out = join(newFolder('batch'), 'out');
  const logs = EXAMPLES[name].map(([site, path]) => {
    const needsSite = site !== undefined && !readFileSync(join(folder, path), 'utf8').split('\n')[0]!.split(',').includes('site');
    return needsSite ? `${site}=${join(folder, path)}` : join(folder, path);
  });
  const progress = { begin: () => undefined, at: () => undefined, end: () => undefined };
  const context = { signal: new AbortController().signal, progress, say: () => undefined };
  await reconcileFiles({ network: join(folder, 'network.json'), out, logs, limit: 10_000 }, context);
  return (file) => table(join(out, file));
}

async function throughTheDatabase(name: keyof typeof EXAMPLES): Promise<IngestAtWork> {
  const folder = join(root, 'examples', name);
  const at = newIngest(JSON.parse(readFileSync(join(folder, 'network.json'), 'utf8')));
  const bySite = new Map<string, SiteRecord[]>();
  for (const [ofSite, path] of EXAMPLES[name])
    for (const [site, record] of recordsOfLog(join(folder, path), ofSite)) {
      if (!at.network.siteIds.has(site)) continue;
      const records = bySite.get(site) ?? [];
      records.push(record);
      bySite.set(site, records);
    }
  await Promise.all([...bySite].map(([site, records]) => at.send(site, ...records)));
  return at;
}

const idsOf = ({ db }: IngestAtWork): number[] => db.$client.prepare<[], number>('SELECT trigger_id FROM events').pluck().all();

describe.each(['cairnway', 'burst-1987'] as const)('the records of examples/%s through the database', (name) => {
  it('become the events of the batch command, bit for bit', async () => {
    const results = await batchResults(name);
    const at = await throughTheDatabase(name);
    const { stored, siteCodes } = eventColumnsOf(at.db, at.network.networkId, idsOf(at));
    const taiText = createTaiWriter();
    const ours = stored.map((event) => [
      siteCodes[event.site],
      event.series,
      event.sequence,
      event.kind,
      taiText(event),
      event.sigmaNs,
      event.sigmaSource,
      event.xM,
      event.yM,
      event.zM,
      event.amplitude,
    ]);
    const theirs = results('events.csv').map((line) => [
      line['site'],
      line['series'],
      line['sequence'],
      line['kind'],
      line['tai'],
      Number(line['sigma_ns']),
      line['sigma_from'],
      Number(line['x_m']),
      Number(line['y_m']),
      Number(line['z_m']),
      line['amplitude'] === '' ? NaN : Number(line['amplitude']),
    ]);
    expect(theirs.length).toBeGreaterThan(20);
    expect(ours).toEqual(theirs);
    expect(checkConservation(at.db)).toEqual([]);
    at.close();
  });

  it('have the pairs and orders of the batch command, bit for bit', async () => {
    const results = await batchResults(name);
    const at = await throughTheDatabase(name);
    const { events, errors, names } = eventColumnsOf(at.db, at.network.networkId, idsOf(at));
    const rowOf = new Map(names.map((event, row) => [event, row]));
    const frames = framesInForce(at.db, at.ingest.network(at.network.networkId));
    if (!frames.ok) throw new Error(frames.problem.text);
    expect(frames.value.leftOut).toEqual([]);
    const sigmas = 3;
    const lines = results('pairs.csv');
    expect(lines.length).toBeGreaterThan(2);
    for (const line of lines) {
      const pair = pairOf(events, errors, rowOf.get(line['a']!)!, rowOf.get(line['b']!)!);
      const verdict = verdictOf(pair, sigmas);
      expect([pair.dtNs, pair.distanceM, pair.sigmaDtNs, verdict.sigmaGapNs, verdict.marginSigma, verdict.class]).toEqual([
        ...['dt_ns', 'distance_m', 'sigma_dt_ns', 'sigma_gap_ns', 'margin_sigma'].map((column) => Number(line[column])),
        line['class'],
      ]);
    }
    // A set's frames are taken at its first event, which is the a of its first pair.
    const firstOf = new Map(lines.toReversed().map((line) => [line['set']!, line['a']!]));
    for (const line of results('orders.csv')) {
      const first = rowOf.get(firstOf.get(line['set']!)!)!;
      const velocity = frames.value.resolver.velocityAt(line['frame']!, { taiS: events.taiS[first]!, ps: events.ps[first]! });
      if (!velocity.ok) throw new Error(velocity.problem.text);
      const pair = pairOf(events, errors, rowOf.get(line['a']!)!, rowOf.get(line['b']!)!);
      const [dtNs, sigmaNs] = [frameDtNs(pair, velocity.value), frameSigmaNs(pair, velocity.value)];
      expect([dtNs, sigmaNs, orderFrom(dtNs, sigmaNs, sigmas)]).toEqual([Number(line['dt_ns']), Number(line['sigma_ns']), line['order']]);
    }
    at.close();
  });

  it('are set aside for the reasons of the batch command', async () => {
    const results = await batchResults(name);
    const at = await throughTheDatabase(name);
    const ofStream = new Set(['columns', 'site']);
    const theirs = results('set-aside.csv')
      .map((line) => line['reason']!)
      .filter((reason) => !ofStream.has(reason));
    const ours = at.db.$client.prepare<[], string>('SELECT reason FROM set_asides').pluck().all();
    expect(ours.toSorted(compareText)).toEqual(theirs.toSorted(compareText));
    at.close();
  });
});
