import { MOST_RECORD_BYTES, READING_FORMS, type INTERVAL_CLASSES } from '#schema/words';
import { type Kind } from '#shared/reconcile/record';
import { coincidenceHash, type HashedSet, type PairNumbers } from '../coincidences/set-numbers';
import { type Db } from '../db';
import { contentHash, eventRowHash, type HashedEvent, type RowGround } from '../ingest/hashes';
import { parseVerbatim } from '../ingest/record-form';
import { recordOf, type TriggerRow, type TriggerTexts } from '../ingest/trigger-rows';

/** Rows that are read before whoever asks may do something else. */
const ROWS_AT_ONCE = 500;

/** A text that was cut to its limit is shorter than it by less than this. */
const CUT_BYTES = 8;

export type HashedTable = 'triggers' | 'set_asides' | 'events' | 'event_versions' | 'coincidences';

/** A row that is not what was written. */
export interface RowFault {
  readonly table: HashedTable;
  /** The trigger of an event, and of a former one its version too. */
  readonly id: string;
  readonly text: string;
}

/** A bounded piece of the check. */
export interface RowStep {
  readonly table: HashedTable;
  readonly rows: number;
  readonly faults: readonly RowFault[];
}

type Rows<T extends readonly number[]> = (
  after: T,
  most: number,
) => { readonly last: T | undefined; readonly step: Omit<RowStep, 'table'> };

/**
 * Computes the hashes of all records and results anew from their rows, and names those that differ: half of single flipped bits pass
 * `integrity_check`, which knows nothing of what values should be. What no hash is over is not looked at: when a row came, which change brought
 * or ended it, what was decided of a set-aside, and the form of lines that came by file and could not be read.
 *
 * @param db any connection; no statement stays open between two steps, so that others may ask it, and a writer may write meanwhile
 * @param rowsAtOnce how many rows a step reads at most; of a coincidence all members and pairs beside
 * @returns the steps, in the order of tables and rows
 * @throws SqliteError where the file is damaged such that its rows cannot be read
 */
export function* checkRowHashes(db: Db, rowsAtOnce = ROWS_AT_ONCE): Generator<RowStep, void> {
  yield* stepsOf('triggers', [0], triggers(db), rowsAtOnce);
  yield* stepsOf('set_asides', [0], setAsides(db), rowsAtOnce);
  yield* stepsOf('events', [0], events(db), rowsAtOnce);
  yield* stepsOf('event_versions', [0, 0], eventVersions(db), rowsAtOnce);
  yield* stepsOf('coincidences', [0], coincidences(db), rowsAtOnce);
}

function* stepsOf<T extends readonly number[]>(table: HashedTable, from: T, rows: Rows<T>, most: number): Generator<RowStep, void> {
  for (let after: T | undefined = from; after;) {
    const { last, step }: ReturnType<Rows<T>> = rows(after, most);
    if (step.rows > 0) yield { table, ...step };
    after = step.rows < most ? undefined : last;
  }
}

/** Judges rows one by one; a row that cannot even be read is a fault of it. */
function judge<Row, T extends readonly number[]>(
  table: HashedTable,
  rows: readonly Row[],
  { idOf, textOf }: { readonly idOf: (row: Row) => T; readonly textOf: (row: Row) => string | undefined },
): ReturnType<Rows<T>> {
  const faults: RowFault[] = [];
  for (const row of rows) {
    const text = textOf(row);
    if (text !== undefined) faults.push({ table, id: idOf(row).join(':'), text });
  }
  const last = rows.at(-1);
  return { last: last && idOf(last), step: { rows: rows.length, faults } };
}

const DIFFERS = 'is not what was written';
const FORMS: readonly string[] = READING_FORMS;

type WrittenTrigger = TriggerTexts & Pick<TriggerRow, 'id' | 'extra' | 'contentHash'>;

function triggers({ $client: client }: Db): Rows<readonly [number]> {
  const read = client.prepare<[number, number], WrittenTrigger>(
    `SELECT id, series, sequence, kind, reading, reading_form AS readingForm, sigma, amplitude, extra, content_hash AS contentHash
     FROM triggers WHERE id > ? ORDER BY id LIMIT ?`,
  );
  const textOf = (row: WrittenTrigger): string | undefined => {
    try {
      // A form that is none is read as the usual one, and so hashed as it.
      return FORMS.includes(row.readingForm) && contentHash(recordOf(row)).equals(row.contentHash) ? undefined : DIFFERS;
    } catch {
      return 'holds further columns that cannot be read';
    }
  };
  return ([after], most) => judge('triggers', read.all(after, most), { idOf: ({ id }) => [id] as const, textOf });
}

interface WrittenAside {
  readonly id: number;
  readonly verbatim: string;
  readonly contentHash: Buffer;
}

function setAsides({ $client: client }: Db): Rows<readonly [number]> {
  const read = client.prepare<[number, number], WrittenAside>(
    'SELECT id, verbatim, content_hash AS contentHash FROM set_asides WHERE id > ? AND intake_id IS NULL ORDER BY id LIMIT ?',
  );
  const textOf = ({ verbatim, contentHash: kept }: WrittenAside): string | undefined => {
    const record = parseVerbatim(verbatim);
    if (record) return contentHash(record).equals(kept) ? undefined : DIFFERS;
    // Of a record that was longer than records may be, the beginning alone is kept.
    return Buffer.byteLength(verbatim) > MOST_RECORD_BYTES - CUT_BYTES ? undefined : 'holds a record that cannot be read';
  };
  return ([after], most) => judge('set_asides', read.all(after, most), { idOf: ({ id }) => [id] as const, textOf });
}

type WrittenEvent = Omit<HashedEvent, 'amplitude'> & RowGround & { readonly amplitude: number | null; readonly rowHash: Buffer };

const EVENT_COLUMNS = `e.trigger_id AS triggerId, e.grounding_id AS groundingId, e.tai_s AS taiS, e.ps, e.x_m AS xM, e.y_m AS yM, e.z_m AS zM,
  e.reading_sigma_ns AS readingSigmaNs, e.sigma_origin AS sigmaSource, e.sigma_ns AS sigmaNs, e.since_epoch_days AS sinceEpochDays, e.amplitude,
  e.version AS eventVersion, e.change_number AS changeNumber, e.row_hash AS rowHash`;

const eventText = (row: WrittenEvent): string | undefined =>
  eventRowHash({ ...row, amplitude: row.amplitude ?? NaN }, row).equals(row.rowHash) ? undefined : DIFFERS;

function events({ $client: client }: Db): Rows<readonly [number]> {
  const read = client.prepare<[number, number], WrittenEvent>(
    `SELECT ${EVENT_COLUMNS}, e.network_id AS networkId, e.site_id AS siteId, e.kind FROM events AS e
     WHERE e.trigger_id > ? ORDER BY e.trigger_id LIMIT ?`,
  );
  return ([after], most) => judge('events', read.all(after, most), { idOf: ({ triggerId }) => [triggerId] as const, textOf: eventText });
}

/** A former event's network, site and kind are its trigger's. */
function eventVersions({ $client: client }: Db): Rows<readonly [number, number]> {
  const read = client.prepare<[number, number, number], WrittenEvent & { readonly kind: Kind }>(
    `SELECT ${EVENT_COLUMNS}, s.network_id AS networkId, t.site_id AS siteId, t.kind FROM event_versions AS e
     JOIN triggers AS t ON t.id = e.trigger_id JOIN sites AS s ON s.id = t.site_id
     WHERE (e.trigger_id, e.version) > (?, ?) ORDER BY e.trigger_id, e.version LIMIT ?`,
  );
  return ([trigger, version], most) =>
    judge('event_versions', read.all(trigger, version, most), {
      idOf: ({ triggerId, eventVersion }) => [triggerId, eventVersion] as const,
      textOf: eventText,
    });
}

interface WrittenSet {
  readonly id: number;
  readonly versionId: number;
  readonly setHash: string;
  readonly fold: number;
  readonly isCurrent: number;
  readonly taiS: number;
  readonly ps: number;
  readonly spanNs: number;
  readonly class: HashedSet['class'];
  readonly timelike: number;
  readonly spacelike: number;
  readonly undecided: number;
  readonly nearestMarginSigma: number;
  readonly leastTurningSpeedC: number | null;
  readonly amplitude: number | null;
  readonly rowHash: Buffer;
}

interface WrittenMember {
  readonly place: number;
  readonly triggerId: number;
  readonly siteId: number;
  readonly eventVersion: number;
  readonly isCurrent: number;
  readonly taiS: number;
  readonly ps: number;
}

interface WrittenPair extends Omit<PairNumbers, 'class' | 'toward'> {
  readonly class: (typeof INTERVAL_CLASSES)[number];
  readonly x: number | null;
  readonly y: number | null;
  readonly z: number | null;
}

const towardOf = ({ x, y, z }: WrittenPair): PairNumbers['toward'] => (x === null || y === null || z === null ? undefined : [x, y, z]);

function coincidences({ $client: client }: Db): Rows<readonly [number]> {
  const read = client.prepare<[number, number], WrittenSet>(
    `SELECT id, rule_version_id AS versionId, set_hash AS setHash, fold, is_current AS isCurrent, first_tai_s AS taiS, first_ps AS ps,
       span_ns AS spanNs, class, timelike_pairs AS timelike, spacelike_pairs AS spacelike, undecided_pairs AS undecided,
       nearest_margin_sigma AS nearestMarginSigma, least_turning_speed_c AS leastTurningSpeedC, amplitude, row_hash AS rowHash
     FROM coincidences WHERE id > ? ORDER BY id LIMIT ?`,
  );
  const membersOf = client.prepare<[number], WrittenMember>(
    `SELECT place, trigger_id AS triggerId, site_id AS siteId, event_version AS eventVersion, is_current AS isCurrent, first_tai_s AS taiS,
       first_ps AS ps FROM members WHERE coincidence_id = ? ORDER BY place`,
  );
  const pairsOf = client.prepare<[number], WrittenPair>(
    `SELECT a, b, class, dt_ns AS dtNs, distance_m AS distanceM, sigma_dt_ns AS sigmaDtNs, sigma_gap_ns AS sigmaGapNs,
       margin_sigma AS marginSigma, reverse_margin_sigma AS reverseMarginSigma, interval_m2 AS intervalM2, proper_time_s AS properTimeS,
       proper_distance_m AS properDistanceM, turning_speed_c AS turningSpeedC, turning_sigma_c AS turningSigmaC, toward_x AS x, toward_y AS y,
       toward_z AS z FROM pairs WHERE coincidence_id = ? ORDER BY a, b`,
  );
  const textOf = (row: WrittenSet): string | undefined => {
    const members = membersOf.all(row.id);
    if (members.length !== row.fold) return `has ${members.length} members where its fold is ${row.fold}`;
    const { taiS, ps, timelike, spacelike, undecided, isCurrent } = row;
    // Members repeat what their set says.
    const isOf = (member: WrittenMember, at: number): boolean =>
      member.place === at + 1 && member.taiS === taiS && member.ps === ps && member.isCurrent === isCurrent;
    if (!members.every(isOf)) return 'has a member that says otherwise than the set';
    const pairs = pairsOf.all(row.id).map((pair) => ({ ...pair, toward: towardOf(pair) }));
    const set: HashedSet = { ...row, events: members, first: { taiS, ps }, counts: { timelike, spacelike, undecided }, pairs };
    return coincidenceHash(row.versionId, set).equals(row.rowHash) ? undefined : DIFFERS;
  };
  return ([after], most) => judge('coincidences', read.all(after, most), { idOf: ({ id }) => [id] as const, textOf });
}
