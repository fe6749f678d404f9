import { readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { checkCounts, type ManyEvents, reconcileMany } from '../support/many-events';

const TRIGGERS = 300_000;
/** Twice what a run needs on 64-bit Linux; 5 million lines have 1.5 GB (tests/long). */
const MOST_BYTES = 400e6;
const C_M_PER_S = 299792458;
/** More than three standard errors of any gap here: each event has some 25 ns, 3 x 1.42 x 25 ns = 0.11 us. */
const UNSURE_S = 1e-6;

let many: ManyEvents;
beforeAll(async () => {
  many = await reconcileMany(TRIGGERS);
});
afterAll(() => {
  rmSync(many.folder, { recursive: true });
});

describe('300,000 triggers of ten sites', () => {
  it('take less than 400 MB', () => {
    expect(many.peakBytes).toBeLessThan(MOST_BYTES);
    expect(many.peakBytes).toBeGreaterThan(MOST_BYTES / 20); // it was measured at all
  });

  it('are all there, with what was said again and what is at fault', () => {
    checkCounts(many, TRIGGERS);
    expect(many.repeated).toBeGreaterThan(250);
  });

  it('are in the pairs that a plain walk over events.csv finds near each other', () => {
    const out = (name: string): string[][] => {
      const lines = readFileSync(join(many.folder, 'out', name), 'utf8').split('\n');
      return lines.slice(1, -1).map((line) => line.split(','));
    };
    const events = out('events.csv').map(([site = '', , sequence = '', , tai = '', , , x, y, z]) => ({
      name: `${site}:${sequence}`,
      site,
      // Seconds since the first day: doubles hold a year to 4 ns, less than what is unsure.
      atS: (Date.parse(`${tai.slice(0, 19)}Z`) - Date.UTC(2026, 0, 1)) / 1000 + Number(tai.slice(19)),
      place: [Number(x), Number(y), Number(z)] as const,
    }));
    const near = new Map<string, number>();
    const EARTH_DIAMETER_S = 12_800_000 / C_M_PER_S;
    for (let a = 0; a < events.length; a++) {
      for (let b = a + 1; b < events.length; b++) {
        const [one, other] = [events[a]!, events[b]!];
        const apartS = other.atS - one.atS;
        if (apartS > EARTH_DIAMETER_S) break;
        if (one.site === other.site) continue;
        const distanceM = Math.hypot(...one.place.map((m, axis) => m - other.place[axis]!));
        const pastS = apartS - distanceM / C_M_PER_S;
        if (pastS < UNSURE_S) near.set(`${one.name} ${other.name}`, pastS);
      }
    }
    const found = new Set(out('pairs.csv').map(([, a = '', b = '']) => `${a} ${b}`));
    expect(found.size).toBeGreaterThan(10_000);
    expect([...found].filter((pair) => !near.has(pair))).toEqual([]);
    expect([...near].filter(([pair, pastS]) => pastS < -UNSURE_S && !found.has(pair))).toEqual([]);
    expect(Object.values(many.summary['pairs'] as object).reduce((sum: number, n: number) => sum + n, 0)).toBe(out('pairs.csv').length);
    expect(many.summary['coincidences']).toMatchObject({ total: out('coincidences.csv').length });
  });
});
