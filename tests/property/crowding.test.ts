import { describe, expect, it } from 'vitest';
import { C_M_S } from '#shared/constants';
import { type CoincidenceKernel, coincidenceKernel } from '#shared/coincidence/kernel';
import { type Crowd, setsFrom } from '#shared/coincidence/sets-from';
import { batchTexts, Ledger, liveEvent, liveFinderOf } from '../support/live-stream';
import { inOrder, kernelInputOf, plainNear, type PlainEvent, type PlainNetwork, type PlainSite } from '../support/plain-coincidences';

/** The sizes that the finder is meant for; a third to a fifth of them where time is short. `npm run test:long` runs the full ones. */
const isLong = process.env['LONG'] !== undefined;
const STORM_EVENTS = isLong ? 20_000 : 4_000;
const GLOBE_EVENTS = isLong ? 20_000 : 4_000;

const LIMIT = 10_000;

/** A number in [0, 1) from a counter, the same on every run (the constants of Numerical Recipes, 3rd ed. 2007, sect. 7.1.4). */
function evenNumbers(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return state / 2 ** 32;
  };
}

interface Run {
  readonly crowds: readonly Crowd[];
  /** How many sets begin with each event. */
  readonly setsOf: Int32Array;
  readonly listed: ReadonlyMap<number, readonly (readonly number[])[]>;
  /** How often the search asked whether two events are near, by event. */
  readonly asked: Int32Array;
  /** Largest room that any list of rows took. */
  readonly roomOfRows: number;
}

/** Runs the finder with a kernel that counts what it is asked; sets are kept for the `kept` events alone. */
function countedRun(network: PlainNetwork, sorted: readonly PlainEvent[], kept: ReadonlySet<number>): Run {
  const input = kernelInputOf(network, sorted);
  const kernel = coincidenceKernel(input);
  let asks = 0;
  let roomOfRows = 0;
  const counted: CoincidenceKernel = {
    ...kernel,
    near: (a, b) => {
      asks++;
      return kernel.near(a, b);
    },
    laterNear: (event, found) => {
      const count = kernel.laterNear(event, found);
      roomOfRows = Math.max(roomOfRows, found.rows.length);
      return count;
    },
    earlierNear: (event, found) => {
      const count = kernel.earlierNear(event, found);
      roomOfRows = Math.max(roomOfRows, found.rows.length);
      return count;
    },
  };
  const crowds: Crowd[] = [];
  const setsOf = new Int32Array(sorted.length);
  const asked = new Int32Array(sorted.length);
  const listed = new Map<number, number[][]>();
  const find = setsFrom(counted, input.events, { minimumFold: network.rule.minimumFold, limit: network.limit });
  for (let event = 0; event < sorted.length; event++) {
    asks = 0;
    const sets: number[][] = [];
    find(event, {
      set: (rows, fold) => {
        setsOf[event]!++;
        if (kept.has(event)) sets.push(Array.from(rows.subarray(0, fold)));
      },
      crowd: (crowd) => crowds.push(crowd),
    });
    asked[event] = asks;
    if (kept.has(event)) listed.set(event, sets);
  }
  return { crowds, setsOf, listed, asked, roomOfRows };
}

/** Makes a value when it is first asked for, so that the work is done within a test. */
function once<T>(make: () => T): () => T {
  let made: { readonly value: T } | undefined;
  return () => (made ??= { value: make() }).value;
}

/** A generous end for a slow machine under load; the tests count work, and time nothing. */
const TEST_END_MS = isLong ? 600_000 : 60_000;

const mostOf = (numbers: Int32Array): number => numbers.reduce((most, n) => Math.max(most, n), 0);

const still = (placeM: readonly number[]): PlainSite => ({ placeM, velocityMS: [0, 0, 0], delaySigmaNs: 2, positionSigmaM: 0.05 });

const STORM_WIDTH_NS = 1e6;

/** Six sites, and one window for all that happens. */
function stormNetwork(limit: number): PlainNetwork {
  return {
    rule: { code: 'storm', minimumFold: 2, sigmas: 3, window: { kind: 'fixed', widthNs: STORM_WIDTH_NS, frame: 'geocentric' } },
    limit,
    sites: Array.from({ length: 6 }, (_, k) => still([k * 10, 0, 0])),
    segments: [],
    referenceSigmaNs: [],
    frame: [0, 0, 0],
    frameChange: [0, 0, 0],
    spreadPs: STORM_WIDTH_NS * 1e3,
  };
}

function stormEvents(random: () => number, count: number): PlainEvent[] {
  return inOrder(
    Array.from({ length: count }, (_, sequence) => ({
      site: Math.floor(6 * random()),
      series: '',
      sequence,
      atPs: Math.floor(STORM_WIDTH_NS * 1e3 * random()),
      readingSigmaNs: 20,
      segment: -1,
      sinceEpochDays: 0,
    })),
  );
}

describe(`${STORM_EVENTS} triggers of 6 sites inside one window`, () => {
  const network = stormNetwork(LIMIT);
  const events = stormEvents(evenNumbers(1), STORM_EVENTS);
  // All are near all others: sets that begin with an event have one later trigger of each other site, and are crowded or not by product.
  const laterOfSite = new Int32Array(6);
  const expected = events
    .map((event, row) => ({ event, row }))
    .reverse()
    .map(({ event, row }) => {
      laterOfSite[event.site]!++;
      const others = Array.from(laterOfSite).filter((_, site) => site !== event.site);
      return { row, sets: others.reduce((product, n) => product * n, 1), near: others.reduce((sum, n) => sum + n, 1) };
    })
    .reverse();
  const runOnce = once(() => countedRun(network, events, new Set()));

  it('are found crowded or listed as the product of the later triggers says', { timeout: TEST_END_MS }, () => {
    const run = runOnce();
    const crowds = expected.flatMap(({ row, sets, near }) =>
      sets > LIMIT ? [{ event: row, sites: 6, events: near, setsAtLeast: LIMIT + 1 }] : [],
    );
    expect(run.crowds).toEqual(crowds);
    expect(crowds.length).toBeGreaterThan(STORM_EVENTS * 0.9);
    expect(Array.from(run.setsOf)).toEqual(expected.map(({ sets }) => (sets > LIMIT ? 0 : sets)));
  });

  it('cost a number of questions per event that does not grow with the storm', { timeout: TEST_END_MS }, () => {
    const run = runOnce();
    // The proof looks at 16 triggers of each of 5 sites, hence at no more than 80 x 80 / 2 pairs.
    const crowded = run.crowds.map(({ event }) => run.asked[event]!);
    expect(Math.max(...crowded)).toBeLessThanOrEqual(3_200);
    // The few events at the end of the storm are searched in full: the events before them are looked at once for each trigger after them.
    const searched = expected.filter(({ sets }) => sets > 0 && sets <= LIMIT);
    for (const { row, near } of searched) expect(run.asked[row]).toBeLessThanOrEqual(10 * near * (STORM_EVENTS + near));
    expect(searched.length).toBeLessThanOrEqual(60);
  });

  it('hold lists no longer than twice the events of the window', { timeout: TEST_END_MS }, () => {
    const run = runOnce();
    expect(run.roomOfRows).toBeLessThanOrEqual(2 * STORM_EVENTS);
    expect(mostOf(run.setsOf)).toBeLessThanOrEqual(LIMIT);
  });
});

describe('a storm as a live stream', () => {
  const LIVE_EVENTS = isLong ? 4_000 : 800;

  it('is crowded and listed as in the batch after each flush, in order and with every tenth late', { timeout: TEST_END_MS }, () => {
    const random = evenNumbers(7);
    const network = stormNetwork(50);
    const events = stormEvents(random, LIVE_EVENTS);
    const arrivals = events.map((event, k) => ({ event, turn: k + (k % 10 === 0 ? 60 : 0) })).sort((a, b) => a.turn - b.turn);
    const finder = liveFinderOf(network);
    const ledger = new Ledger();
    for (let k = 0; k < arrivals.length; k += 25) {
      finder.put(arrivals.slice(k, k + 25).map(({ event }) => liveEvent(network, event)));
      ledger.enter(finder.flush());
      if (k % 200 !== 0 && k + 25 < arrivals.length) continue;
      const held = arrivals.slice(0, k + 25).map(({ event }) => event);
      expect({ sets: [...ledger.sets].sort(), crowds: [...ledger.crowds].sort() }).toEqual(batchTexts(network, held));
    }
    expect(ledger.faults).toEqual([]);
    expect(ledger.crowds.size).toBeGreaterThan(0.9 * LIVE_EVENTS);
  });
});

/** Eight sites all over the globe, turning with it. */
function globe(random: () => number): PlainNetwork {
  const radiusM = 6.371e6;
  const turnPerS = 7.292115e-5;
  const sites = Array.from({ length: 8 }, () => {
    const height = 2 * random() - 1;
    const angle = 2 * Math.PI * random();
    const [x, y] = [Math.sqrt(1 - height ** 2) * Math.cos(angle), Math.sqrt(1 - height ** 2) * Math.sin(angle)];
    const placeM = [radiusM * x, radiusM * y, radiusM * height];
    return { ...still(placeM), velocityMS: [-turnPerS * placeM[1]!, turnPerS * placeM[0]!, 0] };
  });
  return {
    rule: { code: 'globe', minimumFold: 2, sigmas: 3, window: { kind: 'light-time', speedC: 1, marginNs: 0 } },
    limit: LIMIT,
    sites,
    segments: sites.map(() => ({ offsetSigmaNs: 12, rateSigmaNsPerDay: 1, correlation: 0, reference: 0 })),
    referenceSigmaNs: [4],
    frame: [0, 0, 0],
    frameChange: [0, 0, 0],
    spreadPs: 60e12,
  };
}

function triggers(random: () => number, count: number, rateHz: number): PlainEvent[] {
  let atS = 0;
  return inOrder(
    Array.from({ length: count }, (_, sequence) => {
      atS -= Math.log(1 - random()) / rateHz;
      const site = Math.floor(8 * random());
      return { site, series: '', sequence, atPs: Math.floor(atS * 1e12), readingSigmaNs: 20, segment: site, sinceEpochDays: 0.5 };
    }),
  );
}

/** Rows at most a light time across the globe, and some, from an event. */
function rowsAround(events: readonly PlainEvent[], row: number): number[] {
  const widestPs = (2 * 6.4e6 * 1e12) / C_M_S;
  return events.flatMap((event, other) => (Math.abs(event.atPs - events[row]!.atPs) <= widestPs ? [other] : []));
}

/** Are there more than `limit` sets of one later trigger of every site, all near each other? Each choice is tried. */
function hasMoreFullSets(network: PlainNetwork, events: readonly PlainEvent[], first: number, later: readonly number[], limit: number) {
  const bySite = network.sites
    .map((_, site) => later.filter((row) => events[row]!.site === site))
    .filter((_, site) => site !== events[first]!.site);
  let count = 0;
  const choose = (level: number, chosen: readonly number[]): void => {
    if (count > limit) return;
    const list = bySite[level];
    if (!list) {
      count++;
      return;
    }
    for (const row of list) {
      const fits = chosen.every((a) => plainNear(network, events[Math.min(a, row)]!, events[Math.max(a, row)]!));
      if (fits) choose(level + 1, [...chosen, row]);
    }
  };
  choose(0, []);
  return count > limit;
}

describe.each([
  { rateHz: 4_000, each: 'each', crowdedAtLeast: 0.9, asksAtMost: 40_000 },
  { rateHz: 500, each: 'in all', crowdedAtLeast: 0, asksAtMost: 2_000 },
])('500 Hz $each from 8 sites on the globe under the light-time rule', ({ rateHz, crowdedAtLeast, asksAtMost }) => {
  const random = evenNumbers(rateHz);
  const network = globe(random);
  const events = triggers(random, GLOBE_EVENTS, rateHz);
  const checked = Array.from({ length: 12 }, (_, k) => Math.floor(((k + 0.5) * GLOBE_EVENTS) / 12));
  const runOnce = once(() => countedRun(network, events, new Set(checked)));

  it('finishes with a bounded number of questions per event, and bounded lists', { timeout: TEST_END_MS }, () => {
    const run = runOnce();
    const neighbours = Math.max(...checked.map((row) => rowsAround(events, row).length));
    expect(mostOf(run.asked)).toBeLessThanOrEqual(asksAtMost);
    expect(run.roomOfRows).toBeLessThanOrEqual(Math.max(64, 4 * neighbours));
    expect(mostOf(run.setsOf)).toBeLessThanOrEqual(LIMIT);
    expect(run.crowds.length).toBeGreaterThanOrEqual(crowdedAtLeast * GLOBE_EVENTS);
  });

  it(
    'names the crowded events with their neighbours, and lists the sets of the others, as the plain definition has them',
    { timeout: TEST_END_MS },
    () => {
      const run = runOnce();
      const crowdAt = new Map(run.crowds.map((crowd) => [crowd.event, crowd]));
      for (const row of checked) {
        const around = rowsAround(events, row);
        const isNear = (a: number, b: number): boolean => plainNear(network, events[Math.min(a, b)]!, events[Math.max(a, b)]!);
        const later = around.filter((other) => other > row && isNear(row, other));
        const crowd = crowdAt.get(row);
        if (crowd) {
          const sites = new Set([row, ...later].map((other) => events[other]!.site)).size;
          expect(crowd).toEqual({ event: row, sites, events: later.length + 1, setsAtLeast: LIMIT + 1 });
          expect(hasMoreFullSets(network, events, row, later, LIMIT)).toBe(true);
          continue;
        }
        const sets = run.listed.get(row)!;
        expect(new Set(sets.map((set) => set.join())).size).toBe(sets.length);
        for (const set of sets) {
          expect(set[0]).toBe(row);
          expect(set.every((a) => set.every((b) => a === b || isNear(a, b)))).toBe(true);
          expect(around.some((other) => !set.includes(other) && set.every((member) => isNear(other, member)))).toBe(false);
        }
      }
    },
  );
});
