import { afterEach, describe, expect, it } from 'vitest';
import { checkConservation } from '../../backend/ingest/conservation';
import { batchFindings, storedFindings } from './findings';
import { judge, keptIn } from './history';
import { type Endured, endure } from './kills-and-cuts';

const { LONG, SEED } = process.env;
const KILLS = LONG ? 50 : 4;
const CUTS = LONG ? 100 : 8;
const PLANTED_KILLS = 2;
const seed = SEED === undefined ? Math.floor(Math.random() * 2 ** 31) : Number(SEED);

let endured: Endured | undefined;
afterEach(() => endured?.server.close());

describe(`kills and cuts (SEED=${seed})`, () => {
  it(`${KILLS} kills of the server and ${CUTS} cuts of links lose, double and invent nothing, and coincidences are those of the batch command`, async () => {
    endured = await endure({ seed, kills: KILLS, cuts: CUTS });
    const { server, history, killed, cut, startsMs } = endured;
    const findings = await storedFindings(server);
    const ended = await server.end();
    expect([ended.code, ended.stderr]).toEqual([0, '']);
    const { lost, duplicated, unexpected, misjudged, ...counts } = server.read((db) => judge(history, keptIn(db)));
    console.log(
      `${killed} kills, ${cut} cuts (SEED=${seed}): ${JSON.stringify(counts)}, ${findings.length} coincidences; the slowest start took ${Math.max(...startsMs).toFixed(0)} ms`,
    );
    expect({ lost, duplicated, unexpected, misjudged }).toEqual({ lost: [], duplicated: [], unexpected: [], misjudged: [] });
    expect([killed, cut >= CUTS]).toEqual([KILLS, true]);
    expect(counts.acknowledged).toBe(counts.attempted);
    expect(counts.setAside).toBeGreaterThan(10);
    expect(server.read(checkConservation)).toEqual([]);
    expect(server.read((db) => db.$client.pragma('integrity_check', { simple: true }))).toBe('ok');
    expect(findings.length).toBeGreaterThan(20);
    expect(findings).toEqual(await batchFindings(server, history));
  }, 600_000);

  it.each(['early', 'forget'] as const)(
    'catch a server that acknowledges what it has not committed: %s',
    async (harm) => {
      endured = await endure({ seed, kills: PLANTED_KILLS, cuts: 0, harm });
      const { server, history } = endured;
      await server.end();
      expect(server.read((db) => judge(history, keptIn(db))).lost.length).toBeGreaterThan(0);
    },
    60_000,
  );
});
