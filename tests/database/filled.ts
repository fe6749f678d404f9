import type Database from 'better-sqlite3';
import { SHIPPED_LEAP_SECONDS_LIST, shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';

const SITES = 8;
const PER_SECOND = 20;
export const FIRST_TAI_S = 1_772_323_237;

const NUMBERS = 'WITH RECURSIVE n(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM n WHERE i < ?)';
const AT = "'2026-03-01T00:00:00.000Z'";
const HASH = 'randomblob(32)';
/** A set's hash, whose first digits tell sets apart as those of a real one do, and which can be looked for. */
const SET_HASH = "printf('%012x%052x', i, i)";

/** One network with what its results rest on: people, a run, eight sites with a clock each, a rule, the table of time. */
export function fillGround(db: Database.Database): void {
  db.exec(`
    INSERT INTO people (id, email, name, created_at) VALUES (1, 'a@example.org', 'Ada', ${AT}), (2, 'b@example.org', 'Bo', ${AT});
    INSERT INTO networks (id, code, name, origin_tai_s, origin_ps, created_at) VALUES (1, 'net', 'Net', ${FIRST_TAI_S}, 0, ${AT});
    INSERT INTO runs (id, network_id, code, name, from_tai_s, from_ps, created_at) VALUES (1, 1, 'run', '', ${FIRST_TAI_S}, 0, ${AT});
    INSERT INTO rules (id, network_id, code, name, is_active, created_at) VALUES (1, 1, 'light2', '', 1, ${AT});
    INSERT INTO rule_versions (id, rule_id, number, minimum_fold, sigmas, window_kind, speed_c, margin_ns, created_at)
      VALUES (1, 1, 1, 2, 3, 'light-time', 1, 0, ${AT});
  `);
  const { sha1, updated, expires } = shippedLeapSeconds();
  db.prepare(
    `INSERT OR IGNORE INTO leap_second_tables (id, body, sha1, updated_tai_s, expires_tai_s, is_in_force, created_at) VALUES (1, ?, ?, ?, ?, 1, ${AT})`,
  ).run(SHIPPED_LEAP_SECONDS_LIST, sha1, updated.taiS, expires.taiS);
  for (let site = 1; site <= SITES; site++) {
    db.exec(`
      INSERT INTO sites (id, network_id, code, name, created_at) VALUES (${site}, 1, 'S${site}', '', ${AT});
      INSERT INTO clocks (id, network_id, code, name, created_at) VALUES (${site}, 1, 'c${site}', '', ${AT});
      INSERT INTO clock_segments (id, clock_id, segment, number, from_tai_s, from_ps, at_tai_s, at_ps, offset_ns, offset_sigma_ns, rate_ns_per_day,
        rate_sigma_ns_per_day, covariance_ns2_per_day, origin, created_at)
        VALUES (${site}, ${site}, 1, 1, ${FIRST_TAI_S}, 0, ${FIRST_TAI_S}, 0, 10, 1, 0.5, 0.1, 0.05, 'certificate', ${AT});
      INSERT INTO site_versions (id, site_id, number, scale, clock_id, exact_clock, position_kind, itrs_x_m, itrs_y_m, itrs_z_m, position_sigma_m,
        delay_ns, delay_sigma_ns, origin, created_at)
        VALUES (${site}, ${site}, 1, 'UTC', ${site}, 0, 'itrs', 6378137, ${site}, 0, 0.1, 100, 1, 'survey', ${AT});
      INSERT INTO groundings (id, site_version_id, segment_id, run_id, leap_second_table_id) VALUES (${site}, ${site}, ${site}, 1, 1);
      INSERT INTO series (site_id, series) VALUES (${site}, '');
    `);
  }
}

/** `rows` triggers with their events, taking the sites in turn. */
export function fillEvents(db: Database.Database, rows: number): void {
  const site = `1 + i % ${SITES}`;
  db.prepare(
    `INSERT INTO triggers (id, site_id, series, sequence, variant, kind, reading, reading_form, sigma, amplitude, content_hash, received_at_ms)
     ${NUMBERS} SELECT i, ${site}, '', i / ${SITES}, 0, 'trigger', '2026-03-01T00:00:00.000000000001', 'iso', '20', '1.5', ${HASH}, i FROM n`,
  ).run(rows);
  db.prepare(
    `INSERT INTO events (trigger_id, network_id, site_id, kind, grounding_id, tai_s, ps, x_m, y_m, z_m, reading_sigma_ns, sigma_origin, sigma_ns,
       since_epoch_days, amplitude, version, change_number, row_hash)
     ${NUMBERS} SELECT i, 1, ${site}, 'trigger', ${site}, ${FIRST_TAI_S} + i / ${PER_SECOND}, (i % ${PER_SECOND}) * 50000000000 + i, 6378137, i, 0, 20,
       'record', 22.4, 0.25, 1.5, 1, 1, ${HASH} FROM n`,
  ).run(rows);
}

/** `rows` coincidences of two neighbouring events each, of all classes in turn; every tenth is a former one. */
export function fillCoincidences(db: Database.Database, rows: number): void {
  const classOf = "CASE i % 3 WHEN 0 THEN 'timelike' WHEN 1 THEN 'spacelike' ELSE 'undecided' END";
  const isCurrent = 'i % 10 > 0';
  const firstS = `${FIRST_TAI_S} + i / ${PER_SECOND}`;
  const firstPs = `(i % ${PER_SECOND}) * 50000000000 + i`;
  db.prepare(
    `INSERT INTO coincidences (id, network_id, rule_version_id, set_hash, state, is_current, fold, first_tai_s, first_ps, span_ns, class,
       timelike_pairs, spacelike_pairs, undecided_pairs, nearest_margin_sigma, least_turning_speed_c, amplitude, expected_by_chance, touches_gap,
       since_change, ended_change, row_hash)
     ${NUMBERS} SELECT i, 1, 1, ${SET_HASH}, CASE i % 10 WHEN 0 THEN 'former' WHEN 1 THEN 'open' ELSE 'final' END, ${isCurrent}, 2, ${firstS}, ${firstPs},
       i % 977, ${classOf}, i % 3 = 0, i % 3 = 1, i % 3 = 2, i % 991 - 500, CASE i % 3 WHEN 1 THEN (i % 983) / 1000.0 END, i % 971, i % 967, 0,
       1 + i / 100, CASE i % 10 WHEN 0 THEN 2 + i / 100 END, ${HASH} FROM n`,
  ).run(rows);
  for (const place of [1, 2])
    db.prepare(
      `INSERT INTO members (coincidence_id, place, trigger_id, site_id, event_version, is_current, first_tai_s, first_ps)
       ${NUMBERS} SELECT i, ${place}, 1 + (i + ${place - 1}) % ?, 1 + (i + ${place - 1}) % ${SITES}, 1, ${isCurrent}, ${firstS}, ${firstPs} FROM n`,
    ).run(rows, rows);
  db.prepare(
    `INSERT INTO pairs (coincidence_id, a, b, class, dt_ns, distance_m, sigma_dt_ns, sigma_gap_ns, margin_sigma, reverse_margin_sigma, interval_m2,
       proper_time_s, proper_distance_m, turning_speed_c, turning_sigma_c, toward_x, toward_y, toward_z)
     ${NUMBERS} SELECT i, 1, 2, ${classOf}, i % 977, 1000, 30, 31, i % 991 - 500, i % 991 + 500, 5, CASE i % 3 WHEN 0 THEN 1e-6 END,
       CASE i % 3 WHEN 1 THEN 900.0 END, CASE i % 3 WHEN 1 THEN 0.4 END, CASE i % 3 WHEN 1 THEN 0.01 END, CASE i % 3 WHEN 1 THEN 1 END,
       CASE i % 3 WHEN 1 THEN 0 END, CASE i % 3 WHEN 1 THEN 0 END FROM n`,
  ).run(rows);
}

/** `rows` of what else grows: set-asides, changes, the audit trail, jobs, candidates with their snapshots. */
export function fillTheRest(db: Database.Database, rows: number): void {
  db.prepare(
    `INSERT INTO set_asides (network_id, site_id, series, reason, detail, verbatim, content_hash, received_at_ms, state, retry_at_ms, decided_at, decided_by,
       decision)
     ${NUMBERS} SELECT 1, 1 + i % ${SITES}, '', CASE i % 4 WHEN 0 THEN 'sigma' WHEN 1 THEN 'future' ELSE 'date' END, '', 'S1,x', ${HASH}, i,
       CASE i % 5 WHEN 0 THEN 'dismissed' ELSE 'open' END, CASE i % 4 WHEN 1 THEN i END, CASE i % 5 WHEN 0 THEN ${AT} END,
       CASE i % 5 WHEN 0 THEN 1 END, CASE i % 5 WHEN 0 THEN 'noise' ELSE '' END FROM n`,
  ).run(rows);
  db.prepare(`INSERT INTO changes (network_id, number, at_ms, kind, body) ${NUMBERS} SELECT 1, i, i, 'records', '{}' FROM n`).run(rows);
  db.prepare(
    `INSERT INTO audit (seq, at, actor_kind, actor_id, action, network_id, subject_kind, subject_id, details, previous_hash, hash)
     ${NUMBERS} SELECT i, ${AT}, 'person', 1, 'site:changed', 1, 'site', i % 100, '{}', ${HASH}, ${HASH} FROM n`,
  ).run(rows);
  db.prepare(
    `INSERT INTO jobs (network_id, kind, body, state, run_after_ms, lease_holder, lease_until_ms, created_at_ms, ended_at_ms)
     ${NUMBERS} SELECT 1, 'reprocess', '{}', CASE i % 3 WHEN 0 THEN 'waiting' WHEN 1 THEN 'running' ELSE 'done' END, i,
       CASE i % 3 WHEN 1 THEN 'w' END, CASE i % 3 WHEN 1 THEN i END, i, CASE i % 3 WHEN 2 THEN i END FROM n`,
  ).run(rows);
  const candidates = Math.min(rows, 20_000);
  const hash = "printf('%064x', i)";
  db.prepare(
    `INSERT INTO candidates (id, network_id, number, title, about, state, author_id, created_at, updated_at)
     ${NUMBERS} SELECT i, 1, i, 'T', '', CASE i % 2 WHEN 0 THEN 'draft' ELSE 'withdrawn' END, 1, ${AT}, ${AT} FROM n`,
  ).run(candidates);
  db.prepare(
    `INSERT INTO snapshots (id, candidate_id, number, sha256, body, program, created_at, created_by, report_code)
     ${NUMBERS} SELECT i, i, 1, ${hash}, '{}', '1.0.0', ${AT}, 1, printf('%08d', i) FROM n`,
  ).run(candidates);
  db.prepare(`INSERT INTO snapshot_events (snapshot_id, trigger_id, event_version) ${NUMBERS} SELECT i, i, 1 FROM n`).run(candidates);
  db.prepare(
    `INSERT INTO comments (candidate_id, is_question, author_id, body, created_at) ${NUMBERS} SELECT i, 0, 2, 'x', ${AT} FROM n`,
  ).run(candidates);
  db.prepare(`INSERT INTO reviewers (candidate_id, person_id, named_at, named_by) ${NUMBERS} SELECT i, 2, ${AT}, 1 FROM n`).run(candidates);
}
