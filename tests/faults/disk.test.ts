import { describe, expect, it } from 'vitest';
import { PASSWORD } from '../support/world';
import { Client } from '../support/client';
import { startServer } from '../support/server';
import { faultsOf } from './disk-kept';
import { DiskFaults, type PlannedFault } from './disk-preload';
import { copyOfNetwork, runOnFailingDisk, wrongOf } from './disk-run';
import { dice } from './records';

const LONG = process.env['LONG'] !== undefined;
const RUNS = LONG ? 200 : 15;
const RUNS_A_TEST = LONG ? 25 : 5;
const SEED = Number(process.env['SEED'] ?? 20260302);
const TEST_MS = LONG ? 1_800_000 : 300_000;
/** Below what a run makes at least, so that each fault comes: a run has some 25 syncs and 2,600 writes. */
const SYNCS = 12;
const WRITES = 1_500;
/** So many syncs after the first one are commits of which at least one holds a record, whatever the sites said first. */
const SYNCS_LOST = 5;
/** One call that fails may hide behind a next one that does not, which is worse than a disk that is gone. */
const ONE_ALONE = 0.7;

const faultOf = (run: number, roll: () => number): PlannedFault => {
  const failing = roll() < ONE_ALONE ? { failing: 1 } : {};
  switch (run % 5) {
    case 0:
      return { calls: ['write'], after: Math.floor(roll() * WRITES), code: 'EIO', ...failing };
    case 1:
      return { calls: ['write'], after: Math.floor(roll() * WRITES), code: 'ENOSPC' };
    case 2:
      return { calls: ['cut', 'sync'], after: Math.floor(roll() * SYNCS), code: 'ENOSPC', ...failing };
    default:
      return { calls: ['sync'], after: Math.floor(roll() * SYNCS), code: 'EIO', ...failing };
  }
};

const roll = dice(SEED);
const planned = Array.from({ length: RUNS }, (_, run) => faultOf(run, roll));

describe('a disk that fails', () => {
  it(
    'at no call is one where everything is acknowledged and kept',
    async () => {
      const run = await runOnFailingDisk({ calls: ['write', 'cut', 'sync'], after: 0, failing: 0, code: 'EIO' }, { seed: SEED });
      expect(wrongOf(run)).toEqual([]);
      expect(run).toMatchObject({ unknown: 0, unanswered: 0, failed: 0, endedByItself: false, ended: { code: 0 } });
      expect(run.seen).toBeGreaterThan(SYNCS + WRITES);
    },
    TEST_MS,
  );

  it.each(Array.from({ length: Math.ceil(RUNS / RUNS_A_TEST) }, (_, part) => part))(
    'makes no acknowledgement a lie: what was acknowledged is there, and a commit that failed ends the server with status 1 (part %i)',
    async (part) => {
      for (const [at, fault] of planned.entries()) {
        if (Math.floor(at / RUNS_A_TEST) !== part) continue;
        const run = await runOnFailingDisk(fault, { seed: SEED + at });
        const what = `SEED=${SEED}, run ${at}: ${JSON.stringify(fault)}`;
        expect(run.failed, what).toBeGreaterThan(0);
        expect(wrongOf(run), what).toEqual([]);
      }
    },
    TEST_MS,
  );

  it(
    'is caught where a server goes on after a sync that failed',
    async () => {
      const run = await runOnFailingDisk({ calls: ['sync'], after: 0, failing: SYNCS_LOST, code: 'EIO' }, { seed: SEED, goesOn: true });
      const wrong = wrongOf(run);
      expect(wrong[0]).toContain('went on');
      expect(wrong.join('\n')).toMatch(/lost: record/);
    },
    TEST_MS,
  );
});

describe('a full disk', () => {
  it(
    'refuses what a person asks and leaves the server alive, which does it once there is room',
    async () => {
      const dataDir = copyOfNetwork();
      const faults = new DiskFaults(dataDir);
      const server = await startServer({ DATA_DIR: dataDir, LOG_LEVEL: 'fatal', ...faults.env });
      const client = new Client(server.url.replace(/\/$/, ''));
      const trySignIn = async () => (await client.post('/sign-in', { email: 'nobody@example.org', password: PASSWORD })).status;
      faults.plan({ calls: ['write'], after: 0, code: 'ENOSPC' });
      expect(await trySignIn()).toBe(500);
      expect((await client.get('/health')).status).toBe(200);
      expect(faults.counted.failed).toBeGreaterThan(0);
      faults.mend();
      expect(await trySignIn()).toBe(401);
      expect((await server.stop()).code).toBe(0);
      expect(await faultsOf(dataDir, [])).toEqual([]);
    },
    TEST_MS,
  );

  it.each([0, 8])(
    'is no start, in one line, and one once there is room (after %i writes)',
    async (after) => {
      const dataDir = copyOfNetwork();
      const faults = new DiskFaults(dataDir);
      faults.plan({ calls: ['write'], after, code: 'ENOSPC' });
      await expect(startServer({ DATA_DIR: dataDir, LOG_LEVEL: 'fatal', ...faults.env })).rejects.toThrow(
        /^the server ended with [12]: skewline: [^\n]*(?:SQLITE_FULL|ENOSPC|disk is full)[^\n]*\n$/,
      );
      const server = await startServer({ DATA_DIR: dataDir, LOG_LEVEL: 'fatal' });
      expect((await server.stop()).code).toBe(0);
    },
    TEST_MS,
  );
});
