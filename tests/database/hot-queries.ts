/** A query that runs often or over much: the index that serves it, and values that find rows in what `filled.ts` makes. */
export interface HotQuery {
  readonly serves: string;
  /** The indexes that its plan must name, in their order; `PRIMARY KEY` for a table's own. */
  readonly indexes: readonly string[];
  readonly sql: string;
  readonly values: readonly (string | number | Buffer)[];
}

const FIRST_S = 1_772_323_237;
const CURSOR_S = FIRST_S + 300;
const PAGE = 100;
const query = (
  serves: string,
  indexes: string | readonly string[],
  sql: string,
  ...values: readonly (string | number | Buffer)[]
): HotQuery => ({
  serves,
  indexes: typeof indexes === 'string' ? [indexes] : indexes,
  sql,
  values,
});

const EVENTS = 'SELECT trigger_id, site_id, tai_s, ps, x_m, y_m, z_m, sigma_ns, amplitude FROM events';
const SETS = 'SELECT id, set_hash, fold, first_tai_s, first_ps, span_ns, class, nearest_margin_sigma FROM coincidences';
const KEY = 'PRIMARY KEY';

/** A list of coincidences in the order of a column and then of ids, from a cursor on, in both directions. */
const sortedBy = (column: string, index: string, after: number, also = ''): HotQuery[] =>
  (['>', '<'] as const).map((turn) =>
    query(
      `coincidences by ${column} ${turn === '>' ? 'upwards' : 'downwards'}`,
      index,
      `${SETS} WHERE network_id = ? AND is_current = 1${also} AND (${column}, id) ${turn} (?, ?) ORDER BY ${column} ${turn === '>' ? '' : 'DESC'}, id ${turn === '>' ? '' : 'DESC'} LIMIT ${PAGE}`,
      1,
      after,
      50,
    ),
  );

export const HOT_QUERIES: readonly HotQuery[] = [
  // Events.
  query(
    'events from a cursor on',
    'events_by_time',
    `${EVENTS} WHERE network_id = ? AND (tai_s, ps, trigger_id) > (?, ?, ?) ORDER BY tai_s, ps, trigger_id LIMIT ${PAGE}`,
    1,
    CURSOR_S,
    0,
    0,
  ),
  query(
    'events back from a cursor',
    'events_by_time',
    `${EVENTS} WHERE network_id = ? AND (tai_s, ps, trigger_id) < (?, ?, ?) ORDER BY tai_s DESC, ps DESC, trigger_id DESC LIMIT ${PAGE}`,
    1,
    CURSOR_S,
    0,
    0,
  ),
  query(
    'events within a span (desk, finder at the start)',
    'events_by_time',
    `${EVENTS} WHERE network_id = ? AND tai_s BETWEEN ? AND ? ORDER BY tai_s, ps, trigger_id`,
    1,
    CURSOR_S,
    CURSOR_S + 5,
  ),
  query(
    "a site's events from a cursor on",
    'events_of_site',
    `${EVENTS} WHERE site_id = ? AND (tai_s, ps, trigger_id) > (?, ?, ?) ORDER BY tai_s, ps, trigger_id LIMIT ${PAGE}`,
    1,
    CURSOR_S,
    0,
    0,
  ),
  query(
    'how many events a change of a clock concerns',
    'events_of_site',
    'SELECT count(*) FROM events WHERE site_id = ? AND (tai_s, ps) >= (?, ?) AND (tai_s, ps) < (?, ?)',
    1,
    CURSOR_S,
    0,
    CURSOR_S + 60,
    0,
  ),
  query(
    'an event and what it was',
    [KEY, KEY],
    'SELECT e.tai_s, v.tai_s FROM events e LEFT JOIN event_versions v ON v.trigger_id = e.trigger_id WHERE e.trigger_id = ?',
    17,
  ),
  query(
    "a site's rate over a span",
    KEY,
    'SELECT from_tai_s, events FROM event_rates WHERE site_id = ? AND kind = ? AND width_s = ? AND from_tai_s BETWEEN ? AND ? ORDER BY from_tai_s',
    1,
    'trigger',
    3600,
    0,
    CURSOR_S,
  ),
  // Records.
  query(
    'whether a record is known',
    'triggers_identity',
    'SELECT id, variant, content_hash FROM triggers WHERE site_id = ? AND series = ? AND sequence = ?',
    1,
    '',
    '17',
  ),
  query('the records of an intake', 'triggers_of_intake', 'SELECT id FROM triggers WHERE intake_id = ?', 1),
  query(
    'the next set-asides',
    'set_asides_open',
    `SELECT id, reason, verbatim FROM set_asides WHERE network_id = ? AND state = 'open' AND id > ? ORDER BY id LIMIT ${PAGE}`,
    1,
    500,
  ),
  query(
    'the next set-asides of a reason',
    'set_asides_open_by_reason',
    `SELECT id, verbatim FROM set_asides WHERE network_id = ? AND state = 'open' AND reason = ? AND id > ? ORDER BY id LIMIT ${PAGE}`,
    1,
    'sigma',
    500,
  ),
  query(
    "a site's set-asides, newest first",
    'set_asides_of_site',
    `SELECT id, reason FROM set_asides WHERE site_id = ? AND (received_at_ms, id) < (?, ?) ORDER BY received_at_ms DESC, id DESC LIMIT ${PAGE}`,
    1,
    5000,
    5000,
  ),
  query(
    'how many set-asides a site had since an instant',
    'set_asides_of_site',
    'SELECT count(*) FROM set_asides WHERE site_id = ? AND received_at_ms >= ?',
    1,
    999_000,
  ),
  query(
    'set-asides whose time has come',
    'set_asides_to_retry',
    `SELECT id FROM set_asides WHERE state = 'open' AND retry_at_ms IS NOT NULL AND retry_at_ms <= ? ORDER BY retry_at_ms LIMIT ${PAGE}`,
    5000,
  ),
  query(
    'whether a set-aside is known',
    'set_asides_streamed_once',
    'SELECT id FROM set_asides WHERE intake_id IS NULL AND site_id = ? AND content_hash = ? AND reason = ?',
    1,
    Buffer.alloc(32),
    'date',
  ),
  query('what is set aside of a trigger', 'set_asides_of_trigger', 'SELECT id, reason, state FROM set_asides WHERE trigger_id = ?', 1),
  query('the set-asides of an intake', 'set_asides_of_intake', 'SELECT id, line FROM set_asides WHERE intake_id = ? ORDER BY line', 1),
  query(
    'the gaps of a series',
    KEY,
    'SELECT first, last, since_ms FROM held_ranges WHERE site_id = ? AND series = ? ORDER BY first_digits, first',
    1,
    '',
  ),
  query(
    "a site's live spans that touch a span",
    'live_spans_of_site',
    'SELECT from_tai_s, from_ps, to_tai_s, to_ps FROM live_spans WHERE withdrawn_at IS NULL AND site_id = ? AND (from_tai_s, from_ps) <= (?, ?) ORDER BY from_tai_s, from_ps',
    1,
    CURSOR_S,
    0,
  ),
  // Coincidences.
  query(
    'coincidences from a cursor on',
    'coincidences_by_time',
    `${SETS} WHERE network_id = ? AND is_current = 1 AND (first_tai_s, first_ps, id) > (?, ?, ?) ORDER BY first_tai_s, first_ps, id LIMIT ${PAGE}`,
    1,
    CURSOR_S,
    0,
    0,
  ),
  query(
    'coincidences back from a cursor',
    'coincidences_by_time',
    `${SETS} WHERE network_id = ? AND is_current = 1 AND (first_tai_s, first_ps, id) < (?, ?, ?) ORDER BY first_tai_s DESC, first_ps DESC, id DESC LIMIT ${PAGE}`,
    1,
    CURSOR_S,
    0,
    0,
  ),
  query(
    'coincidences of a fold',
    'coincidences_by_fold',
    `${SETS} WHERE network_id = ? AND is_current = 1 AND fold = ? AND (first_tai_s, first_ps, id) > (?, ?, ?) ORDER BY first_tai_s, first_ps, id LIMIT ${PAGE}`,
    1,
    2,
    CURSOR_S,
    0,
    0,
  ),
  query(
    'coincidences by fold, the largest first',
    'coincidences_by_fold',
    `${SETS} WHERE network_id = ? AND is_current = 1 AND (fold, first_tai_s, first_ps, id) < (?, ?, ?, ?) ORDER BY fold DESC, first_tai_s DESC, first_ps DESC, id DESC LIMIT ${PAGE}`,
    1,
    2,
    CURSOR_S,
    0,
    0,
  ),
  query(
    'coincidences of a class',
    'coincidences_by_class',
    `${SETS} WHERE network_id = ? AND is_current = 1 AND class = ? AND (first_tai_s, first_ps, id) > (?, ?, ?) ORDER BY first_tai_s, first_ps, id LIMIT ${PAGE}`,
    1,
    'spacelike',
    CURSOR_S,
    0,
    0,
  ),
  query(
    'coincidences of a rule',
    'coincidences_by_rule',
    `${SETS} WHERE rule_version_id = ? AND is_current = 1 AND (first_tai_s, first_ps, id) > (?, ?, ?) ORDER BY first_tai_s, first_ps, id LIMIT ${PAGE}`,
    1,
    CURSOR_S,
    0,
    0,
  ),
  query(
    'coincidences of a site',
    ['members_of_site', KEY],
    `SELECT c.id, c.fold FROM members m JOIN coincidences c ON c.id = m.coincidence_id WHERE m.site_id = ? AND m.is_current = 1 AND (m.first_tai_s, m.first_ps, m.coincidence_id) > (?, ?, ?) ORDER BY m.first_tai_s, m.first_ps, m.coincidence_id LIMIT ${PAGE}`,
    1,
    CURSOR_S,
    0,
    0,
  ),
  ...sortedBy('nearest_margin_sigma', 'coincidences_by_margin', -3),
  ...sortedBy('span_ns', 'coincidences_by_span', 500),
  ...sortedBy('least_turning_speed_c', 'coincidences_by_turning', 0.4, ' AND least_turning_speed_c IS NOT NULL'),
  ...sortedBy('amplitude', 'coincidences_by_amplitude', 500, ' AND amplitude IS NOT NULL'),
  ...sortedBy('expected_by_chance', 'coincidences_by_chance', 500, ' AND expected_by_chance IS NOT NULL'),
  query(
    'coincidences by the name of the set',
    'coincidences_by_name',
    `${SETS} WHERE network_id = ? AND is_current = 1 AND set_hash >= ? AND set_hash < ? ORDER BY set_hash`,
    1,
    '0'.repeat(10) + '11',
    '0'.repeat(10) + '11g',
  ),
  query(
    'what a coincidence was before',
    'coincidences_former',
    `SELECT id FROM coincidences WHERE network_id = ? AND set_hash = ? AND state = 'former' ORDER BY id`,
    1,
    `${'0'.repeat(11)}a${'0'.repeat(51)}a`,
  ),
  query(
    'coincidences that completeness makes final',
    'coincidences_open',
    `SELECT id FROM coincidences WHERE network_id = ? AND state = 'open' AND (first_tai_s, first_ps) < (?, ?) ORDER BY first_tai_s, first_ps`,
    1,
    CURSOR_S,
    0,
  ),
  query(
    'coincidences in force since a change',
    'coincidences_since',
    `${SETS} WHERE network_id = ? AND is_current = 1 AND since_change > ? ORDER BY since_change LIMIT ${PAGE}`,
    1,
    50,
  ),
  query('what a job has staged', 'coincidences_of_job', `SELECT id FROM coincidences WHERE job_id = ? AND state = 'staged'`, 1),
  query('the members of a coincidence', KEY, 'SELECT place, trigger_id, site_id FROM members WHERE coincidence_id = ? ORDER BY place', 17),
  query('the pairs of a coincidence', KEY, 'SELECT a, b, class, margin_sigma FROM pairs WHERE coincidence_id = ? ORDER BY a, b', 17),
  query(
    'the coincidences of an event',
    ['members_of_trigger', KEY],
    'SELECT c.id, c.state FROM members m JOIN coincidences c ON c.id = m.coincidence_id WHERE m.trigger_id = ? ORDER BY m.coincidence_id',
    17,
  ),
  query('what a coincidence grew into', 'growths_into', 'SELECT coincidence_id FROM growths WHERE grew_from_id = ?', 17),
  // What all share.
  query(
    'changes after a number',
    KEY,
    `SELECT number, kind, body FROM changes WHERE network_id = ? AND number > ? ORDER BY number LIMIT ${PAGE}`,
    1,
    500,
  ),
  query('the audit trail back from a row', KEY, `SELECT seq, action FROM audit WHERE seq < ? ORDER BY seq DESC LIMIT ${PAGE}`, 500),
  query(
    'the audit trail of a network',
    'audit_network',
    `SELECT seq, action FROM audit WHERE network_id = ? AND seq < ? ORDER BY seq DESC LIMIT ${PAGE}`,
    1,
    500,
  ),
  query(
    'the audit trail of a thing',
    'audit_subject',
    `SELECT seq, action FROM audit WHERE subject_kind = ? AND subject_id = ? AND seq < ? ORDER BY seq DESC LIMIT ${PAGE}`,
    'site',
    '1',
    5000,
  ),
  query(
    'the job to take',
    'SCAN jobs USING INDEX jobs_waiting', // of those that wait, in their order, to the first whose time has come
    `SELECT id FROM jobs WHERE state = 'waiting' AND run_after_ms <= ? ORDER BY priority, id LIMIT 1`,
    5000,
  ),
  query(
    'jobs whose lease ran out',
    'jobs_leases',
    `SELECT id FROM jobs WHERE state = 'running' AND lease_until_ms < ? ORDER BY lease_until_ms LIMIT ${PAGE}`,
    5000,
  ),
  query(
    "a network's jobs, newest first",
    'jobs_of_network',
    `SELECT id, kind, state FROM jobs WHERE network_id = ? AND id < ? ORDER BY id DESC LIMIT ${PAGE}`,
    1,
    5000,
  ),
  // Candidates.
  query(
    'candidates of a state',
    'candidates_by_state',
    `SELECT id, title FROM candidates WHERE network_id = ? AND state = ? AND (updated_at, id) < (?, ?) ORDER BY updated_at DESC, id DESC LIMIT ${PAGE}`,
    1,
    'draft',
    '2027',
    0,
  ),
  query(
    'candidates, the last touched first',
    'candidates_by_update',
    `SELECT id, title FROM candidates WHERE network_id = ? AND (updated_at, id) < (?, ?) ORDER BY updated_at DESC, id DESC LIMIT ${PAGE}`,
    1,
    '2027',
    0,
  ),
  query(
    "an analyst's candidates",
    'candidates_of_author',
    `SELECT id, title FROM candidates WHERE author_id = ? AND (updated_at, id) < (?, ?) ORDER BY updated_at DESC, id DESC LIMIT ${PAGE}`,
    1,
    '2027',
    0,
  ),
  query(
    "a reviewer's queue",
    ['reviewers_queue', KEY],
    'SELECT c.id, r.named_at FROM reviewers r CROSS JOIN candidates c ON c.id = r.candidate_id WHERE r.released_at IS NULL AND r.person_id = ? ORDER BY r.named_at LIMIT 100',
    2,
  ),
  query('the comments of a candidate', 'comments_of_candidate', 'SELECT id, body FROM comments WHERE candidate_id = ? ORDER BY id', 17),
  query(
    'snapshots that rest on an event',
    'snapshot_events_of_trigger',
    'SELECT snapshot_id FROM snapshot_events WHERE trigger_id = ?',
    17,
  ),
  query(
    'candidates that hold an event',
    'candidate_events_of_trigger',
    'SELECT candidate_id FROM candidate_events WHERE trigger_id = ?',
    17,
  ),
  query(
    'candidates that hold a coincidence',
    'candidate_sets_by_hash',
    'SELECT candidate_id FROM candidate_sets WHERE set_hash = ?',
    '0'.repeat(64),
  ),
  query(
    'the next delivery to a webhook',
    'webhook_deliveries_waiting',
    `SELECT id FROM webhook_deliveries WHERE state = 'waiting' AND next_at_ms <= ? ORDER BY next_at_ms LIMIT ${PAGE}`,
    5000,
  ),
  // What is in force.
  query(
    'a clock record',
    'clock_segments_in_force',
    'SELECT * FROM clock_segments WHERE superseded_at IS NULL AND clock_id = ? ORDER BY from_tai_s, from_ps',
    1,
  ),
  query(
    "a site's versions in force",
    'site_versions_in_force',
    'SELECT * FROM site_versions WHERE superseded_at IS NULL AND site_id = ? ORDER BY from_tai_s, from_ps',
    1,
  ),
];
