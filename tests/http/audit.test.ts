import { readFileSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { auditHeadIn } from '../../backend/audit/audit-head';
import { change } from '../../backend/audit/change';
import { checkTrailAtStart } from '../../backend/audit/check-trail';
import { auditSteps, verifyAudit } from '../../backend/audit/verify';
import { verifyTrail } from '../../backend/command/audit-verify';
import { UsageProblem } from '../../backend/command/usage-problem';
import { serverLog } from '../../backend/server-log';
import { startApp, type RunningApp } from '../support/app';
import { allRows } from '../support/rows';
import { makeWorld, type World } from '../support/world';

const ENTRIES = 8;
const SERVER = { kind: 'server', id: null, requestId: null } as const;

let app: RunningApp;
let world: World;
beforeEach(async () => {
  app = await startApp();
  world = await makeWorld(app);
  for (let at = 0; at < ENTRIES; at += 1)
    change(app.ground, { kind: 'server', id: null, requestId: null }, (_tx, note) =>
      note({ action: 'test:done', subjectKind: 'test', subjectId: at, details: { at } }),
    );
});
afterEach(async () => {
  await app.close();
});

const verdict = () => verifyAudit(app.ground.db, auditHeadIn(app.dataDir));

/** Changes the table as someone with the file in their hands would: without the triggers that guard it. */
const tamper = (sql: string): void => {
  const { $client: client } = app.ground.db;
  const guards = client
    .prepare<[], { name: string; sql: string }>("SELECT name, sql FROM sqlite_schema WHERE type = 'trigger' AND tbl_name = 'audit'")
    .all();
  for (const { name } of guards) client.exec(`DROP TRIGGER "${name}"`);
  client.exec(sql);
  for (const guard of guards) client.exec(guard.sql);
};

describe('40 the audit chain', () => {
  it('is sound as it was written', () => {
    expect(verdict()).toEqual({ sound: ENTRIES });
  });

  it.each<[string, string, number]>([
    ['an edited text', `UPDATE audit SET details = '{"at":9}' WHERE seq = 3`, 3],
    ['an edited actor', `UPDATE audit SET actor_kind = 'person', actor_id = 1 WHERE seq = 3`, 3],
    ['an edited instant', `UPDATE audit SET at = '2020-01-01T00:00:00.000Z' WHERE seq = 1`, 1],
    ['an edited hash', `UPDATE audit SET hash = randomblob(32) WHERE seq = 4`, 4],
    ['a deleted entry', 'DELETE FROM audit WHERE seq = 4', 4],
    ['a deleted first entry', 'DELETE FROM audit WHERE seq = 1', 1],
    ['a deleted entry whose gap was closed', 'DELETE FROM audit WHERE seq = 4; UPDATE audit SET seq = seq - 1 WHERE seq > 4', 4],
    [
      'an inserted entry',
      `UPDATE audit SET seq = -seq WHERE 0; DELETE FROM audit WHERE seq = 8;
       INSERT INTO audit SELECT 8, at, actor_kind, actor_id, 'test:forged', network_id, subject_kind, subject_id, details, request_id, previous_hash, hash FROM audit WHERE seq = 7`,
      8,
    ],
    [
      'two that changed places',
      'UPDATE audit SET seq = 100 WHERE seq = 3; UPDATE audit SET seq = 3 WHERE seq = 4; UPDATE audit SET seq = 4 WHERE seq = 100',
      3,
    ],
    ['a cut tail', 'DELETE FROM audit WHERE seq > 6', 7],
    ['everything gone', 'DELETE FROM audit', 1],
  ])('shows %s', (_what, sql, seq) => {
    tamper(sql);
    expect(verdict().fault?.seq).toBe(seq);
  });

  it('is what the API tells its deployment of, sound or not', async () => {
    const chief = world.as('chief');
    expect((await chief.get('/audit/verify')).body).toEqual({ entries: ENTRIES, ok: true });
    tamper(`UPDATE audit SET details = '{"at":9}' WHERE seq = 3`);
    const told = (await Promise.all([chief.get('/audit/verify'), chief.get('/audit/verify')])).map(({ body }) => body);
    const broken = { entries: 2, ok: false, firstBroken: { seq: 3, what: 'is not what was written' } };
    expect(told).toEqual([broken, broken]);
  });

  it('is checked in steps, between which it may grow, and past the first step too', () => {
    change(app.ground, SERVER, (_tx, note) => {
      for (let at = 0; at < 1_200; at += 1) note({ action: 'test:done', subjectKind: 'test', subjectId: at });
    });
    const step = auditSteps(app.ground.db, auditHeadIn(app.dataDir));
    expect(step()).toBeUndefined();
    change(app.ground, SERVER, (_tx, note) => note({ action: 'test:done', subjectKind: 'test', subjectId: 1 }));
    expect([step(), step()]).toEqual([undefined, { sound: ENTRIES + 1_201 }]);
    tamper('DELETE FROM audit WHERE seq = 1100');
    expect(verdict()).toEqual({ sound: 1_099, fault: { seq: 1_100, text: 'is missing' } });
  });

  it.each<[string, string, RegExp]>([
    ['an edit', `UPDATE audit SET details = '{"at":9}' WHERE seq = 3`, /entry 3 is not what was written/],
    ['a deletion', 'DELETE FROM audit WHERE seq = 4', /entry 4 is missing/],
    [
      'an insertion',
      `INSERT INTO audit SELECT 9, at, actor_kind, actor_id, 'test:forged', network_id, subject_kind, subject_id, details, request_id, previous_hash, hash FROM audit WHERE seq = 8`,
      /entry 9 does not follow the entry before it/,
    ],
    [
      'another order',
      'UPDATE audit SET seq = 100 WHERE seq = 3; UPDATE audit SET seq = 3 WHERE seq = 4; UPDATE audit SET seq = 4 WHERE seq = 100',
      /entry 3 does not follow the entry before it/,
    ],
    ['a cut tail', 'DELETE FROM audit WHERE seq > 6', /entry 7 is missing: the trail once went to 8/],
  ])('is what the server looks at when it starts, and the command beside it: both name %s', async (_what, sql, text) => {
    const env = { DATA_DIR: app.dataDir };
    const printed: string[] = [];
    verifyTrail(env, (line) => printed.push(line));
    expect(printed).toEqual([`the audit trail is as it was written: ${ENTRIES} entries`]);
    tamper(sql);
    expect(() => verifyTrail(env, () => undefined)).toThrow(text);
    const lines: unknown[] = [];
    const log = serverLog('error', { write: (line: string) => void lines.push(JSON.parse(line)) });
    checkTrailAtStart({ ...app.ground, log });
    await vi.waitFor(() => expect(lines).toHaveLength(1));
    expect(lines).toEqual([expect.objectContaining({ event: 'audit:broken', msg: expect.stringMatching(text) as string })]);
  });

  it('is checked at the start without being asked', async () => {
    await vi.waitFor(() => expect(app.log.filter(({ event }) => event === 'audit:checked')).toHaveLength(1));
  });

  it('cannot be checked where there is no database: the command says so', () => {
    expect(() => verifyTrail({ DATA_DIR: join(app.dataDir, 'nothing') }, () => undefined)).toThrow(UsageProblem);
  });

  it('shows a chain that was forged whole, by the head outside the database', () => {
    const { db } = app.ground;
    tamper('DELETE FROM audit');
    const forged = { ...app.ground, auditHead: { read: () => undefined, keep: () => undefined } };
    for (let at = 0; at < ENTRIES; at += 1)
      change(forged, { kind: 'server', id: null, requestId: null }, (_tx, note) =>
        note({ action: 'test:forged', subjectKind: 'test', subjectId: at }),
      );
    expect(verifyAudit(db, forged.auditHead)).toMatchObject({
      sound: ENTRIES,
      fault: { text: expect.stringContaining('no kept head') as string },
    });
    expect(verdict().fault).toMatchObject({ seq: ENTRIES, text: expect.stringContaining('kept head') as string });
  });

  it('shows a cut tail that later entries grew over, and keeps the head as evidence', () => {
    tamper('DELETE FROM audit WHERE seq > 6');
    const head = readFileSync(join(app.dataDir, 'audit-head'), 'utf8');
    for (let at = 0; at < 4; at += 1)
      change(app.ground, { kind: 'server', id: null, requestId: null }, (_tx, note) =>
        note({ action: 'test:done', subjectKind: 'test', subjectId: at }),
      );
    expect(verdict().fault?.seq).toBe(8);
    expect(readFileSync(join(app.dataDir, 'audit-head'), 'utf8')).toBe(head);
    expect(app.log.filter((line) => line['event'] === 'audit:broken').length).toBeGreaterThan(0);
  });

  it('shows a head that is gone or is none', () => {
    for (const text of ['', '8 x\n']) {
      writeFileSync(join(app.dataDir, 'audit-head'), text);
      expect(verdict().fault?.text).toContain('no kept head');
    }
  });

  it('is sound when the head is behind, as after a crash between commit and keeping it', () => {
    const keep = join(app.dataDir, 'audit-head');
    const before = readFileSync(keep, 'utf8');
    change(app.ground, { kind: 'server', id: null, requestId: null }, (_tx, note) =>
      note({ action: 'test:done', subjectKind: 'test', subjectId: 1 }),
    );
    writeFileSync(keep, before);
    expect(verdict()).toEqual({ sound: ENTRIES + 1 });
    expect(statSync(keep).mode & 0o777).toBe(0o600);
  });
});

describe('41 a change and its audit entry', () => {
  it('are there both or neither: when the entry cannot be written, nothing has changed', async () => {
    const before = allRows(app.ground.db)['people'];
    app.ground.db.$client.exec("CREATE TRIGGER no_entry BEFORE INSERT ON audit BEGIN SELECT RAISE(ABORT, 'planted'); END");
    const chief = world.as('chief');
    expect((await chief.patch('/me', { name: 'Other', version: 1 })).status).toBe(500);
    expect((await chief.post(`/people/${world.people.analyst}/disable`, { version: 1 })).status).toBe(500);
    expect(allRows(app.ground.db)['people']).toEqual(before);
    app.ground.db.$client.exec('DROP TRIGGER no_entry');
    expect((await chief.patch('/me', { name: 'Other', version: 1 })).status).toBe(200);
  });

  it('are there both or neither: when the change cannot be made, no entry says that it was', async () => {
    app.ground.db.$client.exec("CREATE TRIGGER no_change BEFORE UPDATE ON people BEGIN SELECT RAISE(ABORT, 'planted'); END");
    expect((await world.as('chief').patch('/me', { name: 'Other', version: 1 })).status).toBe(500);
    expect(verdict()).toEqual({ sound: ENTRIES });
  });

  it('is a mistake of ours without an entry, and undone', () => {
    expect(() => change(app.ground, { kind: 'server', id: null, requestId: null }, () => 'done')).toThrow('without its audit entry');
  });
});

describe('42 an audit entry', () => {
  it.each([
    "UPDATE audit SET action = 'x:y' WHERE seq = 1",
    'DELETE FROM audit WHERE seq = 1',
    'DELETE FROM audit',
    'REPLACE INTO audit SELECT * FROM audit WHERE seq = 1',
  ])('stays as it is: %s aborts', (sql) => {
    expect(() => app.ground.db.$client.exec(sql)).toThrow();
    expect(verdict()).toEqual({ sound: ENTRIES });
  });
});

describe('the audit trail', () => {
  it('is read newest first, in pages, by filter, without a hash, by its coordinators', async () => {
    const chief = world.as('chief');
    await chief.patch('/me', { name: 'Other', version: 1 });
    await world.as('coordinator').post(`/people/${world.people.nobodySpecial}/roles`, {
      role: 'analyst',
      networkId: world.networks.first,
      siteId: null,
      expiresAt: null,
    });
    const { body, text } = await chief.get('/audit?limit=3');
    const { items, next } = body as { items: { seq: number; action: string; actorName: string | null }[]; next: string };
    expect(items.map(({ action }) => action)).toEqual(['role:given', 'me:changed', 'test:done']);
    expect(items[1]!.actorName).toBe('Other');
    expect(text).not.toMatch(/[0-9a-f]{64}|hash/i);
    const after = (await chief.get(`/audit?limit=200&cursor=${next}`)).body as { items: { seq: number }[]; next: null };
    expect(after.items.map(({ seq }) => seq)).toEqual([7, 6, 5, 4, 3, 2, 1]);
    expect(after.next).toBeNull();
    const filtered = (await chief.get(`/audit?action=me:changed&actorId=${world.people.chief}&subjectKind=person`)).body as {
      items: unknown[];
    };
    expect(filtered.items).toHaveLength(1);
    const own = (await world.as('coordinator').get(`/audit?networkId=${world.networks.first}`)).body as { items: unknown[] };
    expect(own.items).toHaveLength(1);
    expect((await world.as('coordinator').get('/audit')).status).toBe(403);
    expect((await world.as('otherCoordinator').get(`/audit?networkId=${world.networks.first}`)).status).toBe(404);
    expect((await world.as('analyst').get(`/audit?networkId=${world.networks.first}`)).status).toBe(403);
    for (const path of ['/audit?networkId=77', '/audit?networkId=77&limit=1']) expect((await chief.get(path)).status).toBe(404);
    for (const query of ['action=DROP', 'sort=hash', 'networkId=x', 'limit=500'])
      expect((await chief.get(`/audit?${query}`)).status, query).toBe(400);
  });
});
