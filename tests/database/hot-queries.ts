import { mendedQuery } from '../../backend/set-asides/set-aside-contents';
import { type CoincidenceSort } from '#shared/contract/coincidence-routes';
import { candidateListQuery, type CandidatesAsked } from '../../backend/candidates/candidate-list';
import { standingSnapshotsQuery } from '../../backend/candidates/out-of-date';
import { reviewQueueQuery } from '../../backend/candidates/review-queue';
import { membersQuery, pairsQuery } from '../../backend/coincidences/coincidence-brief';
import {
  formerQuery,
  fullMembersQuery,
  fullPairsQuery,
  grewFromQuery,
  grewIntoQuery,
} from '../../backend/coincidences/coincidence-in-full';
import {
  COINCIDENCE_SORTINGS,
  coincidenceList,
  coincidencesOfEventQuery,
  ruleVersionsQuery,
  type CoincidencesAsked,
} from '../../backend/coincidences/coincidence-list';
import { eventVersionsQuery } from '../../backend/events/event-in-full';
import { eventListQuery, eventNamesQuery } from '../../backend/events/event-list';
import { coincidencesSinceQuery, eventsOfChangeQuery } from '../../backend/live/changes-read';
import { latestEventsQuery, ratesQuery } from '../../backend/live/site-states';
import { type Query } from '../../backend/search/query';
import { setAsideListQuery, withoutClock } from '../../backend/set-asides/set-aside-list';
import { changesQuery } from '../../backend/streams/change-list';
import { liveSpansQuery, spanBeforeQuery } from '../../backend/streams/live-span-list';
import { heldRangesQuery, seriesQuery } from '../../backend/streams/series-list';

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

const KEY = 'PRIMARY KEY';

/** A query of the product as it is, with its values. */
const ofProduct = (serves: string, indexes: string | readonly string[], { sql, values }: Query): HotQuery =>
  query(serves, indexes, sql, ...values);

const RATE_MINUTE_S = Math.floor(FIRST_S / 60) * 60;
const CURSOR = { taiS: CURSOR_S, ps: 0 };
const EVENTS_ASKED = { networkId: 1, siteIds: undefined, order: 'up', limit: PAGE } as const;
const SETS_ASKED = { networkId: 1, siteIds: [], ruleVersionIds: undefined, sort: 'time', order: 'up', limit: PAGE } as const;
const SET_ASIDES_ASKED = { networkId: 1, siteIds: undefined, state: 'open', reason: undefined, order: 'up', limit: PAGE } as const;
const AFTER_TIME = [CURSOR_S, 0, 0];

/** A list of candidates from a cursor on, with its authors' names and how many events count. */
const candidatesListed = (serves: string, index: string, asked: Partial<CandidatesAsked>): HotQuery =>
  ofProduct(
    serves,
    [index, KEY, 'CORRELATED SCALAR SUBQUERY 1', KEY],
    candidateListQuery({ networkId: 1, order: 'down', limit: PAGE, after: [Date.parse('2027-01-01T00:00:00.000Z'), 0], ...asked }),
  );

/** A list of coincidences that one index answers. */
function sets(serves: string, indexes: string | readonly string[], asked: Partial<CoincidencesAsked>): HotQuery {
  const list = coincidenceList({ ...SETS_ASKED, ...asked });
  if (list.kind === 'search') throw new Error(`${serves} is a search`);
  return ofProduct(serves, indexes, list.query);
}

/** A sort of the list from a cursor on, both ways. */
const sortedBy = (sort: CoincidenceSort, ...after: readonly number[]): HotQuery[] =>
  (['up', 'down'] as const).map((order) =>
    sets(`coincidences by ${sort}, ${order}wards`, COINCIDENCE_SORTINGS[sort].index, { sort, order, after }),
  );

/** The ways of a search: what is counted and sorted by itself, and the walk where that is too much. `in_time()` is the search thread's. */
function searched(serves: string, asked: Partial<CoincidencesAsked>, indexes: readonly string[], walked: string): HotQuery[] {
  const list = coincidenceList({ ...SETS_ASKED, ...asked });
  if (list.kind === 'query') throw new Error(`${serves} is no search`);
  const counted = list.search.narrowings.map(({ count: { sql, values } }, at) =>
    ofProduct(`${serves}: counting by ${indexes[at] ?? ''}`, ['CO-ROUTINE (subquery-1)', indexes[at] ?? '', 'SCAN (subquery-1)'], {
      sql,
      values: [...values, PAGE],
    }),
  );
  return [...counted, ofProduct(`${serves}: walking`, walked, withoutClock(list.search.walk))];
}

/** Sites in time order, merged. */
const merged = (...sites: readonly string[]): readonly string[] => [
  'MERGE (UNION ALL)',
  ...sites.flatMap((index, at) => [at === 0 ? 'LEFT' : 'RIGHT', index]),
];

export const HOT_QUERIES: readonly HotQuery[] = [
  // Events.
  ofProduct('events from a cursor on', 'events_by_time', eventListQuery({ ...EVENTS_ASKED, after: AFTER_TIME })),
  ofProduct('events back from a cursor', 'events_by_time', eventListQuery({ ...EVENTS_ASKED, after: AFTER_TIME, order: 'down' })),
  ofProduct(
    'events from a cursor on, within a span',
    'events_by_time',
    eventListQuery({ ...EVENTS_ASKED, from: { taiS: FIRST_S, ps: 0 }, to: { taiS: CURSOR_S + 5, ps: 0 }, after: AFTER_TIME }),
  ),
  ofProduct("a site's events from a cursor on", 'events_of_site', eventListQuery({ ...EVENTS_ASKED, siteIds: [1], after: AFTER_TIME })),
  ofProduct(
    "two sites' events from a cursor on",
    merged('events_of_site', 'events_of_site'),
    eventListQuery({ ...EVENTS_ASKED, siteIds: [1, 2], after: AFTER_TIME }),
  ),
  query(
    'events within a span (desk, finder at the start)',
    'events_by_time',
    'SELECT trigger_id, site_id, tai_s, ps FROM events WHERE network_id = ? AND tai_s BETWEEN ? AND ? ORDER BY tai_s, ps, trigger_id',
    1,
    CURSOR_S,
    CURSOR_S + 5,
  ),
  ofProduct('what events are called', ['SCAN i VIRTUAL TABLE INDEX 1:', KEY, KEY], eventNamesQuery([17, 18])),
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
  ofProduct('an event and what it was', ['MERGE (UNION ALL)', 'LEFT', KEY, KEY, 'RIGHT', KEY, KEY], eventVersionsQuery(17)),
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
  ofProduct('the next set-asides', 'set_asides_open', setAsideListQuery({ ...SET_ASIDES_ASKED, after: [500] }).query),
  ofProduct(
    'the next set-asides of a reason',
    'set_asides_open_by_reason',
    setAsideListQuery({ ...SET_ASIDES_ASKED, reason: 'sigma', after: [500] }).query,
  ),
  ofProduct(
    "a site's set-asides, newest first",
    'set_asides_of_site',
    setAsideListQuery({ ...SET_ASIDES_ASKED, siteIds: [1], state: 'all', order: 'down', after: [5000, 5000] }).query,
  ),
  ofProduct(
    "two sites' set-asides",
    merged('set_asides_of_site', 'set_asides_of_site'),
    setAsideListQuery({ ...SET_ASIDES_ASKED, siteIds: [1, 2], state: 'all', after: [5000, 5000] }).query,
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
  ofProduct('the gaps of a series', KEY, heldRangesQuery(1, '', '17', PAGE)),
  ofProduct('the series of a site', KEY, seriesQuery(1, '', { order: 'up', limit: PAGE })),
  ofProduct(
    "a site's live spans within a span",
    'live_spans_of_site',
    liveSpansQuery(1, { from: CURSOR, to: { taiS: CURSOR_S + 60, ps: 0 } }, { order: 'up', limit: PAGE }),
  ),
  ofProduct("a site's live span before an instant", 'live_spans_of_site', spanBeforeQuery(1, CURSOR)),
  ofProduct('what a set-aside was mended to', 'triggers_mended', mendedQuery(1)),
  // Coincidences.
  sets('coincidences from a cursor on', 'coincidences_by_time', { after: AFTER_TIME }),
  sets('coincidences back from a cursor', 'coincidences_by_time', { after: AFTER_TIME, order: 'down' }),
  sets('coincidences within a span', 'coincidences_by_time', {
    after: AFTER_TIME,
    from: { taiS: FIRST_S, ps: 0 },
    to: { taiS: CURSOR_S + 9, ps: 0 },
  }),
  sets('coincidences of a fold and above, the largest first', 'coincidences_by_fold', { sort: 'fold', order: 'down', leastFold: 3 }),
  ...sortedBy('fold', 2, ...AFTER_TIME),
  sets('coincidences of a class', 'coincidences_by_class', { class: 'spacelike', after: AFTER_TIME }),
  sets('coincidences of a rule', 'coincidences_by_rule', { ruleVersionIds: [1], after: AFTER_TIME }),
  sets('coincidences of a site', ['members_of_site', KEY], { siteIds: [1], after: AFTER_TIME }),
  ...sortedBy('margin', -3, 50),
  ...sortedBy('span', 500, 50),
  ...sortedBy('turning', 0.4, 50),
  ...sortedBy('amplitude', 500, 50),
  ...searched(
    'coincidences of a class by margin',
    { sort: 'margin', class: 'timelike' },
    ['coincidences_by_class'],
    'coincidences_by_margin',
  ),
  ...searched(
    'coincidences of a name, open, by span',
    { sort: 'span', name: '0000000000', state: 'open' },
    ['coincidences_by_name', 'coincidences_open'],
    'coincidences_by_span',
  ),
  ...searched(
    'coincidences of a fold and above, by time',
    { leastFold: 3, from: CURSOR },
    ['coincidences_by_fold', 'coincidences_by_time'],
    'coincidences_by_time',
  ),
  ofProduct('the versions of a rule in use', [KEY, 'rule_versions_number', 'coincidences_by_rule'], ruleVersionsQuery(1, 1)),
  ofProduct('what a coincidence was before', 'coincidences_former', formerQuery(1, `${'0'.repeat(11)}a${'0'.repeat(51)}a`)),
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
    `SELECT id, set_hash FROM coincidences WHERE network_id = ? AND is_current = 1 AND since_change > ? ORDER BY since_change LIMIT ${PAGE}`,
    1,
    50,
  ),
  query('what a job has staged', 'coincidences_of_job', `SELECT id FROM coincidences WHERE job_id = ? AND state = 'staged'`, 1),
  ofProduct(
    'the members of coincidences',
    ['SCAN i VIRTUAL TABLE INDEX 1:', KEY, KEY, KEY, KEY, KEY, 'USE TEMP B-TREE FOR ORDER BY'],
    membersQuery([17, 18]),
  ),
  ofProduct('the pairs of coincidences', ['SCAN i VIRTUAL TABLE INDEX 1:', KEY, 'USE TEMP B-TREE FOR ORDER BY'], pairsQuery([17, 18])),
  ofProduct('the members of a coincidence in full', [KEY, KEY, KEY, KEY, KEY], fullMembersQuery(17)),
  ofProduct('the pairs of a coincidence in full', KEY, fullPairsQuery(17)),
  ofProduct(
    'the coincidences of an event',
    ['members_of_trigger', KEY, 'USE TEMP B-TREE FOR ORDER BY'],
    coincidencesOfEventQuery({ eventId: 17, order: 'up', limit: PAGE }),
  ),
  ofProduct('what a coincidence grew from', [KEY, KEY, 'USE TEMP B-TREE FOR ORDER BY'], grewFromQuery(17)),
  ofProduct('what a coincidence grew into', ['growths_into', KEY, 'USE TEMP B-TREE FOR ORDER BY'], grewIntoQuery(17)),
  // What all share.
  ofProduct('changes after a number', KEY, changesQuery(1, 500, PAGE)),
  ofProduct('the events that a change brought', KEY, eventsOfChangeQuery(1, 1, { from: 1, to: 1_000 })),
  ofProduct('the coincidences that changes brought', 'coincidences_since', coincidencesSinceQuery(1, 1, 1_000)),
  ofProduct(
    "the latest event of each of a network's sites",
    ['sites_code', KEY, 'CORRELATED SCALAR SUBQUERY 1', 'events_of_site', KEY],
    latestEventsQuery(1),
  ),
  ofProduct("how many events a network's sites had in a minute", ['sites_code', KEY], ratesQuery(1, RATE_MINUTE_S)),
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
  candidatesListed('candidates of a state', 'candidates_by_state', { state: 'draft' }),
  candidatesListed('candidates, the last touched first', 'candidates_by_update', {}),
  candidatesListed("an analyst's candidates", 'candidates_of_author', { authorId: 2 }),
  ofProduct(
    "a reviewer's queue",
    [
      ...['reviewers_queue', KEY, 'LIST SUBQUERY 2', 'SCAN json_each VIRTUAL TABLE INDEX 1:', 'CREATE BLOOM FILTER', KEY],
      ...['CORRELATED SCALAR SUBQUERY 1', 'signatures_standing'],
    ],
    reviewQueueQuery(2, [1], 0, PAGE),
  ),
  ofProduct(
    'candidates whose snapshot rests on what is another now',
    ['candidates_by_state', 'CORRELATED SCALAR SUBQUERY 1', KEY, KEY],
    standingSnapshotsQuery(1, 'changed'),
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
