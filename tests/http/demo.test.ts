import { existsSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, describe, expect, it } from 'vitest';
import { inviteFirstCoordinator } from '../../backend/accounts/first-coordinator';
import { auditHeadIn } from '../../backend/audit/audit-head';
import { change } from '../../backend/audit/change';
import { verifyAudit } from '../../backend/audit/verify';
import { readDemoFile } from '../../backend/demo/demo-file';
import { PEOPLE } from '../../backend/demo/people';
import { seedDemo } from '../../backend/demo/seed';
import { makeNetwork } from '../../backend/networks/make-network';
import { startApp, type RunningApp } from '../support/app';
import { allRows } from '../support/rows';

const SERVER = { kind: 'server', id: null, requestId: null } as const;
const ALL_ROLES = ['analyst', 'coordinator', 'operator', 'reviewer'];

let app: RunningApp;
const started = async (): Promise<RunningApp> => (app = await startApp());
afterEach(async () => {
  await app.close();
});

const configOf = ({ dataDir }: RunningApp) => ({ dataDir, production: false, demo: true });
const seed = (more: Partial<ReturnType<typeof configOf>> = {}) => seedDemo(app.ground, { ...configOf(app), ...more });
const put = { ok: true, value: true };
const left = { ok: true, value: false };
const rowsOf = (table: string) => allRows(app.ground.db)[table] ?? [];

describe('the demo in an empty database', () => {
  it('is a network with sites, clocks, frames and rules, and someone for each role', async () => {
    await started();
    expect(await seed()).toMatchObject(put);
    expect(rowsOf('networks')).toHaveLength(1);
    expect(rowsOf('sites').length).toBeGreaterThanOrEqual(7);
    for (const table of ['runs', 'clocks', 'clock_segments', 'time_references', 'frames', 'rules', 'emitters', 'site_keys'])
      expect(rowsOf(table).length, table).toBeGreaterThan(0);
    expect(new Set(rowsOf('frame_versions').map((row) => (row as { kind: string }).kind))).toEqual(
      new Set(['barycentric', 'velocity', 'toward-baseline']),
    );
    expect(rowsOf('people')).toHaveLength(PEOPLE.length);
    expect([...new Set(PEOPLE.map(({ role }) => role))].sort()).toEqual(ALL_ROLES);
  });

  it('is audited, entry by entry', async () => {
    await started();
    await seed();
    const actions = rowsOf('audit').map((row) => (row as { action: string }).action);
    for (const action of ['network:made', 'site:made', 'clock:made', 'person:invited', 'role:given', 'site-key:made', 'demo:made'])
      expect(actions).toContain(action);
    expect(verifyAudit(app.ground.db, auditHeadIn(app.dataDir))).toEqual({ sound: actions.length });
  });

  it('is not put in twice, and a later start changes nothing', async () => {
    await started();
    await seed();
    const before = allRows(app.ground.db);
    const file = readFileSync(join(app.dataDir, 'demo.json'), 'utf8');
    expect(await seed()).toMatchObject(left);
    expect(allRows(app.ground.db)).toEqual(before);
    expect(readFileSync(join(app.dataDir, 'demo.json'), 'utf8')).toBe(file);
  });

  it('keeps passwords and keys for its owner alone, and new ones in each database', async () => {
    await started();
    await seed();
    const first = readDemoFile(app.dataDir)!;
    expect(statSync(join(app.dataDir, 'demo.json')).mode & 0o777).toBe(0o600);
    expect(Object.keys(first.keys)).toHaveLength(rowsOf('sites').length);
    const secrets = [...first.people.map(({ password }) => password), ...Object.values(first.keys)];
    expect(new Set(secrets).size).toBe(secrets.length);
    const kept = JSON.stringify(allRows(app.ground.db)) + app.rawLog();
    for (const secret of secrets) expect(kept).not.toContain(secret);
    await app.close();
    await started();
    await seed();
    const again = readDemoFile(app.dataDir)!;
    for (const secret of secrets) expect(JSON.stringify(again)).not.toContain(secret);
  });

  it('is there whole or not at all', async () => {
    await started();
    const before = allRows(app.ground.db);
    await expect(seed({ dataDir: join(app.dataDir, 'absent') })).rejects.toThrow('ENOENT');
    expect(allRows(app.ground.db)).toEqual(before);
    expect(await seed()).toMatchObject(put);
  });
});

describe('the demo is not put in', () => {
  const nothing = async (more: Partial<ReturnType<typeof configOf>> = {}): Promise<void> => {
    const before = allRows(app.ground.db);
    expect(await seed(more)).toMatchObject(left);
    expect(allRows(app.ground.db)).toEqual(before);
    expect(existsSync(join(app.dataDir, 'demo.json'))).toBe(false);
  };

  it('where it is not wanted', async () => {
    await started();
    await nothing({ demo: false });
  });

  it('5 in production', async () => {
    await started();
    await nothing({ production: true });
  });

  it('beside a person of one’s own', async () => {
    await started();
    inviteFirstCoordinator(app.ground, 'ida@example.org', 'Ida Novak');
    await nothing();
  });

  it('beside a network of one’s own', async () => {
    await started();
    change(app.ground, SERVER, (tx, note) => {
      const making = { tx, note, actor: SERVER, nowMs: app.ground.nowMs() };
      return makeNetwork(making, { code: 'own', name: 'Our own', origin: { taiS: 1_790_000_000, ps: 0 } });
    });
    await nothing();
  });
});

describe('5 production and the data folder of a demo', () => {
  it('do not go together, and it says why', async () => {
    await started();
    await seed();
    const refused = await seed({ production: true, demo: false });
    expect(refused).toMatchObject({ ok: false, problem: { where: 'DATA_DIR' } });
    expect(JSON.stringify(refused)).toContain('it holds a demo (demo.json)');
  });
});

describe('what a demo file may be', () => {
  it('is nothing else: one that is cut or changed is taken as none', async () => {
    await started();
    await seed();
    const file = join(app.dataDir, 'demo.json');
    const text = readFileSync(file, 'utf8');
    for (const bad of [text.slice(0, 40), '{}', text.replace('"madeAt"', '"made"')]) {
      writeFileSync(file, bad);
      expect(readDemoFile(app.dataDir)).toBeUndefined();
    }
    rmSync(file);
    expect(readDemoFile(app.dataDir)).toBeUndefined();
  });
});
