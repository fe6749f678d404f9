import { type Db } from '../../backend/db';
import { type Measured } from './measured-server';

const FIRST_TAI_S = 1_780_000_000;
const EARTH_M = 6.378e6;
const LIGHT_M_PER_MS = 299_792.458;

/** An event as it is stored: when, after the first one, and where. */
export interface WideEvent {
  readonly id: number;
  readonly tMs: number;
  readonly placeM: readonly [number, number, number];
}

/**
 * Events of sites all around the Earth, evenly over a time that light needs a part of to cross it, as if computed long ago.
 *
 * @param count of them
 * @param spanMs from the first to the last
 */
export function fillWideEvents(db: Db, { siteIds }: Measured, count: number, spanMs: number): readonly WideEvent[] {
  const { $client: client } = db;
  const table = client.prepare<[], number>('SELECT id FROM leap_second_tables WHERE is_in_force = 1').pluck().get();
  client.exec(`INSERT INTO groundings (site_version_id, segment_id, reference_version_id, run_id, leap_second_table_id)
    SELECT v.id, s.id, r.id, 1, ${table ?? 0} FROM site_versions v JOIN clock_segments s ON s.clock_id = v.clock_id, time_reference_versions r ORDER BY v.id`);
  const trigger = client.prepare(
    `INSERT INTO triggers (id, site_id, series, sequence, variant, kind, reading, reading_form, sigma, amplitude, content_hash, received_at_ms)
     VALUES (?, ?, '', ?, 0, 'trigger', '2026-06-05T00:00:00', 'iso', '20', '1.5', randomblob(32), 1)`,
  );
  const event = client.prepare(
    `INSERT INTO events (trigger_id, network_id, site_id, kind, grounding_id, tai_s, ps, x_m, y_m, z_m, reading_sigma_ns, sigma_origin, sigma_ns,
       since_epoch_days, amplitude, version, change_number, row_hash)
     VALUES (?, 1, ?, 'trigger', ?, ?, ?, ?, ?, ?, 20, 'record', 22.4, 0.25, 1.5, 1, 1, randomblob(32))`,
  );
  const series = client.prepare(`INSERT OR IGNORE INTO series (site_id, series) VALUES (?, '')`);
  for (const siteId of siteIds) series.run(siteId);
  return Array.from({ length: count }, (_, at) => {
    const site = at % siteIds.length;
    const angle = (2 * Math.PI * site) / siteIds.length;
    const placeM = [EARTH_M * Math.cos(angle), EARTH_M * Math.sin(angle), 0] as const;
    const ps = Math.round((at * spanMs * 1e9) / count);
    trigger.run(at + 1, siteIds[site], String(Math.floor(at / siteIds.length) + 1));
    event.run(at + 1, siteIds[site], site + 1, FIRST_TAI_S, ps, ...placeM);
    return { id: at + 1, tMs: ps / 1e9, placeM };
  });
}

/** Where events stand along the baseline from one to another, and how far off they are, all in light-time from the first of the two, ms. */
export function alongBaseline(events: readonly WideEvent[], from: WideEvent, to: WideEvent) {
  const step = (event: WideEvent): number[] => event.placeM.map((m, axis) => (m - (from.placeM[axis] ?? 0)) / LIGHT_M_PER_MS);
  const toward = step(to);
  const baselineMs = Math.hypot(...toward);
  return {
    baselineMs,
    xMs: events.map((event) => step(event).reduce((sum, ms, axis) => sum + (ms * (toward[axis] ?? 0)) / baselineMs, 0)),
    tMs: events.map(({ tMs }) => tMs - from.tMs),
    isSpacelike: events.map((event) => Math.hypot(...step(event)) > Math.abs(event.tMs - from.tMs)),
  };
}
