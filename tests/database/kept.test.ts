import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDb, openDb, type Db } from '../../backend/db';
import { fillCoincidences, fillEvents, fillGround, fillTheRest } from './filled';

const ROWS = 40;
const AT = "'2026-03-02T00:00:00.000Z'";

/** Tables to which rows are only added. */
const ONLY_ADDED_TO = [
  'audit',
  'candidate_editors',
  'candidate_versions',
  'claim_decisions',
  'ephemerides',
  'event_versions',
  'groundings',
  'out_of_dates',
  'rule_exclusions',
  'rule_sites',
  'snapshot_events',
  'snapshots',
  'triggers',
];

/** Tables of which some columns may change, and no row goes. */
const NEVER_DELETED = [
  'change_heads',
  'clock_segments',
  'emitter_versions',
  'frame_versions',
  'leap_second_tables',
  'orientation_tables',
  'rule_versions',
  'series',
  'set_asides',
  'signatures',
  'site_versions',
  'time_reference_versions',
];

/** Tables with a rule of their own, which has its test below. */
const TRIED_APART = [
  'changes',
  'clock_fits',
  'clocks',
  'coincidences',
  'events',
  'frames',
  'networks',
  'rules',
  'site_streams',
  'sites',
  'stored_files',
];

/** Tables of which nothing has to be kept: rows change, and go where no foreign key holds them. */
const MAY_CHANGE_AND_GO = [
  'access_tokens',
  'attachments',
  'backups',
  'candidate_events',
  'candidate_frames',
  'candidate_sets',
  'candidates',
  'chance_estimates',
  'claims',
  'clock_fit_points',
  'coincidence_alerts',
  'column_mappings',
  'comments',
  'crowded_events',
  'deployment',
  'emitters',
  'event_histograms',
  'event_rates',
  'failed_attempts',
  'growths',
  'held_ranges',
  'intakes',
  'jobs',
  'kept_mails',
  'live_spans',
  'mailed_tokens',
  'members',
  'mentions',
  'pairs',
  'people',
  'preferences',
  'recovery_codes',
  'refresh_tokens',
  'reviewers',
  'roles',
  'runs',
  'saved_views',
  'second_factors',
  'sessions',
  'site_connections',
  'site_keys',
  'staged_events',
  'time_references',
  'webhook_deliveries',
  'webhooks',
];

let folder: string;
let db: Db;
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'skewline-kept-'));
  db = openDb(folder);
  const client = db.$client;
  fillGround(client);
  fillEvents(client, ROWS);
  fillCoincidences(client, ROWS);
  fillTheRest(client, ROWS);
  client.exec(`
    INSERT INTO candidate_versions (candidate_id, version, at, action, body) VALUES (1, 1, ${AT}, 'made', '{}');
    INSERT INTO candidate_editors (candidate_id, person_id, since) VALUES (1, 1, ${AT});
    INSERT INTO ephemerides (site_id, kind, body, sha256, from_tai_s, from_ps, to_tai_s, to_ps, position_sigma_m, created_at)
      VALUES (1, 'oem', 'x', '${'0'.repeat(64)}', 1, 0, 2, 0, 5, ${AT});
    INSERT INTO out_of_dates (snapshot_id, at, cause, differences) VALUES (1, ${AT}, 'conflict', '[]');
    INSERT INTO rule_sites VALUES (1, 1);
    INSERT INTO rule_exclusions (rule_version_id, from_tai_s, from_ps, to_tai_s, to_ps, reason) VALUES (1, 1, 0, 2, 0, '');
    INSERT INTO event_versions SELECT trigger_id, grounding_id, tai_s, ps, x_m, y_m, z_m, reading_sigma_ns, sigma_origin, sigma_ns, since_epoch_days,
      amplitude, version, change_number, row_hash, 2 FROM events WHERE trigger_id = 1;
    INSERT INTO claims (candidate_id, kind, state, numbers) VALUES (3, 'no-common-order', 'accepted', '{}');
    INSERT INTO emitters (id, network_id, code, name, created_at) VALUES (1, 1, 'e', '', ${AT});
    INSERT INTO time_references (id, network_id, code, name, created_at) VALUES (1, 1, 'fountain', '', ${AT});
    INSERT INTO time_reference_versions (reference_id, number, sigma_ns, created_at) VALUES (1, 1, 4, ${AT});
    INSERT INTO emitter_versions (emitter_id, number, itrs_x_m, itrs_y_m, itrs_z_m, position_sigma_m, scale, schedule, reference_id, tolerance_ns, created_at)
      VALUES (1, 1, 1, 1, 1, 0, 'TAI', '{}', 1, 100, ${AT});
    INSERT INTO frames (id, network_id, code, name, created_at) VALUES (1, 1, 'bary', '', ${AT});
    INSERT INTO frame_versions (frame_id, number, kind, at, definition, created_at) VALUES (1, 1, 'barycentric', 'event', '{}', ${AT});
    INSERT INTO orientation_tables (body, sha256, first_mjd, last_mjd, is_in_force, created_at) VALUES ('x', '${'0'.repeat(64)}', 1, 2, 1, ${AT});
  `);
  sign(3, 2, 'confirm');
  client.exec("INSERT INTO claim_decisions VALUES (1, 1, 'confirm', '')");
});
afterAll(() => {
  closeDb(db);
  rmSync(folder, { recursive: true });
});

const run = (sql: string, ...values: unknown[]): void => {
  db.$client.prepare(sql).run(...values);
};
/** Runs in a transaction that is undone, so that the tests do not see each other. */
const tried = (sql: string) => (): void => {
  db.$client.exec('BEGIN');
  try {
    db.$client.exec(sql);
  } finally {
    if (db.$client.inTransaction) db.$client.exec('ROLLBACK');
  }
};
const columnsOf = (table: string): string[] =>
  db.$client.prepare<[string], string>('SELECT name FROM pragma_table_info(?)').pluck().all(table);

/** Each snapshot has the number of its candidate. */
function sign(
  candidate: number,
  person: number,
  decision: 'confirm' | 'dispute',
  snapshotHash = candidate.toString(16).padStart(64, '0'),
): void {
  run(
    `INSERT INTO signatures (candidate_id, snapshot_id, person_id, name, decision, reason, snapshot_sha256, signed_at, sha256)
     VALUES (?, ?, ?, 'Bo', ?, 'since', ?, ${AT}, lower(hex(randomblob(32))))`,
    candidate,
    candidate,
    person,
    decision,
    snapshotHash,
  );
}

describe('every table', () => {
  const namesOf = (sql: string): string[] => db.$client.prepare<[], string>(sql).pluck().all();

  it('is tried here, or named as one of which nothing has to be kept', () => {
    const named = [...ONLY_ADDED_TO, ...NEVER_DELETED, ...TRIED_APART, ...MAY_CHANGE_AND_GO];
    expect(
      named.sort(),
      'put a new table on one list of kept.test.ts: ONLY_ADDED_TO or NEVER_DELETED with a row of it in beforeAll, TRIED_APART with a test of its rule, or MAY_CHANGE_AND_GO',
    ).toEqual(
      namesOf(
        "SELECT name FROM sqlite_schema WHERE type = 'table' AND name NOT GLOB 'sqlite_*' AND name NOT GLOB '__drizzle*' ORDER BY name",
      ),
    );
  });

  it('that has a trigger is tried', () => {
    const guarded = namesOf("SELECT DISTINCT tbl_name FROM sqlite_schema WHERE type = 'trigger' ORDER BY tbl_name");
    expect(
      guarded.filter((table) => MAY_CHANGE_AND_GO.includes(table)),
      'a table that a trigger guards goes from MAY_CHANGE_AND_GO to a list that is tried',
    ).toEqual([]);
  });
});

describe('42: UPDATE or DELETE on audit or raw records aborts', () => {
  it.each(ONLY_ADDED_TO)('%s takes no UPDATE, no DELETE and no REPLACE', (table) => {
    expect(db.$client.prepare(`SELECT count(*) FROM ${table}`).pluck().get()).toBeGreaterThan(0);
    for (const column of columnsOf(table)) expect(tried(`UPDATE ${table} SET ${column} = ${column}`), column).toThrow('never changed');
    expect(tried(`DELETE FROM ${table}`)).toThrow('never deleted');
    expect(tried(`INSERT OR REPLACE INTO ${table} SELECT * FROM ${table}`)).toThrow(table);
  });

  it.each(NEVER_DELETED)('%s keeps its rows', (table) => {
    expect(db.$client.prepare(`SELECT count(*) FROM ${table}`).pluck().get()).toBeGreaterThan(0);
    expect(tried(`DELETE FROM ${table}`)).toThrow(table);
    expect(tried(`INSERT OR REPLACE INTO ${table} SELECT * FROM ${table}`)).toThrow(table);
  });

  it('the audit trail goes on by 1', () => {
    expect(
      tried(
        `INSERT INTO audit SELECT seq + 2, at, actor_kind, actor_id, action, network_id, subject_kind, subject_id, details, request_id, previous_hash, hash
         FROM audit ORDER BY seq DESC LIMIT 1`,
      ),
    ).toThrow('goes on from the last row by 1');
  });

  it.each(['verbatim', 'content_hash', 'reason', 'received_at_ms', 'site_id', 'series'])('the %s of a set-aside stays', (column) => {
    expect(tried(`UPDATE set_asides SET ${column} = ${column}`)).toThrow('what came is never changed');
  });

  it('a set-aside can be decided', () => {
    expect(
      tried(`UPDATE set_asides SET state = 'dismissed', decided_at = ${AT}, decided_by = 1, decision = 'noise' WHERE state = 'open'`),
    ).not.toThrow();
  });
});

describe('a version', () => {
  it.each(['site_versions', 'clock_segments', 'rule_versions', 'frame_versions', 'emitter_versions', 'time_reference_versions'])(
    'of %s is superseded once, and never changed',
    (table) => {
      for (const column of columnsOf(table).filter((name) => !name.startsWith('superseded')))
        expect(tried(`UPDATE ${table} SET ${column} = ${column}`), column).toThrow('never changed');
      const supersede = `UPDATE ${table} SET superseded_at = ${AT}, superseded_by = 1;`;
      expect(tried(supersede)).not.toThrow();
      expect(tried(`${supersede} UPDATE ${table} SET superseded_at = NULL`)).toThrow('stays so');
    },
  );

  it('that begins where one in force begins is refused until that one is superseded', () => {
    const columns = columnsOf('clock_segments')
      .filter((name) => name !== 'id')
      .join(', ');
    const again = `INSERT INTO clock_segments (${columns}) SELECT ${columns.replace(' number,', ' number + 1,').replace('superseded_at, superseded_by', 'NULL, NULL')}
      FROM clock_segments WHERE id = 1;`;
    expect(tried(again)).toThrow('UNIQUE');
    expect(tried(`UPDATE clock_segments SET superseded_at = ${AT} WHERE id = 1; ${again}`)).not.toThrow();
  });

  it.each(['networks', 'sites', 'rules', 'frames', 'clocks'])('of the names of %s there is one', (table) => {
    expect(tried(`UPDATE ${table} SET code = 'other'`)).toThrow('never changed');
  });
});

describe('an event', () => {
  const another = `INSERT INTO triggers (id, site_id, series, sequence, variant, kind, reading, reading_form, sigma, amplitude, content_hash, received_at_ms)
    SELECT 1000, site_id, series, sequence, 1, kind, 'other', 'iso', '', '', content_hash, 0 FROM triggers WHERE id = 2;`;
  const event = (trigger: number, site: string, kind = 'kind'): string =>
    `INSERT INTO events SELECT ${trigger}, network_id, ${site}, ${kind}, grounding_id, tai_s, ps, x_m, y_m, z_m, reading_sigma_ns, sigma_origin, sigma_ns,
      since_epoch_days, amplitude, version, change_number, row_hash FROM events WHERE trigger_id = 2;`;
  const keep = `INSERT INTO event_versions SELECT trigger_id, grounding_id, tai_s, ps, x_m, y_m, z_m, reading_sigma_ns, sigma_origin, sigma_ns,
    since_epoch_days, amplitude, version, change_number, row_hash, 2 FROM events WHERE trigger_id = 2;`;

  it('of a second content of an identity is refused while the first stands', () => {
    expect(tried(another + event(1000, 'site_id'))).toThrow('stands already');
    expect(
      tried(
        `${another} ${keep} DELETE FROM events WHERE trigger_id = 2; ${event(1000, 'site_id').replace('= 2;', '= 3;').replace('site_id,', '3,')}`,
      ),
    ).not.toThrow();
  });

  it('has the site and the kind of its trigger', () => {
    const unknown = another.replace('sequence, 1, kind', "'77', 0, kind");
    expect(tried(unknown + event(1000, 'site_id'))).not.toThrow();
    expect(tried(unknown + event(1000, 'site_id + 1'))).toThrow('site and kind');
    expect(tried(unknown + event(1000, 'site_id', "'test'"))).toThrow('site and kind');
  });

  it('is not lost when it is computed anew or withdrawn', () => {
    expect(tried('UPDATE events SET version = 2, ps = 5 WHERE trigger_id = 2')).toThrow('keep the version');
    expect(tried('DELETE FROM events WHERE trigger_id = 2')).toThrow('keep the version');
    expect(tried(`${keep} UPDATE events SET version = 2, ps = 5 WHERE trigger_id = 2`)).not.toThrow();
    expect(tried(`${keep} DELETE FROM events WHERE trigger_id = 2`)).not.toThrow();
  });

  it('is of the network of its site', () => {
    expect(
      tried(`INSERT INTO networks (id, code, name, origin_tai_s, origin_ps, created_at) VALUES (2, 'two', 'Two', 0, 0, ${AT});
        ${another.replace('sequence, 1, kind', "'77', 0, kind")} ${event(1000, 'site_id').replace('network_id', '2')}`),
    ).toThrow('FOREIGN KEY');
  });
});

describe('a coincidence', () => {
  it('is never changed but in its state, which goes one way', () => {
    expect(tried('UPDATE coincidences SET span_ns = 5')).toThrow('never changed');
    expect(tried("UPDATE coincidences SET state = 'open' WHERE state = 'final'")).toThrow('staged becomes open or final');
    expect(tried("UPDATE coincidences SET state = 'final' WHERE state = 'open'")).not.toThrow();
    expect(tried("DELETE FROM coincidences WHERE state = 'former'")).toThrow('only what is staged');
  });

  it('takes its members along when it ends', () => {
    run("UPDATE coincidences SET state = 'former', is_current = 0, ended_change = since_change + 1 WHERE id = 5");
    expect(db.$client.prepare('SELECT is_current FROM members WHERE coincidence_id = 5').pluck().all()).toEqual([0, 0]);
  });

  it('is in force once', () => {
    const columns = columnsOf('coincidences')
      .filter((name) => name !== 'id')
      .join(', ');
    expect(tried(`INSERT INTO coincidences (${columns}) SELECT ${columns} FROM coincidences WHERE id = 7`)).toThrow('UNIQUE');
    expect(tried(`INSERT INTO coincidences (${columns}) SELECT ${columns} FROM coincidences WHERE id = 10`)).not.toThrow();
  });
});

describe('what a clock or a log came from', () => {
  const fit = `INSERT INTO clock_fits (id, clock_id, site_id, emitter_version_id, from_tai_s, from_ps, to_tai_s, to_ps, at_tai_s, at_ps, offset_ns,
      offset_sigma_ns, rate_ns_per_day, rate_sigma_ns_per_day, covariance_ns2_per_day, chi_square, points, outliers, findings, created_at)
    VALUES (1, 1, 1, 1, 1, 0, 9, 0, 5, 0, 10, 1, 0.5, 0.1, 0, 1, 4, 0, '{}', ${AT});`;

  it('as a fit is never changed, and stays while a segment came from it', () => {
    for (const column of columnsOf('clock_fits').filter((name) => name !== 'job_id'))
      expect(tried(`${fit} UPDATE clock_fits SET ${column} = ${column}`), column).toThrow('never changed');
    const columns = columnsOf('clock_segments').filter((name) => name !== 'id');
    const fitted: Readonly<Record<string, string>> = { segment: '99', from_tai_s: '77', origin: "'fit'", fit_id: '1' };
    const segment = `INSERT INTO clock_segments (${columns.join()}) SELECT ${columns.map((name) => fitted[name] ?? name).join()}
      FROM clock_segments WHERE id = 1;`;
    expect(tried(`${fit} ${segment} DELETE FROM clock_fits`)).toThrow('is kept');
    expect(tried(`${fit} DELETE FROM clock_fits`)).not.toThrow();
  });

  it('as a file is never changed, but can go', () => {
    const file = `INSERT INTO stored_files VALUES ('${'0'.repeat(64)}', 1, 'text/csv', ${AT});`;
    for (const column of columnsOf('stored_files'))
      expect(tried(`${file} UPDATE stored_files SET ${column} = ${column}`), column).toThrow('never changed');
    expect(tried(`${file} DELETE FROM stored_files`)).not.toThrow();
  });
});

describe('the changes of a network', () => {
  const change = (number: number): string => `INSERT INTO changes VALUES (1, ${number}, 0, 'records', '{}')`;

  it('are numbered without a gap', () => {
    expect(tried(change(ROWS + 1))).not.toThrow();
    for (const number of [ROWS, ROWS + 2]) expect(tried(change(number))).toThrow();
    expect(db.$client.prepare('SELECT last FROM change_heads WHERE network_id = 1').pluck().get()).toBe(ROWS);
  });

  it('are let go from the oldest on, after that was said', () => {
    expect(tried('DELETE FROM changes WHERE number < 5')).toThrow('only those before the oldest');
    expect(tried('UPDATE change_heads SET oldest = 5; DELETE FROM changes WHERE number < 5')).not.toThrow();
    expect(tried('UPDATE change_heads SET last = last - 1')).toThrow('never go back');
  });
});

describe('what a site sent', () => {
  it('is complete up to an instant that never goes back', () => {
    run('UPDATE site_streams SET complete_tai_s = 100, complete_ps = 5 WHERE site_id = 1');
    for (const [taiS, ps] of [
      [99, 6],
      [100, 4],
      [null, null],
    ])
      expect(() => {
        run('UPDATE site_streams SET complete_tai_s = ?, complete_ps = ? WHERE site_id = 1', taiS, ps);
      }).toThrow('never goes back');
    run('UPDATE site_streams SET complete_tai_s = 101, complete_ps = 0 WHERE site_id = 1');
  });

  it('is conserved in its counters', () => {
    expect(tried('UPDATE series SET received = 3, stored = 1, known = 1, set_aside = 1 WHERE site_id = 1')).not.toThrow();
    expect(tried('UPDATE series SET received = 3, stored = 1, known = 1 WHERE site_id = 1')).toThrow('series_conserved');
    expect(tried('UPDATE series SET received = 3, stored = 3; UPDATE series SET received = 2, stored = 2')).toThrow('stays counted');
  });
});

describe('26: no one signs their own work', () => {
  it('as its author, or as who edited a claim', () => {
    expect(() => {
      sign(5, 1, 'confirm');
    }).toThrow('what they wrote or edited');
    run(`INSERT INTO candidate_editors VALUES (6, 2, ${AT})`);
    expect(() => {
      sign(6, 2, 'dispute');
    }).toThrow('what they wrote or edited');
  });

  it('and a signature holds for one snapshot, once, and is never changed', () => {
    expect(() => {
      sign(7, 2, 'confirm', 'f'.repeat(64));
    }).toThrow('hash of its snapshot');
    expect(() => {
      sign(3, 2, 'dispute');
    }).toThrow('UNIQUE');
    expect(tried("UPDATE signatures SET decision = 'dispute'")).toThrow('never changed');
    expect(tried(`UPDATE signatures SET withdrawn_at = ${AT}; UPDATE signatures SET withdrawn_at = NULL`)).toThrow('stays so');
  });
});
