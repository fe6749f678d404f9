import { readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { checkCounts, type ManyEvents, reconcileMany } from '../support/many-events';

const LINES = 5_000_000;
/** What five million lines may take at most. */
const MOST_BYTES = 1.5e9;
const EARTH_RADIUS_M = 6_371_000;
const C_M_PER_S = 299792458;
const RUN_MS = 600_000;

let many: ManyEvents;
beforeAll(async () => {
  many = await reconcileMany(LINES);
  console.log(`${LINES} triggers: ${many.tookS.toFixed(1)} s, peak ${(many.peakBytes / 1e6).toFixed(0)} MB`);
}, RUN_MS);
afterAll(() => {
  rmSync(many.folder, { recursive: true });
});

describe('five million lines', () => {
  it('take less than 1.5 GB', () => {
    expect(many.peakBytes).toBeLessThan(MOST_BYTES);
  });

  it('are all there, with what was said again and what is at fault', () => {
    checkCounts(many, LINES);
  });

  it('have as many coincidences as the distances of their sites say', () => {
    const { total } = many.summary['coincidences'] as { total: number };
    const perPair = total / nearPairsExpected();
    expect(perPair).toBeLessThan(1.02);
    expect(perPair).toBeGreaterThan(0.6);
  });
});

/**
 * How many pairs of triggers are near each other on average, when each of ten sites has 1 a second at random: those of two sites d apart are
 * within d/c of each other 2 d/c times a second (Poisson). On a sphere, which is within 1 in 100 of the ellipsoid. A coincidence takes up one
 * pair, or three and more where three and more sites agree, and few of them do.
 */
function nearPairsExpected(): number {
  const { sites } = JSON.parse(readFileSync(join(many.folder, 'network.json'), 'utf8')) as {
    sites: { position: { geodetic: { latitude_deg: number; longitude_deg: number } } }[];
  };
  const places = sites.map(({ position: { geodetic } }) => {
    const [latitude, longitude] = [(geodetic.latitude_deg * Math.PI) / 180, (geodetic.longitude_deg * Math.PI) / 180];
    return [Math.cos(latitude) * Math.cos(longitude), Math.cos(latitude) * Math.sin(longitude), Math.sin(latitude)];
  });
  let perS = 0;
  places.forEach((a, at) => {
    for (const b of places.slice(at + 1)) perS += (2 * EARTH_RADIUS_M * Math.hypot(...a.map((x, axis) => x - b[axis]!))) / C_M_PER_S;
  });
  return perS * (LINES / 10);
}
