import { describe, expect, it } from 'vitest';
import { type SiteRecord } from '#shared/contract/site-record';
import { addPicoseconds, compareInstants, type Instant } from '#shared/time/instant';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { isLinkUp } from '../stream/link';
import { SLICE_S } from '../stream/plan';
import { writeSlice } from '../stream/slice';
import { makeWorld } from '../stream/world';
import { siteQueues } from './site-queues';

const FIRST = 1_790_000_000;
const world = makeWorld(5, FIRST, shippedLeapSeconds());
const resumed = { session: { series: '', firstSlice: 0, lastTaiS: FIRST }, fromSlice: 0 };
const LAST_S = 400;
const TICK_PS = 0.25e12;
/** All that happens by then is sent by then, but for what comes late. */
const MOST_LATE_S = 20;

const written = Array.from({ length: (LAST_S + MOST_LATE_S) / SLICE_S }, () => 0).reduce<ReturnType<typeof writeSlice>>(
  (all, _, slice) => [...all, ...writeSlice(world, slice, countOf(all))],
  [],
);
function countOf(all: ReturnType<typeof writeSlice>): Map<string, number> {
  const counts = new Map<string, number>();
  for (const { site } of all) counts.set(site, (counts.get(site) ?? 0) + 1);
  return counts;
}
const trueTimes = new Map(written.map(({ site, record, at }) => [`${site} ${record.sequence}`, at]));

/** What a site sends, tick by tick, while its link is up. */
function* ticksOf(code: string): Generator<{ now: Instant; records: readonly SiteRecord[]; completeTo: Instant }> {
  const queues = siteQueues(world, resumed);
  for (let now: Instant = { taiS: FIRST, ps: 0 }; now.taiS <= FIRST + LAST_S; now = addPicoseconds(now, TICK_PS))
    if (isLinkUp(world, code, now.taiS)) yield { now, ...queues.take(code, now) };
}

describe.each(['KTS', 'GIL', 'ILC'])('what %s sends', (code) => {
  const ticks = [...ticksOf(code)];

  it('is each record once, after it was written', () => {
    const sent = ticks.flatMap(({ now, records }) => records.map(({ sequence }) => ({ now, sequence })));
    for (const { now, sequence } of sent) expect(compareInstants(trueTimes.get(`${code} ${sequence}`)!, now)).toBeLessThanOrEqual(0);
    const due = written.filter(({ site, at }) => site === code && at.taiS < FIRST + LAST_S - MOST_LATE_S);
    const sequences = sent.map(({ sequence }) => sequence);
    expect(new Set(sequences).size).toBe(sequences.length);
    expect(sequences).toEqual(expect.arrayContaining(due.map(({ record }) => record.sequence)));
  });

  it('is never before what it said to be complete up to', () => {
    let complete: Instant = { taiS: 0, ps: 0 };
    for (const { records, completeTo } of ticks) {
      for (const { sequence } of records)
        expect(compareInstants(trueTimes.get(`${code} ${sequence}`)!, complete)).toBeGreaterThanOrEqual(0);
      expect(compareInstants(completeTo, complete)).toBeGreaterThanOrEqual(0);
      complete = completeTo;
    }
    expect(complete.taiS).toBeGreaterThan(FIRST + LAST_S - 60);
  });
});

describe('a link', () => {
  it('is down now and then at one site alone', () => {
    const downS = (code: string): number =>
      Array.from({ length: 2_400 }, (_, s) => isLinkUp(world, code, FIRST + s)).filter((isUp) => !isUp).length;
    expect(downS('GIL')).toBeGreaterThan(200);
    expect(downS('GIL')).toBeLessThan(450);
    for (const code of world.sites.keys()) if (code !== 'GIL') expect(downS(code)).toBe(0);
  });
});
