import { type Db } from '../../backend/db';
import { noteChange } from '../../backend/live/note-change';
import { commit } from '../../backend/writer/commit';
import { keepShippedLeapSeconds } from '../../backend/reconcile/tables-in-force';
import { insertRow } from './network-rows';

const AT = '2026-03-01T00:00:00.000Z';
const HASH = Buffer.alloc(32, 7);
/** 2026-03-01T00:00:00 TAI. */
export const NIGHT_S = 1_772_323_200;
const PS_BETWEEN = 10_000_000_000;

/** What `storeOneOfEach` made, by id. */
export interface OneOfEach {
  /** Of the first site. */
  readonly event: number;
  /** Of the second, 10 ms later. */
  readonly otherEvent: number;
  readonly coincidence: number;
  readonly setAside: number;
  readonly otherSetAside: number;
  /** Of a record whose site is not known. */
  readonly placelessSetAside: number;
}

/** Puts one of each thing that lists hold into a network with two sites: an event at each, their coincidence, set-asides, a series with a gap. */
export function storeOneOfEach(db: Db, networkId: number, sites: readonly [number, number]): OneOfEach {
  keepShippedLeapSeconds(db, Date.parse(AT));
  const client = db.$client;
  const blobRow = (table: string, row: Readonly<Record<string, string | number | null>>, hash: string): number => {
    const names = [...Object.keys(row), hash];
    const query = `INSERT INTO ${table} (${names.join(', ')}) VALUES (${names.map(() => '?').join(', ')})`;
    return Number(client.prepare(query).run(...Object.values(row), HASH).lastInsertRowid);
  };
  const leapSeconds = client.prepare<[], number>('SELECT id FROM leap_second_tables WHERE is_in_force = 1').pluck().get()!;
  const run = insertRow(db, 'runs', {
    network_id: networkId,
    code: 'before',
    name: '',
    from_tai_s: 0,
    from_ps: 0,
    to_tai_s: 1,
    to_ps: 0,
    created_at: AT,
  });
  const event = (siteId: number, at: number): number => {
    const place = { itrs_x_m: 6_378_137, itrs_y_m: at * 1_000_000, itrs_z_m: 0 };
    const version = insertRow(db, 'site_versions', {
      ...{ site_id: siteId, number: 9, from_tai_s: 1, scale: 'TAI', exact_clock: 1, position_kind: 'itrs', ...place },
      ...{ position_sigma_m: 0, delay_ns: 100, delay_sigma_ns: 1, origin: 'survey', created_at: AT },
    });
    const grounding = insertRow(db, 'groundings', { site_version_id: version, run_id: run, leap_second_table_id: leapSeconds });
    const reading = `2026-03-01T00:00:00.0${at}00001`;
    const trigger = blobRow(
      'triggers',
      {
        ...{
          site_id: siteId,
          series: '',
          sequence: '17',
          variant: 0,
          kind: 'trigger',
          reading,
          reading_form: 'iso',
          sigma: '20',
          amplitude: '1.5',
        },
        ...{ extra: '{"note":"=1+1<b>\\u202e"}', received_at_ms: 5 },
      },
      'content_hash',
    );
    blobRow(
      'events',
      {
        ...{ trigger_id: trigger, network_id: networkId, site_id: siteId, kind: 'trigger', grounding_id: grounding, tai_s: NIGHT_S },
        ...{ ps: at * PS_BETWEEN + 900_000, x_m: 6_378_137, y_m: at * 1_000_000, z_m: 0, reading_sigma_ns: 20, sigma_origin: 'record' },
        ...{ sigma_ns: 20.02, since_epoch_days: 0, amplitude: 1.5, version: 1, change_number: 1 },
      },
      'row_hash',
    );
    return trigger;
  };
  const [first, second] = sites;
  const one = { event: event(first, 0), otherEvent: event(second, 1) };
  const rule = insertRow(db, 'rules', { network_id: networkId, code: 'near2', name: '', is_active: 1, created_at: AT });
  const ruleVersion = insertRow(db, 'rule_versions', {
    ...{ rule_id: rule, number: 1, minimum_fold: 2, sigmas: 3, window_kind: 'light-time', speed_c: 1, margin_ns: 0, created_at: AT },
  });
  const firstPlace = { first_tai_s: NIGHT_S, first_ps: 900_000 };
  const coincidence = blobRow(
    'coincidences',
    {
      ...{ network_id: networkId, rule_version_id: ruleVersion, set_hash: 'c0ffee'.padEnd(64, '0'), state: 'open', is_current: 1, fold: 2 },
      ...{ ...firstPlace, span_ns: 1e7, class: 'timelike', timelike_pairs: 1, spacelike_pairs: 0, undecided_pairs: 0 },
      ...{ nearest_margin_sigma: Infinity, amplitude: 3, touches_gap: 1, since_change: 1 },
    },
    'row_hash',
  );
  for (const [at, trigger] of [one.event, one.otherEvent].entries())
    insertRow(db, 'members', {
      ...{
        coincidence_id: coincidence,
        place: at + 1,
        trigger_id: trigger,
        site_id: sites[at]!,
        event_version: 1,
        is_current: 1,
        ...firstPlace,
      },
    });
  insertRow(db, 'pairs', {
    ...{ coincidence_id: coincidence, a: 1, b: 2, class: 'timelike', dt_ns: 1e7, distance_m: 1e6, sigma_dt_ns: 0, sigma_gap_ns: 0 },
    ...{ margin_sigma: Infinity, reverse_margin_sigma: Infinity, interval_m2: 8e12, proper_time_s: 0.009 },
  });
  const setAside = (siteId: number | null, reason: string, trigger: number | null = null): number =>
    blobRow(
      'set_asides',
      {
        ...{ network_id: networkId, site_id: siteId, series: '', reason, detail: 'wrong', verbatim: '=cmd|<b>', received_at_ms: 5 },
        ...{ state: 'open', trigger_id: trigger },
      },
      'content_hash',
    );
  insertRow(db, 'series', { ...{ site_id: first, series: '', received: 3, stored: 3, first: '17', contiguous: '17' } });
  for (const [from, to] of [
    ['20', '22'],
    ['9007199254740993', '9007199254740995'],
  ] as const)
    insertRow(db, 'held_ranges', { site_id: first, series: '', first_digits: from.length, first: from, last: to, since_ms: 7 });
  insertRow(db, 'live_spans', { site_id: first, from_tai_s: NIGHT_S, from_ps: 0, to_tai_s: NIGHT_S + 10, to_ps: 0, received_at_ms: 5 });
  insertRow(db, 'live_spans', { site_id: first, from_tai_s: NIGHT_S + 20, from_ps: 0, received_at_ms: 5 });
  commit(db, (tx) => noteChange(tx, networkId, 'records', { triggers: [one.event, one.otherEvent] }, 5));
  return {
    ...one,
    coincidence,
    setAside: setAside(first, 'sigma', one.event),
    otherSetAside: setAside(second, 'date'),
    placelessSetAside: setAside(null, 'site'),
  };
}
