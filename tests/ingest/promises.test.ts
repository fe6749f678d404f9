import pino from 'pino';
import { afterEach, describe, expect, it } from 'vitest';
import { insertRow, insertSegment, personRow } from '../support/network-rows';
import { type Actor } from '../../backend/audit/change';
import { checkConservation } from '../../backend/ingest/conservation';
import { acceptSetAside, dismissConflict, dismissSetAside, type DecisionSources } from '../../backend/ingest/decisions';
import { ClosedSite, openIngest } from '../../backend/ingest/ingest';
import { eventRowHash } from '../../backend/ingest/hashes';
import { noteChange } from '../../backend/live/note-change';
import { commit, type Tx } from '../../backend/writer/commit';
import { eventColumnsOf } from '../../backend/reconcile/event-columns';
import { count, ingestOver, type IngestAtWork, newIngest, record, TEST_NOW_MS } from '../support/ingest';
import { smallNetwork } from '../support/small-network';

const open: IngestAtWork[] = [];
const start = (network: unknown = smallNetwork()): IngestAtWork => {
  const at = newIngest(network);
  open.push(at);
  return at;
};

afterEach(() => {
  for (const at of open.splice(0)) {
    expect(checkConservation(at.db)).toEqual([]);
    at.close();
  }
});

const clocked = smallNetwork({
  clocks: [{ code: 'quartz', segments: [{ from: '2026-03-01T06:00:00 TAI', offset_ns: 100, offset_sigma_ns: 5 }] }],
  sites: [
    { code: 'A', scale: 'TAI', clock: 'quartz', reading_sigma_ns: 10, position: { itrs_m: [6378137, 0, 0] } },
    { code: 'B', scale: 'TAI', clock: 'exact', reading_sigma_ns: 10, position: { itrs_m: [0, 6378137, 0] } },
  ],
});

const series = (at: IngestAtWork, name = ''): unknown =>
  at.db.$client.prepare('SELECT received, stored, known, set_aside, first, contiguous FROM series WHERE series = ?').get(name);

const OTHER = { reading: '2026-03-01T12:00:00.000000009' };

function deciding(at: IngestAtWork): DecisionSources {
  const actor: Actor = { kind: 'person', id: personRow(at.db), requestId: null };
  const auditHead = { read: () => undefined, keep: () => undefined };
  return { ground: { db: at.db, log: pino({ level: 'silent' }), nowMs: () => at.clock.nowMs, auditHead }, parts: at.ingest.parts, actor };
}

const asides = (at: IngestAtWork): { id: number; version: number; reason: string; state: string; trigger_id: number | null }[] =>
  at.db.$client.prepare<[], never>('SELECT id, version, reason, state, trigger_id FROM set_asides ORDER BY id').all();

describe('acknowledged means committed', () => {
  it('refuses to start on a connection that does not write each commit to the disk', () => {
    const at = start();
    at.db.$client.pragma('synchronous = NORMAL');
    const sources = {
      db: at.db,
      log: pino({ level: 'silent' }),
      nowMs: () => 0,
      listener: { onStored: () => undefined, onInForce: () => undefined },
    };
    expect(() => openIngest({ ...sources, fatal: () => undefined })).toThrow('synchronous at 1 where 2 (FULL) is needed');
  });

  it('answers only once another connection can read the record', async () => {
    const at = start();
    const answered = at.send('A', record());
    expect(count(at.db, 'SELECT count(*) FROM events')).toBe(0);
    expect(await answered).toEqual([{ fate: 'stored' }]);
    expect(at.db.$client.inTransaction).toBe(false);
    expect(count(at.db, 'SELECT count(*) FROM events')).toBe(1);
  });

  it('gathers all batches that wait into one transaction', async () => {
    const at = start();
    await Promise.all([at.send('A', record()), at.send('B', record()), at.send('A', record({ sequence: '2' }))]);
    expect(at.told.map(({ arrived }) => arrived.length)).toEqual([3]);
    expect(count(at.db, "SELECT count(*) FROM changes WHERE kind = 'records'")).toBe(1);
  });

  it('tells what was stored after the commit, with all the numbers that a finder takes', async () => {
    const at = start();
    await at.send('B', record({ amplitude: '2.5' }));
    const [event] = at.told[0]!.arrived;
    const { stored } = eventColumnsOf(at.db, at.network.networkId, [event!.triggerId]);
    expect(stored).toEqual([{ ...event, version: 0 }]); // error tables of its own, of this one version
  });

  it('answers everything as unknown, writes no more and calls for the end when the database cannot be written', async () => {
    const at = start();
    at.db.$client.exec('PRAGMA query_only = 1');
    const waiting = [at.send('A', record()), at.send('B', record())];
    expect(await Promise.all(waiting)).toEqual([[{ fate: 'unknown' }], [{ fate: 'unknown' }]]);
    expect(at.faults).toHaveLength(1);
    at.db.$client.exec('PRAGMA query_only = 0');
    expect(await at.send('A', record())).toEqual([{ fate: 'unknown' }]);
    expect(count(at.db, 'SELECT count(*) FROM triggers')).toBe(0);
  });

  it('sets one record that the database takes in no form aside, and holds up no other', async () => {
    const at = start();
    at.db.$client.exec(
      "CREATE TEMP TRIGGER poison BEFORE INSERT ON main.triggers WHEN NEW.amplitude = '13' BEGIN SELECT RAISE(ABORT, 'no'); END",
    );
    const sent = [at.send('A', record(), record({ sequence: '2', amplitude: '13' }), record({ sequence: '3' })), at.send('B', record())];
    expect((await Promise.all(sent)).flat().map(({ fate, reason }) => reason ?? fate)).toEqual([
      'stored',
      'unreadable',
      'stored',
      'stored',
    ]);
    expect((await at.send('A', record({ sequence: '2', amplitude: '13' })))[0]).toEqual({ fate: 'known' });
    expect(at.faults).toEqual([]);
  });
});

describe('a record that comes again', () => {
  it('changes nothing, for ever: stored, set aside, or long after another start', async () => {
    const at = start();
    const bad = record({ sequence: '2', reading: 'soon' });
    await at.send('A', record(), bad);
    expect(await at.send('A', record(), bad)).toEqual([{ fate: 'known' }, { fate: 'known' }]);
    const again = ingestOver(at.db, at.network);
    expect(await again.send('A', record(), bad)).toEqual([{ fate: 'known' }, { fate: 'known' }]);
    expect(series(at)).toEqual({ received: 6, stored: 1, known: 4, set_aside: 1, first: '1', contiguous: '2' });
  });

  it('with other content is set aside together with the first, which stands no longer', async () => {
    const at = start();
    await at.send('A', record());
    const [answer] = await at.send('A', record(OTHER));
    expect(answer).toMatchObject({ fate: 'set-aside', reason: 'conflict', detail: expect.stringContaining('A:1') as string });
    expect(asides(at).map(({ reason }) => reason)).toEqual(['conflict', 'conflict']);
    expect(count(at.db, 'SELECT count(*) FROM events')).toBe(0);
    expect(count(at.db, 'SELECT count(*) FROM event_versions')).toBe(1);
    expect(at.told[1]!.withdrawn).toMatchObject([{ series: '', sequence: '1', triggerId: at.told[0]!.arrived[0]!.triggerId }]);
    expect(series(at)).toMatchObject({ received: 2, stored: 0, set_aside: 2 });
  });

  it('in one and the same batch with other content is never told as an event', async () => {
    const at = start();
    await at.send('A', record(), record(OTHER));
    expect(at.told).toEqual([]);
  });

  it('is the same number with leading zeros, and another content', async () => {
    const at = start();
    await at.send('A', record({ sequence: '7' }));
    expect((await at.send('A', record({ sequence: '007' })))[0]).toMatchObject({ reason: 'conflict' });
  });

  it('does not disturb the first when it would not be accepted by itself', async () => {
    const at = start();
    await at.send('A', record());
    expect((await at.send('A', record({ reading: '2019-01-01T00:00:00' })))[0]).toMatchObject({ reason: 'outside-run' });
    expect(count(at.db, 'SELECT count(*) FROM events')).toBe(1);
  });
});

describe('a decision', () => {
  it('lets one content of a conflict stand and dismisses the other, audited', async () => {
    const at = start();
    await at.send('A', record(), record(OTHER));
    const [first, second] = asides(at);
    expect(acceptSetAside(deciding(at), { setAsideId: second!.id, version: 1, why: 'the log says so' })).toMatchObject({ ok: true });
    expect(asides(at).map(({ state }) => state)).toEqual(['dismissed', 'accepted']);
    expect(count(at.db, 'SELECT trigger_id FROM events')).toBe(second!.trigger_id);
    expect(at.told.at(-1)!.arrived).toHaveLength(1);
    expect(count(at.db, "SELECT count(*) FROM audit WHERE action LIKE 'set-aside:%'")).toBe(2);
    expect(acceptSetAside(deciding(at), { setAsideId: first!.id, version: 1, why: '' })).toMatchObject({
      ok: false,
      problem: { code: 'stale' },
    });
    expect((await at.send('A', record(OTHER)))[0]).toEqual({ fate: 'known' });
  });

  it('is kept when yet another content comes, which waits for a person', async () => {
    const at = start();
    await at.send('A', record(), record(OTHER));
    acceptSetAside(deciding(at), { setAsideId: asides(at)[0]!.id, version: 1, why: 'x' });
    expect((await at.send('A', record({ amplitude: '3' })))[0]).toMatchObject({ reason: 'conflict' });
    expect(count(at.db, 'SELECT trigger_id FROM events')).toBe(asides(at)[0]!.trigger_id);
  });

  it('may be that no content of a conflict stands', async () => {
    const at = start();
    await at.send('A', record(), record(OTHER));
    const { id } = asides(at)[0]!;
    expect(dismissConflict(deciding(at), { setAsideId: id, version: 1, why: '' })).toMatchObject({ ok: false });
    expect(dismissConflict(deciding(at), { setAsideId: id, version: 1, why: 'both broken' })).toMatchObject({ ok: true });
    expect(asides(at).map(({ state }) => state)).toEqual(['dismissed', 'dismissed']);
    expect(series(at)).toMatchObject({ received: 2, stored: 0, set_aside: 2 });
  });

  it('lets a record stand as a person mended it, counted where it came', async () => {
    const at = start();
    const bad = record({ sequence: 'seven' });
    await at.send('A', bad);
    const [aside] = asides(at);
    const refused = acceptSetAside(deciding(at), { setAsideId: aside!.id, version: 1, why: 'x' });
    expect(refused).toMatchObject({ ok: false, problem: { code: 'sequence' } });
    const mended = acceptSetAside(deciding(at), { setAsideId: aside!.id, version: 1, why: 'seven is 7' }, record({ sequence: '7' }));
    expect(mended).toMatchObject({ ok: true });
    expect(count(at.db, 'SELECT count(*) FROM events')).toBe(1);
    expect((await at.send('A', bad))[0]).toEqual({ fate: 'known' });
    expect((await at.send('A', record({ sequence: '7' })))[0]).toEqual({ fate: 'known' });
  });

  it('refuses a mended record whose identity another content has', async () => {
    const at = start();
    await at.send('A', record(), record({ sequence: 'seven' }));
    const wrong = acceptSetAside(deciding(at), { setAsideId: asides(at)[0]!.id, version: 1, why: 'x' }, record({ amplitude: '4' }));
    expect(wrong).toMatchObject({ ok: false, problem: { code: 'identity' } });
    expect(dismissSetAside(deciding(at), { setAsideId: asides(at)[0]!.id, version: 1, why: 'noise' })).toMatchObject({ ok: true });
  });
});

describe('a reading in the far future of the server', () => {
  it('waits, and stands when its time has come', async () => {
    const at = start();
    const soon = record({ reading: '2026-03-02T00:02:37' }); // TAI is 37 s ahead of UTC
    expect((await at.send('A', soon))[0]).toMatchObject({ reason: 'future' });
    expect(count(at.db, 'SELECT retry_at_ms FROM set_asides')).toBe(TEST_NOW_MS + 60_000);
    at.clock.nowMs = TEST_NOW_MS + 59_999;
    expect(await at.ingest.retryDue()).toBe(0);
    at.clock.nowMs = TEST_NOW_MS + 60_000;
    expect(await at.ingest.retryDue()).toBe(1);
    expect(series(at)).toMatchObject({ received: 1, stored: 1, set_aside: 0 });
    expect((await at.send('A', soon))[0]).toEqual({ fate: 'known' });
  });
});

describe('the stream of a site', () => {
  it('goes on where it was: contiguous number, ranges above, counters', async () => {
    const at = start();
    const numbers = ['3', '4', '7', '9', '8', '123456789012345678901234567890'];
    await at.send('A', ...numbers.map((sequence) => record({ sequence, reading: `2026-03-01T12:00:0${sequence[0]!}` })));
    const { series: standing, connectionId } = ingestOver(at.db, at.network).ingest.hello(at.siteId('A'), null);
    expect(standing).toMatchObject([{ series: '', first: '3', contiguous: '4', received: 6, stored: 6, isCut: false }]);
    expect(standing[0]!.held).toEqual([
      ['7', '9'],
      ['123456789012345678901234567890', '123456789012345678901234567890'],
    ]);
    expect(count(at.db, 'SELECT count(*) FROM site_streams WHERE connected_at_ms IS NOT NULL')).toBe(1);
    at.ingest.bye(connectionId, 'the link was lost');
    expect(count(at.db, 'SELECT count(*) FROM site_streams WHERE connected_at_ms IS NOT NULL')).toBe(0);
  });

  it('is complete up to what it said last, never going back, and the network up to the least of its sites', async () => {
    const at = start();
    const say = (code: string, taiS: number) => at.ingest.complete(at.siteId(code), { upTo: { taiS, ps: 0 }, live: [] });
    expect(await say('A', 1_700_000_100)).toMatchObject({ ok: true, value: { taiS: 1_700_000_100 } });
    expect(await say('A', 1_700_000_000)).toMatchObject({ ok: true, value: { taiS: 1_700_000_100 } });
    await say('B', 1_700_000_050);
    expect(at.told.at(-1)!.completeUpTo).toBeUndefined();
    await say('C', 1_700_000_070);
    expect(at.told.at(-1)!.completeUpTo).toEqual({ taiS: 1_700_000_050, ps: 0 });
    expect(await say('C', 9_700_000_070)).toMatchObject({ ok: false, problem: { code: 'future' } });
  });

  it('says its live spans once, an end after its beginning, and of two ends the later one', async () => {
    const at = start();
    const span = (to?: number) => ({ from: { taiS: 1_700_000_000, ps: 0 }, ...(to === undefined ? {} : { to: { taiS: to, ps: 0 } }) });
    for (const to of [1_700_000_050, undefined, 1_700_000_090, 1_700_000_050])
      await at.ingest.complete(at.siteId('A'), { upTo: undefined, live: [span(to)] });
    expect(at.db.$client.prepare('SELECT from_tai_s, to_tai_s FROM live_spans').all()).toEqual([
      { from_tai_s: 1_700_000_000, to_tai_s: 1_700_000_090 },
    ]);
  });

  it('is refused where the site is closed', async () => {
    const at = start();
    at.db.$client.exec("UPDATE sites SET closed_at = '2026-03-01T00:00:00.000Z' WHERE code = 'A'");
    await expect(at.send('A', record())).rejects.toBeInstanceOf(ClosedSite);
    expect(() => at.ingest.hello(at.siteId('A'), null)).toThrow(ClosedSite);
  });
});

describe('a change of what is in force', () => {
  it('lets records stand that waited for a clock record, and computes events anew, the former ones kept', async () => {
    const at = start(clocked);
    const early = record({ sequence: '2', reading: '2026-03-01T05:00:00' });
    expect((await at.send('A', record(), early)).map(({ reason }) => reason)).toEqual([undefined, 'before-clock-record']);
    const before = at.told[0]!.arrived[0]!;
    const clockId = at.network.clockIds.get('quartz')!;
    insertSegment(at.db, clockId, 2, { from: '2026-03-01T00:00:00 TAI', offset_ns: 50, offset_sigma_ns: 5 }, null);
    at.db.$client.exec(`UPDATE clock_segments SET superseded_at = '2026-03-01T00:00:00.000Z' WHERE segment = 1`);
    expect(await at.ingest.setupChanged(at.network.networkId)).toEqual({ events: 1, accepted: 1 });
    const after = at.told
      .flatMap(({ arrived }) => arrived)
      .filter(({ sequence }) => sequence === '1')
      .at(-1)!;
    expect(after.ps - before.ps).toBe(50_000);
    expect([before.eventVersion, after.eventVersion]).toEqual([1, 2]);
    expect(count(at.db, 'SELECT count(*) FROM event_versions')).toBe(1);
    expect(count(at.db, 'SELECT count(*) FROM events')).toBe(2);
    expect(await at.ingest.setupChanged(at.network.networkId)).toEqual({ events: 0, accepted: 0 });
  });

  it('is heard of by the commit that notes it, and by the next start where the process ended before', async () => {
    const at = start();
    await at.send('A', record());
    const delayBy = (number: number, isHeard: boolean): void => {
      const columns =
        'scale, clock_id, exact_clock, position_kind, itrs_x_m, itrs_y_m, itrs_z_m, reading_sigma_ns, position_sigma_m, origin, created_at';
      const change = (tx: Tx): void => {
        at.db.$client.exec(
          "UPDATE site_versions SET superseded_at = '2026-03-01T00:00:00.000Z' WHERE site_id = 1 AND superseded_at IS NULL",
        );
        at.db.$client.exec(`INSERT INTO site_versions (site_id, number, from_tai_s, from_ps, delay_ns, delay_sigma_ns, ${columns})
          SELECT 1, ${number}, from_tai_s, from_ps, ${number}000, 1, ${columns} FROM site_versions WHERE site_id = 1 AND number = 1`);
        if (isHeard) noteChange(tx, at.network.networkId, 'setup', { what: 'site', id: 1 }, TEST_NOW_MS);
      };
      commit(at.db, change);
    };
    const eventVersion = (): number => count(at.db, 'SELECT version FROM events');
    delayBy(2, true);
    await expect.poll(eventVersion).toBe(2);
    await at.ingest.whenIdle();
    // A set-up that changed behind the ingest's back, with its change noted: as after a kill between the two.
    delayBy(3, false);
    const last = count(at.db, 'SELECT last FROM change_heads');
    insertRow(at.db, 'changes', { network_id: at.network.networkId, number: last + 1, at_ms: TEST_NOW_MS, kind: 'setup', body: '{}' });
    expect(eventVersion()).toBe(2);
    const again = ingestOver(at.db, at.network);
    await expect.poll(eventVersion).toBe(3);
    await again.ingest.whenIdle();
  });

  it('takes events away that it holds no longer, and brings them back when it does', async () => {
    const at = start();
    await at.send('A', record());
    const runTo = (taiS: number | null) =>
      at.db.$client.prepare('UPDATE runs SET to_tai_s = ?, to_ps = ?').run(taiS, taiS === null ? null : 0);
    for (let round = 0; round < 2; round++) {
      runTo(1_600_000_000);
      await at.ingest.setupChanged(at.network.networkId);
      expect(series(at)).toMatchObject({ stored: 0, set_aside: 1 });
      runTo(null);
      await at.ingest.setupChanged(at.network.networkId);
      expect(series(at)).toMatchObject({ stored: 1, set_aside: 0 });
    }
  });

  it('leaves each event with the errors of the version that its reading is of', async () => {
    const at = start();
    const columns = 'scale, clock_id, exact_clock, position_kind, itrs_x_m, itrs_y_m, itrs_z_m, origin, created_at, site_id';
    at.db.$client
      .exec(`INSERT INTO site_versions (number, from_tai_s, from_ps, delay_ns, delay_sigma_ns, position_sigma_m, reading_sigma_ns, ${columns})
      SELECT 2, 1772366400, 0, 1000, 7, 3, 10, ${columns} FROM site_versions WHERE site_id = ${at.siteId('A')}`);
    await at.send('A', record({ reading: '2026-03-01T11:59:59' }), record({ sequence: '2', reading: '2026-03-01T12:00:00' }));
    const [early, late] = at.told[0]!.arrived;
    const { siteDelaySigmaNs, sitePositionSigmaM } = at.ingest.network(at.network.networkId).errors.tables();
    expect([siteDelaySigmaNs[early!.version], siteDelaySigmaNs[late!.version]]).toEqual([0, 7]);
    expect([sitePositionSigmaM[early!.version], sitePositionSigmaM[late!.version]]).toEqual([0, 3]);
    expect([early!.ps, late!.ps]).toEqual([0, 999_999_000_000]);
    expect(early!.site).toBe(late!.site);
  });
});

it('each row of events carries a hash of its content', async () => {
  const at = start();
  await at.send('A', record());
  const [event] = at.told[0]!.arrived;
  const row = at.db.$client.prepare<[], { row_hash: Buffer; grounding_id: number; change_number: number }>('SELECT * FROM events').get()!;
  const ground = { networkId: at.network.networkId, groundingId: row.grounding_id, changeNumber: row.change_number };
  expect(eventRowHash(event!, ground).equals(row.row_hash)).toBe(true);
  expect(eventRowHash({ ...event!, ps: event!.ps + 1 }, ground).equals(row.row_hash)).toBe(false);
});

it('statement 42: what a site sent is never changed or deleted', async () => {
  const at = start();
  await at.send('A', record());
  for (const attempt of ["UPDATE triggers SET reading = 'x'", 'DELETE FROM triggers'])
    expect(() => at.db.$client.exec(attempt)).toThrow(/triggers/);
});
