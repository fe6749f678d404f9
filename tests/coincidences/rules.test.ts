import { describe, expect, it } from 'vitest';
import { instantAt } from '../support/live-stream';
import { type PlainEvent, type PlainNetwork } from '../support/plain-coincidences';
import { batchInForce, inForce, states, StoredNetwork } from '../support/stored-network';

const WIDTH_NS = 1_000;

const site = (xM: number) => ({ placeM: [xM, 0, 0], velocityMS: [0, 0, 0], delaySigmaNs: 0, positionSigmaM: 0 });

const network: PlainNetwork = {
  rule: { code: 'rule', minimumFold: 2, sigmas: 3, window: { kind: 'fixed', widthNs: WIDTH_NS, frame: 'geocentric' } },
  limit: 10_000,
  sites: [site(0), site(100), site(200)],
  segments: [],
  referenceSigmaNs: [],
  frame: [0, 0, 0],
  frameChange: [0, 0, 0],
  spreadPs: 1e13,
};

const event = (siteRow: number, sequence: number, atNs: number): PlainEvent => ({
  site: siteRow,
  series: '',
  sequence,
  atPs: atNs * 1e3,
  readingSigmaNs: 1,
  segment: -1,
  sinceEpochDays: 0,
});

/** Sets in force, by their triggers. */
const setsOf = (stored: StoredNetwork): string[] => inForce(stored.db).sets.map((text) => text.split(' | ')[1]!);

const count = (stored: StoredNetwork, query: string): number => stored.db.$client.prepare<[], number>(query).pluck().get()!;

describe('a rule', () => {
  it('lets the triggers of a dead time take no part, whatever the order in which they come', () => {
    // The second of site 0 is dead by the first, the third by the second, though that one took no part.
    const events = [event(0, 1, 0), event(0, 2, 4_000), event(1, 3, 4_500), event(0, 4, 8_000), event(2, 5, 8_500), event(2, 6, 200)];
    for (const order of [events, events.toReversed()]) {
      const stored = new StoredNetwork(network, { deadTimeNs: 5_000 });
      for (const one of order) stored.opened.take(stored.put([one]));
      const triggerOf = new Map([...stored.standing].map(([id, { plain }]) => [plain.sequence, id]));
      expect(setsOf(stored)).toEqual([`${triggerOf.get(1)} ${triggerOf.get(6)}`]);
      stored.opened.take(stored.withdraw([event(0, 2, 4_000)]));
      stored.finish();
      // What came 8 us after the first now takes part.
      expect(setsOf(stored).toSorted()).toEqual(
        [`${triggerOf.get(1)} ${triggerOf.get(6)}`, `${triggerOf.get(4)} ${triggerOf.get(5)}`].toSorted(),
      );
      stored.close();
    }
  });

  it('leaves out sites, periods and weak triggers', () => {
    const events = [
      event(0, 1, 0),
      event(1, 2, 10),
      event(0, 3, 5_000),
      event(1, 4, 5_010),
      event(0, 5, 9_000),
      event(1, 6, 9_010),
      event(2, 7, 9_020),
    ];
    const from = instantAt(4_000e3);
    const to = instantAt(6_000e3);
    const stored = new StoredNetwork(network, { siteIds: [1, 2], exclusions: [{ siteId: null, from, to }], leastAmplitude: 2 });
    stored.opened.take(stored.put(events, ({ sequence }) => (sequence === 1 ? 1 : sequence === 2 ? NaN : 5)));
    stored.finish();
    expect(setsOf(stored)).toEqual(['5 6']);
    stored.close();
  });

  it('that is stated anew takes the place of the former one, from the latest event back, also across the death of the process', () => {
    const stored = new StoredNetwork(network);
    const events = Array.from({ length: 3_000 }, (_, k) => event(k % 3, k, k * 600));
    stored.opened.take(stored.put(events));
    stored.finish();
    expect(inForce(stored.db)).toEqual(batchInForce(network, stored.standing.values()));
    const wider = { ...network.rule, window: { ...network.rule.window, widthNs: 1_300 } } as const;
    stored.stateRule(wider);
    stored.opened.step();
    expect(count(stored, "SELECT progress_done FROM jobs WHERE state = 'running'")).toBe(1_000);
    const newer = 'SELECT min(first_tai_s * 1e12 + first_ps) FROM coincidences WHERE is_current = 1 AND rule_version_id = 2';
    const older = 'SELECT max(first_tai_s * 1e12 + first_ps) FROM coincidences WHERE is_current = 1 AND rule_version_id = 1';
    expect(count(stored, newer)).toBeGreaterThan(count(stored, older));
    stored.kill();
    stored.finish();
    expect(inForce(stored.db)).toEqual(batchInForce(network, stored.standing.values(), wider));
    expect(count(stored, "SELECT count(*) FROM jobs WHERE state = 'done'")).toBe(2);
    stored.close();
  });
});

describe('a coincidence', () => {
  it('is final once completeness has passed its first event by the window, and says what it grew from', () => {
    const stored = new StoredNetwork(network);
    stored.opened.take(stored.put([event(0, 1, 0), event(1, 2, 100)]));
    stored.finish();
    stored.opened.take(stored.put([event(2, 3, 200)]));
    expect(states(stored.db)).toEqual({ open: 1, former: 1 });
    expect(stored.db.$client.prepare('SELECT * FROM growths').all()).toEqual([{ coincidence_id: 2, grew_from_id: 1 }]);
    stored.opened.take(stored.completeUpTo(WIDTH_NS * 1e3));
    expect(states(stored.db)).toEqual({ open: 1, former: 1 });
    // The bounds of windows are a little wider than the windows.
    stored.opened.take(stored.completeUpTo(WIDTH_NS * 1e3 + 10));
    expect(states(stored.db)).toEqual({ final: 1, former: 1 });
    // A late event changes what was final all the same, and the change says so.
    stored.opened.take(stored.withdraw([event(2, 3, 200)]));
    expect(states(stored.db)).toEqual({ final: 1, former: 2 });
    const last = stored.db.$client.prepare<[], string>('SELECT body FROM changes ORDER BY number DESC LIMIT 1').pluck().get()!;
    expect(JSON.parse(last)).toMatchObject({ coincidences: { appeared: { ids: [3] }, ended: { ids: [2] }, final: { ids: [] } } });
    stored.close();
  });
});
