import { type CoincidenceQuery, type CoincidenceSort } from '#shared/contract/coincidence-routes';
import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { type Order } from '#shared/contract/list-query';
import { behind, orderedBy, timeBounds, type Position } from '../search/keyset';
import { joined, part, type Query } from '../search/query';
import { type Narrowing, type Search } from '../search/run-search';

/** A row of the list of coincidences. */
export interface CoincidenceRow {
  readonly id: number;
  readonly setHash: string;
  readonly ruleVersionId: number;
  readonly state: CoincidenceBrief['state'];
  readonly fold: number;
  readonly taiS: number;
  readonly ps: number;
  readonly spanNs: number;
  readonly class: CoincidenceBrief['class'];
  readonly timelike: number;
  readonly spacelike: number;
  readonly undecided: number;
  readonly nearestMarginSigma: number;
  readonly leastTurningSpeedC: number | null;
  readonly amplitude: number | null;
  readonly expectedByChance: number | null;
  readonly touchesGap: number;
  readonly sinceChange: number | null;
}

export const COINCIDENCE_COLUMNS = `c.id, c.set_hash AS setHash, c.rule_version_id AS ruleVersionId, c.state, c.fold, c.first_tai_s AS taiS, c.first_ps AS ps,
  c.span_ns AS spanNs, c.class, c.timelike_pairs AS timelike, c.spacelike_pairs AS spacelike, c.undecided_pairs AS undecided,
  c.nearest_margin_sigma AS nearestMarginSigma, c.least_turning_speed_c AS leastTurningSpeedC, c.amplitude, c.expected_by_chance AS expectedByChance,
  c.touches_gap AS touchesGap, c.since_change AS sinceChange`;

/** What a list of coincidences is kept to: the query's filters, looked up. */
export interface CoincidencesAsked extends Pick<CoincidenceQuery, 'from' | 'to' | 'class' | 'leastFold' | 'state' | 'name'> {
  readonly networkId: number;
  readonly siteIds: readonly number[];
  /** The versions of the rule by which any is in force; undefined for all rules. */
  readonly ruleVersionIds: readonly number[] | undefined;
  readonly sort: CoincidenceSort;
  readonly order: Order;
  readonly after?: Position | undefined;
  readonly limit: number;
}

const TIME = ['c.first_tai_s', 'c.first_ps', 'c.id'] as const;

interface Sorting {
  readonly columns: readonly string[];
  readonly index: string;
  readonly positionOf: (row: CoincidenceRow) => Position;
  /** Rows without a value stand in no such list. */
  readonly without?: string;
}

const byColumn = (column: string, index: string, valueOf: (row: CoincidenceRow) => number | null, mayBeNull: boolean): Sorting => ({
  columns: [`c.${column}`, 'c.id'],
  index,
  positionOf: (row) => [valueOf(row) ?? NaN, row.id],
  ...(mayBeNull && { without: `c.${column} IS NOT NULL` }),
});

/** The orders that the list can be in, each with its index. */
export const COINCIDENCE_SORTINGS: Readonly<Record<CoincidenceSort, Sorting>> = {
  time: { columns: TIME, index: 'coincidences_by_time', positionOf: ({ taiS, ps, id }) => [taiS, ps, id] },
  fold: {
    columns: ['c.fold', ...TIME],
    index: 'coincidences_by_fold',
    positionOf: ({ fold, taiS, ps, id }) => [fold, taiS, ps, id],
  },
  margin: byColumn('nearest_margin_sigma', 'coincidences_by_margin', (row) => row.nearestMarginSigma, false),
  span: byColumn('span_ns', 'coincidences_by_span', (row) => row.spanNs, false),
  turning: byColumn('least_turning_speed_c', 'coincidences_by_turning', (row) => row.leastTurningSpeedC, true),
  amplitude: byColumn('amplitude', 'coincidences_by_amplitude', (row) => row.amplitude, true),
};

/** What a row must be; which filters an index has answered by itself is told by their names. */
interface Filter {
  readonly name: string;
  readonly is: Query;
}

/** A way to some of the rows: by an index, whose rows are in time order where `time` names its columns. */
interface Way {
  readonly from: string;
  readonly where: Query;
  readonly answers: readonly string[];
  readonly time?: readonly [string, string, string];
}

const spanFilter = ({ from, to }: CoincidencesAsked, time: readonly [string, string, string] = TIME): Query[] =>
  timeBounds(time, 'up', { from, to });

function filtersOf(asked: CoincidencesAsked): Filter[] {
  const { class: wanted, leastFold = 2, state, name, siteIds, ruleVersionIds } = asked;
  const span = spanFilter(asked);
  const filters: (Filter | false)[] = [
    span.length > 0 && { name: 'span', is: joined(span, ' AND ') },
    wanted !== undefined && { name: 'class', is: part('c.class = ?', wanted) },
    leastFold > 2 && { name: 'fold', is: part('c.fold >= ?', leastFold) },
    state !== undefined && { name: 'state', is: part('c.state = ?', state) },
    name !== undefined && { name: 'name', is: part('c.set_hash >= ? AND c.set_hash < ?', name, `${name}g`) },
    ruleVersionIds !== undefined && {
      name: 'rule',
      is: part('c.rule_version_id IN (SELECT value FROM json_each(?))', JSON.stringify(ruleVersionIds)),
    },
    ...siteIds.map((id) => ({
      name: `site ${id}`,
      is: part('EXISTS (SELECT 1 FROM members n WHERE n.coincidence_id = c.id AND n.site_id = ?)', id),
    })),
  ];
  return filters.filter((filter) => filter !== false);
}

/** The ways that begin with a filter that is asked for, those that leave the fewest rows first, as far as that can be said beforehand. */
function waysOf({ networkId, siteIds, ruleVersionIds, class: wanted, leastFold = 2, state, name }: CoincidencesAsked): Way[] {
  const current = (index: string, also: string, ...values: readonly (string | number)[]) => ({
    from: `coincidences c INDEXED BY ${index}`,
    where: part(`c.network_id = ? AND c.is_current = 1${also}`, networkId, ...values),
  });
  const [version] = ruleVersionIds ?? [];
  const ways: (Way | false)[] = [
    name !== undefined && {
      ...current('coincidences_by_name', ' AND c.set_hash >= ? AND c.set_hash < ?', name, `${name}g`),
      answers: ['name'],
    },
    ...siteIds.map((id) => ({
      from: 'members m INDEXED BY members_of_site CROSS JOIN coincidences c ON c.id = m.coincidence_id',
      where: part('m.site_id = ? AND m.is_current = 1', id),
      answers: [`site ${id}`],
      time: ['m.first_tai_s', 'm.first_ps', 'm.coincidence_id'] as const,
    })),
    state === 'open' && {
      from: 'coincidences c INDEXED BY coincidences_open',
      where: part(`c.network_id = ? AND c.state = 'open'`, networkId),
      answers: ['state'],
      time: TIME,
    },
    version !== undefined &&
      ruleVersionIds?.length === 1 && {
        from: 'coincidences c INDEXED BY coincidences_by_rule',
        where: part('c.rule_version_id = ? AND c.is_current = 1', version),
        answers: ['rule'],
        time: TIME,
      },
    wanted !== undefined && { ...current('coincidences_by_class', ' AND c.class = ?', wanted), answers: ['class'], time: TIME },
    leastFold > 2 && { ...current('coincidences_by_fold', ' AND c.fold >= ?', leastFold), answers: ['fold'] },
    { ...current('coincidences_by_time', ''), answers: [], time: TIME },
  ];
  return ways.filter((way) => way !== false);
}

const select = (way: Way, conditions: readonly Query[], tail: string, limit: number): Query => {
  const where = joined(conditions, ' AND ');
  return part(`SELECT ${COINCIDENCE_COLUMNS} FROM ${way.from} WHERE ${where.sql} ${tail} LIMIT ?`, ...where.values, limit + 1);
};

/** Each row looks at the time before anything else. */
const IN_TIME = part('in_time() = 1');

/** A list as one index answers it, in the order that is asked for; undefined where a filter is left that the index does not answer. */
function walkOf(asked: CoincidencesAsked, heavy: boolean): Query | undefined {
  const { networkId, sort, order, after, limit, leastFold = 2 } = asked;
  const sorting = COINCIDENCE_SORTINGS[sort];
  const filters = filtersOf(asked);
  const left = (answered: readonly string[]): Query[] => filters.filter(({ name }) => !answered.includes(name)).map(({ is }) => is);
  if (sort === 'time') {
    const way = waysOf(asked).find(({ time }) => time !== undefined);
    if (way?.time === undefined) return undefined;
    const rest = left([...way.answers, 'span']);
    if (rest.length > 0 && !heavy) return undefined;
    const bounds = timeBounds(way.time, order, asked);
    return select(way, [way.where, ...bounds, ...(heavy ? [IN_TIME] : []), ...rest], orderedBy(way.time, order), limit);
  }
  const rest = left(sort === 'fold' ? ['fold'] : []);
  if (rest.length > 0 && !heavy) return undefined;
  const where = [part('c.network_id = ? AND c.is_current = 1', networkId)];
  if (sorting.without !== undefined) where.push(part(sorting.without));
  // One bound below, one above: a position is the nearer one.
  if (sort === 'fold' && leastFold > 2 && !(after && order === 'up')) where.push(part('c.fold >= ?', leastFold));
  if (after) where.push(behind(sorting.columns, order, after));
  const way = { from: `coincidences c INDEXED BY ${sorting.index}`, where: where[0] ?? part('1'), answers: [] };
  return select(way, [...where, ...(heavy ? [IN_TIME] : []), ...rest], orderedBy(sorting.columns, order), limit);
}

/** The rows of a way, counted and sorted by themselves. */
function narrowingOf(asked: CoincidencesAsked, way: Way): Narrowing {
  const { sort, order, after, limit } = asked;
  const { columns, without } = COINCIDENCE_SORTINGS[sort];
  const span = way.time === undefined ? [] : spanFilter(asked, way.time);
  const counted = joined([way.where, ...span], ' AND ');
  const rest = filtersOf(asked).filter(({ name }) => !way.answers.includes(name) && !(name === 'span' && way.time !== undefined));
  const conditions = [way.where, ...span, IN_TIME, ...(without === undefined ? [] : [part(without)]), ...rest.map(({ is }) => is)];
  if (after)
    conditions.push(
      behind(
        columns.map((column) => `+${column}`),
        order,
        after,
      ),
    );
  return {
    count: part(`SELECT count(*) FROM (SELECT 1 FROM ${way.from} WHERE ${counted.sql} LIMIT ?)`, ...counted.values),
    rows: select(way, conditions, orderedBy(columns, order), limit),
  };
}

/** How a list of coincidences is found: by one query at once, or by a search, where no index answers all that is asked. */
export type CoincidenceList = { readonly kind: 'query'; readonly query: Query } | { readonly kind: 'search'; readonly search: Search };

/**
 * Finds the way to a part of the list.
 *
 * @param asked filters, sort, and where to go on
 * @returns a query that costs what it returns; or a search with its narrowings (a way by each filter, and by the span) and the walk
 */
export function coincidenceList(asked: CoincidencesAsked): CoincidenceList {
  const query = walkOf(asked, false);
  if (query) return { kind: 'query', query };
  const walk = walkOf(asked, true);
  if (!walk) throw new Error('a list of coincidences without a way');
  const ways = waysOf(asked).filter(({ answers, time }) => answers.length > 0 || (time !== undefined && spanFilter(asked).length > 0));
  return { kind: 'search', search: { narrowings: ways.map((way) => narrowingOf(asked, way)), walk } };
}

/** The coincidences in force of an event: as few as it has, sorted by themselves. */
export function coincidencesOfEventQuery({
  eventId,
  after,
  order,
  limit,
}: Pick<CoincidencesAsked, 'after' | 'order' | 'limit'> & { readonly eventId: number }): Query {
  const way = {
    from: 'members m INDEXED BY members_of_trigger CROSS JOIN coincidences c ON c.id = m.coincidence_id',
    where: part('m.trigger_id = ? AND c.is_current = 1', eventId),
    answers: [],
  };
  return select(way, [way.where, ...(after ? [behind(TIME, order, after)] : [])], orderedBy(TIME, order), limit);
}

/** The versions of a rule by which any coincidence is in force. */
export const ruleVersionsQuery = (networkId: number, ruleId: number): Query =>
  part(
    `SELECT v.id FROM rules r JOIN rule_versions v ON v.rule_id = r.id WHERE r.id = ? AND r.network_id = ?
       AND EXISTS (SELECT 1 FROM coincidences c INDEXED BY coincidences_by_rule WHERE c.rule_version_id = v.id AND c.is_current = 1)`,
    ruleId,
    networkId,
  );
