import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type EventInFull } from '#shared/contract/event-routes';
import { MOST_EVENTS_PAIRED, type PairsOfSet } from '#shared/contract/pair-routes';
import { fromUnbounded } from '#shared/contract/unbounded';
import { roles } from '#schema/schema';
import { reconcileFiles } from '../../backend/command/reconcile-command';
import { startApp, type RunningApp } from '../support/app';
import { type Client } from '../support/client';
import { newFolder } from '../support/folder';
import { rowsOf, type Row } from '../support/results';
import { CAIRNWAY, CAIRNWAY_LOGS, eventIdsOf, storeCairnway } from '../support/stored-example';
import { makeWorld } from '../support/world';

let app: RunningApp;
let analyst: Client;
let networkId: number;
let idOf: ReadonlyMap<string, number>;
let results: (file: string) => readonly Row[];

/** The example's records through the ingest into the database of a running server, and through the batch command into files. */
beforeAll(async () => {
  app = await startApp();
  const { db } = app.ground;
  const world = await makeWorld(app);
  ({ networkId } = await storeCairnway(app));
  db.insert(roles).values({ personId: world.people.analyst, role: 'analyst', networkId, givenAt: '2026-01-01T00:00:00.000Z' }).run();
  analyst = world.as('analyst');
  idOf = eventIdsOf(app);
  const out = join(newFolder('pairs'), 'out');
  const progress = { begin: () => undefined, at: () => undefined, end: () => undefined };
  const given = {
    network: join(CAIRNWAY, 'network.json'),
    out,
    logs: CAIRNWAY_LOGS.map(([site, path]) => (site === undefined ? path : `${site}=${path}`)),
    limit: 10_000,
  };
  await reconcileFiles(given, { signal: new AbortController().signal, progress, say: () => undefined });
  results = (file) => rowsOf(readFileSync(join(out, file), 'utf8'));
});
afterAll(async () => {
  await app.close();
});

const idsOf = (names: Iterable<string>): string => [...names].map((name) => idOf.get(name)).join(',');
const pairsOf = async (query: string): Promise<PairsOfSet> => {
  const { status, body, text } = await analyst.get(`/networks/${networkId}/pairs?${query}`);
  expect(status, text).toBe(200);
  return body as PairsOfSet;
};
const numberOrNull = (text: string | undefined): number | null => (text === '' || text === undefined ? null : Number(text));

describe('the pairs of a set of events', () => {
  it('have the numbers and orders of the batch command, bit for bit', async () => {
    const [pairs, orders] = [results('pairs.csv'), results('orders.csv')];
    const sets = [...new Set(pairs.map((line) => line['set']!))];
    expect(sets.length).toBeGreaterThan(10);
    for (const set of sets) {
      const lines = pairs.filter((line) => line['set'] === set);
      const answer = await pairsOf(`events=${idsOf(new Set(lines.flatMap((line) => [line['a']!, line['b']!])))}`);
      const name = (place: number): string => answer.events[place - 1]!.name;
      expect(
        answer.pairs.map((pair) => [
          ...[name(pair.a), name(pair.b), pair.dtNs, pair.distanceM, pair.sigmaDtNs, pair.sigmaGapNs, fromUnbounded(pair.marginSigma)],
          ...[fromUnbounded(pair.reverseMarginSigma), pair.intervalM2, pair.class, pair.properTimeS ?? pair.properDistanceM],
          ...[pair.turning?.speedC ?? null, pair.turning?.sigmaC ?? null, ...(pair.turning?.toward ?? [null, null, null])],
        ]),
      ).toEqual(
        lines.map((line) => [
          ...[line['a'], line['b']],
          ...['dt_ns', 'distance_m', 'sigma_dt_ns', 'sigma_gap_ns', 'margin_sigma', 'reverse_margin_sigma', 'interval_m2'].map((column) =>
            Number(line[column]),
          ),
          line['class'],
          ...['proper', 'turning_speed', 'turning_sigma', 'toward_x', 'toward_y', 'toward_z'].map((column) => numberOrNull(line[column])),
        ]),
      );
      expect(
        answer.pairs.flatMap((pair) =>
          pair.orders.map((order, at) => [name(pair.a), name(pair.b), answer.frames[at]!.code, order.dtNs, order.sigmaNs, order.order]),
        ),
      ).toEqual(
        orders
          .filter((line) => line['set'] === set)
          .map((line) => [line['a'], line['b'], line['frame'], Number(line['dt_ns']), Number(line['sigma_ns']), line['order']]),
      );
    }
  });

  it('are told with an error budget that adds up', async () => {
    // Some events of each site, so that pairs share a segment, a reference, or nothing.
    const some = ['KNF', 'CND', 'FRZ', 'BRW', 'TDW', 'OXB'].flatMap((site) =>
      [...idOf.keys()].filter((name) => name.startsWith(`${site}:`)).slice(0, 8),
    );
    const { pairs } = await pairsOf(`events=${idsOf(some)}`);
    /** A dozen roundings of squares and a root, each 1.1e-16. */
    const ROUNDINGS = 2e-15;
    for (const { terms, sigmaDtNs, sigmaGapNs } of pairs) {
      const sum = (names: readonly { name: string; sigmaNs: number }[]): number =>
        Math.sqrt(names.reduce((all, { sigmaNs }) => all + sigmaNs ** 2, 0));
      expect(Math.abs(sum(terms.filter(({ name }) => name !== 'distance')) - sigmaDtNs)).toBeLessThanOrEqual(ROUNDINGS * sigmaDtNs);
      expect(Math.abs(sum(terms) - sigmaGapNs)).toBeLessThanOrEqual(ROUNDINGS * sigmaGapNs);
    }
    expect(new Set(pairs.flatMap(({ terms }) => terms.map(({ name }) => name))).has('rate')).toBe(true);
  });

  it('are those of the frames that are asked for, and of no unknown one', async () => {
    const events = [...idOf.values()].slice(0, 3).join(',');
    const all = await pairsOf(`events=${events}`);
    const code = all.frames.at(-1)!.code;
    const one = await pairsOf(`events=${events}&frames=${code}`);
    expect(one.frames).toEqual(all.frames.slice(-1));
    expect(one.pairs.map(({ orders }) => orders)).toEqual(all.pairs.map(({ orders }) => orders.slice(-1)));
    const { status, text } = await analyst.get(`/networks/${networkId}/pairs?events=${events}&frames=nowhere`);
    expect([status, text.includes('no frame nowhere')]).toEqual([400, true]);
  });

  it('33 are of so many events at most, and sigmas within bounds', async () => {
    const ids = (count: number): string => Array.from({ length: count }, (_, at) => at + 1).join(',');
    for (const query of [`events=${ids(MOST_EVENTS_PAIRED + 1)}`, 'events=1,1', 'events=', 'events=1&sigmas=101', 'events=1&sigmas=NaN'])
      expect((await analyst.get(`/networks/${networkId}/pairs?${query}`)).status, query).toBe(400);
  });
});

describe('one event', () => {
  it('is told from what the site wrote to the instant, step by step', async () => {
    const lines = results('events.csv');
    for (const line of lines.filter((_, at) => at % 7 === 0)) {
      const name = line['series'] === '' ? `${line['site']}:${line['sequence']}` : `${line['site']}:${line['series']}:${line['sequence']}`;
      const { body } = await analyst.get(`/events/${idOf.get(name)}`);
      const { record, current } = body as EventInFull;
      const { correction, terms, placeM, sigmaNs } = current!;
      expect([sigmaNs, ...placeM]).toEqual(['sigma_ns', 'x_m', 'y_m', 'z_m'].map((column) => Number(line[column])));
      expect(correction!.written).toBe(record.reading);
      // The steps as doubles, against the difference of the two instants, which was rounded to a picosecond once.
      expect(Math.abs(correction!.delayNs + correction!.offsetNs + correction!.driftNs - correction!.takenOffNs)).toBeLessThanOrEqual(
        0.0005001,
      );
      const ROUNDINGS = 2e-15;
      expect(Math.abs(Math.hypot(...terms.map((term) => term.sigmaNs)) - sigmaNs)).toBeLessThanOrEqual(ROUNDINGS * sigmaNs);
    }
  });
});
