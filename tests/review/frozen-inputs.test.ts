import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type FrozenInputs, type FrozenResults } from '#shared/contract/certificate';
import { type SiteRecord } from '#shared/contract/site-record';
import { recomputed } from '#shared/contract/recompute';
import { frozenInputs, type ToFreeze } from '../../backend/candidates/frozen-inputs';
import { openDb } from '../../backend/db';
import { earthBarycentricVelocityMS } from '../../backend/frames/ephemeris';
import { setInFull } from '../../backend/pairs/set-in-full';
import { insertRow, insertNetwork } from '../support/network-rows';
import { type IngestAtWork, ingestOver, newIngest, record, recordsOfLog } from '../support/ingest';
import { newFolder } from '../support/folder';
import { randomInputs } from '../support/random-inputs';
import { CAIRNWAY, CAIRNWAY_LOGS } from '../support/stored-example';
import { smallNetwork } from '../support/small-network';

const AT = '2026-03-01T00:00:00.000Z';
const SIGMAS = 3;

const idsOf = ({ db }: IngestAtWork): number[] =>
  db.$client.prepare<[], number>('SELECT trigger_id FROM events ORDER BY trigger_id').pluck().all();

function frozen(at: IngestAtWork, triggerIds: readonly number[], more: Partial<ToFreeze> = {}): FrozenInputs {
  const inputs = frozenInputs(at.db, { networkId: at.network.networkId, triggerIds, frames: [], sigmas: SIGMAS, ruleId: null, ...more });
  if (!inputs.ok) throw new Error(`${inputs.problem.where} ${inputs.problem.text}`);
  return inputs.value;
}

function resultsOf(inputs: FrozenInputs): FrozenResults {
  const results = recomputed(inputs, earthBarycentricVelocityMS);
  if (!results.ok) throw new Error(`${results.problem.where}: ${results.problem.text}`);
  return results.value;
}

/** The numbers that the database's events give, without what is the database's alone. */
function storedResults(at: IngestAtWork, eventIds: readonly number[], frames: readonly string[]): FrozenResults {
  const { events, frames: taken, pairs } = setInFull(at.db, { networkId: at.network.networkId, eventIds, frames, sigmas: SIGMAS });
  return {
    events: events.map(({ name, site, at: when, placeM, sigmaNs, terms }) => ({ name, site, at: when, placeM, sigmaNs, terms })),
    frames: taken,
    pairs,
  };
}

const codesOf = ({ frames }: FrozenResults): string[] => frames.map(({ code }) => code);

describe('what is frozen of examples/cairnway', () => {
  let at: IngestAtWork;
  beforeAll(async () => {
    at = newIngest(JSON.parse(readFileSync(join(CAIRNWAY, 'network.json'), 'utf8')));
    for (const [ofSite, path] of CAIRNWAY_LOGS)
      for (const [site, one] of recordsOfLog(path, ofSite)) if (at.network.siteIds.has(site)) void at.send(site, one);
    await at.ingest.whenIdle();
  });
  afterAll(() => at.close());

  it('gives the numbers that stand in the database, bit for bit, whatever the events and frames', () => {
    const ids = idsOf(at);
    expect(ids.length).toBeGreaterThan(500);
    fc.assert(
      fc.property(
        fc.uniqueArray(fc.constantFrom(...ids), { minLength: 1, maxLength: 8 }),
        fc.subarray(['bary', 'cmb', 'stream', 'along', 'held']),
        (triggerIds, frames) => {
          const results = resultsOf(frozen(at, triggerIds, { frames }));
          expect(codesOf(results)).toEqual(expect.arrayContaining(['geocentric', ...frames]));
          expect(results).toEqual(storedResults(at, triggerIds, codesOf(results)));
        },
      ),
    );
  });

  it('holds what the events rest on, and no more', () => {
    const [triggerId] = at.db.$client
      .prepare<[], number>("SELECT e.trigger_id FROM events e JOIN sites s ON s.id = e.site_id WHERE s.code = 'FRZ' LIMIT 1")
      .pluck()
      .all();
    const { network, records } = frozen(at, [triggerId!], { frames: ['stream'] });
    expect(network.sites.map(({ code }) => code)).toEqual(['FRZ']);
    expect(network.clocks?.map(({ code, segments }) => [code, segments.length])).toEqual([['shelf-rubidium', 1]]);
    expect(network.frames?.map(({ code }) => code)).toEqual(['bary', 'cmb', 'stream']);
    expect(records).toHaveLength(1);
    // The sites of a baseline stand with their places alone.
    const along = frozen(at, [triggerId!], { frames: ['along'] }).network;
    expect(along.sites.map(({ code, clock }) => [code, clock])).toEqual([
      ['FRZ', 'shelf-rubidium'],
      ['KNF', 'exact'],
    ]);
  });

  it('is refused where an event does not stand', () => {
    const [first = 0] = idsOf(at);
    const inputs = frozenInputs(at.db, {
      networkId: at.network.networkId,
      triggerIds: [first, 999_999],
      frames: [],
      sigmas: 3,
      ruleId: null,
    });
    expect(inputs.ok ? '' : inputs.problem.text).toBe('1 of 2 do not stand any more');
  });
});

/** Each case makes a database. */
const CASES = process.env['LONG'] ? 500 : 10;

describe('what is frozen of random networks', () => {
  it('is what was put in: the same numbers, with an Earth-orientation table and without', async () => {
    await fc.assert(
      fc.asyncProperty(randomInputs, async (inputs) => {
        const db = openDb(newFolder('frozen'));
        const network = insertNetwork(db, inputs.network);
        if (inputs.orientation !== null)
          insertRow(db, 'orientation_tables', {
            ...{ body: inputs.orientation, sha256: '0'.repeat(64), first_mjd: 61_096, last_mjd: 61_107, is_in_force: 1, created_at: AT },
          });
        const at = ingestOver(db, network);
        const sent = inputs.records.map(({ site, ...texts }) => [site, texts as SiteRecord] as const);
        for (const [site, one] of sent) void at.send(site, one);
        await at.ingest.whenIdle();
        const ids = idsOf(at);
        expect(ids).toHaveLength(inputs.records.length);
        const given = resultsOf(inputs);
        const again = frozen(at, ids, { frames: codesOf(given) });
        expect(resultsOf(again)).toEqual(given);
        expect(storedResults(at, ids, codesOf(given))).toEqual(given);
        const kept = again.records.map(({ site, sequence, reading, sigmaNs }) => ({ site, sequence, reading, sigmaNs }));
        const asSent = inputs.records.map(({ site, sequence, reading, sigmaNs }) => ({ site, sequence, reading, sigmaNs }));
        expect(kept.toSorted((a, b) => Number(a.sequence) - Number(b.sequence))).toEqual(asSent);
        at.close();
      }),
      { numRuns: CASES },
    );
  });
});

describe('a site that changed between two of the events', () => {
  it('stands twice, under codes of its own, and each record is read by its entry', async () => {
    const at = newIngest(smallNetwork());
    const version = at.db.$client.prepare('SELECT * FROM site_versions WHERE site_id = ?').get(at.siteId('A')) as Record<string, number>;
    const noonTaiS = 1_772_366_400; // 2026-03-01T12:00:00 TAI: 20,513 days and a half
    insertRow(at.db, 'site_versions', {
      ...version,
      id: null,
      number: 2,
      from_tai_s: noonTaiS,
      delay_ns: 250,
      delay_sigma_ns: 4,
      itrs_x_m: 6378140,
    });
    await at.ingest.setupChanged(at.network.networkId);
    await at.send(
      'A',
      record({ sequence: '1', reading: '2026-03-01T11:59:59.9' }),
      record({ sequence: '2', reading: '2026-03-01T12:00:00.1' }),
    );
    await at.send('B', record({ sequence: '1', reading: '2026-03-01T12:00:00.05' }));
    const inputs = frozen(at, idsOf(at));
    expect(inputs.network.sites.map(({ code, delay_ns }) => [code, delay_ns])).toEqual([
      ['A', 0],
      ['B', 0],
      ['A_2', 250],
    ]);
    expect(inputs.records.map(({ site, entry }) => [site, entry])).toEqual([
      ['A', undefined],
      ['B', undefined],
      ['A', 'A_2'],
    ]);
    const results = resultsOf(inputs);
    expect(results).toEqual(storedResults(at, idsOf(at), ['geocentric']));
    expect(results.events.map(({ name }) => name)).toEqual(['A:1', 'B:1', 'A:2']);
    at.close();
  });
});

describe('events that are being computed anew', () => {
  it('are not frozen: some rest on another leap-second list than others', async () => {
    const at = newIngest(smallNetwork());
    await at.send('A', record({ sequence: '1' }));
    const { $client: client } = at.db;
    const list = client.prepare('SELECT * FROM leap_second_tables').get() as Record<string, number>;
    client.prepare('UPDATE leap_second_tables SET is_in_force = 0').run();
    insertRow(at.db, 'leap_second_tables', { ...list, id: 77, sha1: '1'.repeat(40), is_in_force: 1 });
    const later = ingestOver(at.db, at.network);
    await later.send('B', record({ sequence: '2' }));
    const inputs = frozenInputs(at.db, { networkId: at.network.networkId, triggerIds: idsOf(at), frames: [], sigmas: 3, ruleId: null });
    expect(inputs.ok ? '' : inputs.problem.text).toContain('rest on more than one leap-second list: they are being computed anew');
    at.close();
  });
});
