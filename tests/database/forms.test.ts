import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { FRAME_KINDS, INTERVAL_CLASSES, SET_ASIDE_WORDS, SIGMA_ORIGINS, SITE_SCALES, TRIGGER_KINDS } from '#schema/words';
import { compareIdentities } from '#shared/coincidence/event-identity';
import { isCode } from '#shared/reconcile/code';
import { KINDS, SET_ASIDE_REASONS, SIGMA_SOURCES } from '#shared/reconcile/record';
import { type FrameMotion } from '#shared/relativity/frame-definition';
import { type IntervalClass } from '#shared/relativity/verdict';
import { SCALES } from '#shared/time/scales';
import { closeDb, openDb, type Db } from '../../backend/db';
import { fillCoincidences, fillEvents, fillGround, fillTheRest } from './filled';

/** A row of a table, otherwise than it is, and the constraint that refuses it. */
const REFUSED: readonly (readonly [table: string, change: Readonly<Record<string, unknown>>, constraint: string])[] = [
  ['triggers', { variant: 9, series: 'a b' }, 'triggers_series'],
  ['triggers', { variant: 9, kind: 'pulse' }, 'triggers_kind'],
  ['triggers', { variant: 9, content_hash: Buffer.alloc(31) }, 'triggers_content_hash'],
  ['triggers', { variant: 9, extra: '[]' }, 'triggers_extra'],
  ['triggers', { variant: 9, reading: '' }, 'triggers_reading'],
  ['triggers', { variant: -1 }, 'triggers_variant'],
  ['events', { trigger_id: 1, ps: 1e12 }, 'events_time'],
  ['events', { trigger_id: 1, ps: -1 }, 'events_time'],
  ['events', { trigger_id: 1, tai_s: 2 ** 53 }, 'events_time'],
  ['events', { trigger_id: 1, x_m: Infinity }, 'events_place'],
  ['events', { trigger_id: 1, sigma_ns: -1 }, 'events_sigma_ns'],
  ['events', { trigger_id: 1, sigma_ns: Infinity }, 'events_sigma_ns'],
  ['events', { trigger_id: 1, sigma_ns: NaN }, 'NOT NULL constraint failed: events.sigma_ns'],
  ['events', { trigger_id: 1, ps: 0.5 }, 'cannot store REAL value in INTEGER column events.ps'],
  ['events', { trigger_id: 1, tai_s: 'soon' }, 'cannot store TEXT value in INTEGER column events.tai_s'],
  ['coincidences', { set_hash: 'F'.repeat(64) }, 'coincidences_set_hash'],
  ['coincidences', { fold: 3 }, 'coincidences_pairs'],
  ['coincidences', { class: 'mixed' }, 'coincidences_class_of_pairs'],
  ['coincidences', { is_current: 0 }, 'coincidences_is_current'],
  ['coincidences', { state: 'former', is_current: 0 }, 'coincidences_life'],
  ['pairs', { coincidence_id: 2, a: 2, b: 1 }, 'pairs_order'],
  ['pairs', { coincidence_id: 2, a: 1, b: 2, toward_x: 0.5 }, 'pairs_toward'],
  ['pairs', { coincidence_id: 2, a: 1, b: 2, class: 'timelike' }, 'pairs_of_class'],
  ['site_versions', { number: 9, exact_clock: 1 }, 'site_versions_exact_clock'],
  ['site_versions', { number: 9, latitude_deg: 91 }, 'site_versions_latitude_deg'],
  ['site_versions', { number: 9, itrs_x_m: null }, 'site_versions_position'],
  ['clock_segments', { number: 9, covariance_ns2_per_day: 0.2 }, 'clock_segments_covariance_ns2_per_day'],
  ['clock_segments', { number: 9, origin: 'fit' }, 'clock_segments_fit'],
  ['rule_versions', { number: 9, minimum_fold: 1 }, 'rule_versions_minimum_fold'],
  ['rule_versions', { number: 9, width_ns: 5 }, 'rule_versions_window'],
  ['runs', { code: 'other', from_tai_s: 5, to_tai_s: 4, to_ps: 0 }, 'runs_span'],
  ['runs', { code: 'other', from_tai_s: 5, to_tai_s: 6 }, 'runs_to'],
  ['clocks', { code: 'exact' }, 'clocks_code'],
  ['clocks', { code: 'A\0' }, 'clocks_code'],
  ['clocks', { code: 'other', created_at: '2026-13-01' }, 'clocks_created_at'],
  ['clocks', { code: 'other', created_at: '2026-03-01T00:00:00.000' }, 'clocks_created_at'],
  ['jobs', { body: '{' }, 'jobs_body'],
  ['jobs', { state: 'running', lease_holder: null, lease_until_ms: null }, 'jobs_lease'],
  ['jobs', { state: 'done', lease_holder: null, lease_until_ms: null }, 'jobs_ended'],
  ['candidates', { number: 99, state: 'in-review' }, 'candidates_snapshot'],
  ['set_asides', { reason: 'bored' }, 'set_asides_reason'],
  ['set_asides', { state: 'dismissed' }, 'set_asides_decided'],
];

/**
 * Tables of which no row is tried: their CHECKs are of the forms (`forms.ts`) and kinds of words that those above try, with at most a short rule
 * of their own. That they have them is held by `schema.test.ts`.
 */
const OF_TRIED_FORMS = [
  'access_tokens',
  'attachments',
  'audit',
  'backups',
  'candidate_editors',
  'candidate_events',
  'candidate_frames',
  'candidate_sets',
  'candidate_versions',
  'chance_estimates',
  'change_heads',
  'changes',
  'claim_decisions',
  'claims',
  'clock_fit_points',
  'clock_fits',
  'coincidence_alerts',
  'column_mappings',
  'comments',
  'crowded_events',
  'deployment',
  'emitter_versions',
  'emitters',
  'ephemerides',
  'event_histograms',
  'event_rates',
  'event_versions',
  'failed_attempts',
  'frame_versions',
  'frames',
  'groundings',
  'growths',
  'held_ranges',
  'intakes',
  'kept_mails',
  'leap_second_tables',
  'live_spans',
  'mailed_tokens',
  'members',
  'mentions',
  'networks',
  'orientation_tables',
  'out_of_dates',
  'people',
  'preferences',
  'recovery_codes',
  'refresh_tokens',
  'reviewers',
  'roles',
  'rule_exclusions',
  'rule_sites',
  'rules',
  'saved_views',
  'second_factors',
  'series',
  'sessions',
  'signatures',
  'site_connections',
  'site_keys',
  'site_streams',
  'sites',
  'snapshot_events',
  'snapshots',
  'staged_events',
  'stored_files',
  'time_reference_versions',
  'time_references',
  'webhook_deliveries',
  'webhooks',
];

let folder: string;
let db: Db;
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'skewline-forms-'));
  db = openDb(folder);
  fillGround(db.$client);
  fillEvents(db.$client, 20);
  fillCoincidences(db.$client, 20);
  fillTheRest(db.$client, 20);
});
afterAll(() => {
  closeDb(db);
  rmSync(folder, { recursive: true });
});

/** Puts a row of a table in once more with some columns other than they are, undoes it, and answers the constraint that refused it. */
function refusalOf(table: string, change: Readonly<Record<string, unknown>>): string | undefined {
  const client = db.$client;
  const row = client.prepare<[], Record<string, unknown>>(`SELECT * FROM ${table} LIMIT 1`).get();
  const columns = client
    .prepare<[string], { name: string; pk: number }>('SELECT name, pk FROM pragma_table_info(?)')
    .all(table)
    .filter(({ name, pk }) => pk === 0 || name in change);
  const values = columns.map(({ name }) => (name in change ? change[name] : row?.[name]));
  client.exec('BEGIN');
  try {
    client
      .prepare(`INSERT INTO ${table} (${columns.map(({ name }) => name).join(', ')}) VALUES (${columns.map(() => '?').join(', ')})`)
      .run(...values);
    return undefined;
  } catch (fault) {
    return fault instanceof Error ? fault.message.replace('CHECK constraint failed: ', '') : String(fault);
  } finally {
    client.exec('ROLLBACK');
  }
}

describe('the words of columns', () => {
  it('are those of the core, and what only the server needs', () => {
    expect(SET_ASIDE_WORDS.slice(0, SET_ASIDE_REASONS.length)).toEqual(SET_ASIDE_REASONS);
    expect(TRIGGER_KINDS).toEqual(KINDS);
    expect(SIGMA_ORIGINS).toEqual(SIGMA_SOURCES);
    expect(SITE_SCALES.filter((scale) => scale !== 'proper').sort()).toEqual([...SCALES].sort());
    const classes: readonly IntervalClass[] = INTERVAL_CLASSES;
    const motions: readonly FrameMotion['kind'][] = ['barycentric', 'velocity', 'toward-baseline'];
    expect(classes).toHaveLength(3);
    expect(FRAME_KINDS.slice(0, motions.length)).toEqual(motions);
  });
});

describe('the forms of columns', () => {
  const anyText = fc.oneof(
    fc.string({ unit: 'binary', maxLength: 30 }),
    fc.stringMatching(/^[A-Za-z0-9_-]{0,26}$/),
    fc.stringMatching(/^[0-9]{0,30}$/),
  );

  it('a code is what the core calls a code', () => {
    fc.assert(
      fc.property(
        anyText.filter((text) => text !== 'exact'),
        (text) => {
          expect(refusalOf('clocks', { code: text }), JSON.stringify(text)).toBe(isCode(text) ? undefined : 'clocks_code');
        },
      ),
    );
  });

  it('a sequence is a whole number of any size in one way of writing', () => {
    fc.assert(
      fc.property(anyText, (text) => {
        const right = /^(?:0|[1-9]\d*)$/.test(text);
        expect(refusalOf('triggers', { sequence: text, variant: 9 }), JSON.stringify(text)).toBe(right ? undefined : 'triggers_sequence');
      }),
    );
  });

  it('ranges of whole numbers of any size sort as numbers', () => {
    const numbers = fc.uniqueArray(fc.bigInt({ min: 0n, max: 10n ** 40n }).map(String), { maxLength: 12 });
    fc.assert(
      fc.property(numbers, (held) => {
        const client = db.$client;
        client.exec('BEGIN');
        for (const number of held) client.prepare("INSERT INTO held_ranges VALUES (1, '', length(?), ?, ?, 0)").run(number, number, number);
        const sorted = client.prepare('SELECT first FROM held_ranges ORDER BY site_id, series, first_digits, first').pluck().all();
        client.exec('ROLLBACK');
        const identity = (sequence: string) => ({ site: 1, series: '', sequence });
        expect(sorted).toEqual(held.toSorted((a, b) => compareIdentities(identity(a), identity(b))));
      }),
    );
  });

  it('are tried at every table, or it is named as one of tried forms', () => {
    const tables = db.$client
      .prepare<[], string>(
        "SELECT name FROM sqlite_schema WHERE type = 'table' AND name NOT GLOB 'sqlite_*' AND name NOT GLOB '__drizzle*' ORDER BY name",
      )
      .pluck()
      .all();
    const named = [...new Set(REFUSED.map(([table]) => table)), ...OF_TRIED_FORMS];
    expect(
      named.sort(),
      'give a new table its lines in REFUSED of forms.test.ts, with a row of it in filled.ts, or its name in OF_TRIED_FORMS where all its CHECKs are forms that others try',
    ).toEqual(tables);
  });

  it.each(REFUSED)('%s refuses %o', (table, change, constraint) => {
    expect(refusalOf(table, change)).toBe(constraint);
  });

  it('takes infinite margins, which pairs without errors have', () => {
    const margins = { margin_sigma: -Infinity, reverse_margin_sigma: Infinity };
    expect(refusalOf('pairs', { coincidence_id: 1, a: 1, b: 2, ...margins })).toContain('UNIQUE');
  });
});
