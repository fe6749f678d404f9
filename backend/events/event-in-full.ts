import { type Correction, type EventInFull, type EventVersion, type Grounding } from '#shared/contract/event-routes';
import { type Place } from '#shared/contract/roles';
import { emptyVersionedEvents } from '#shared/coincidence/held-events';
import { errorTerms } from '#shared/relativity/time-error';
import { nanosecondsOf } from '#shared/time/instant';
import { createReadingParser } from '#shared/time/reading';
import { SCALES } from '#shared/time/scales';
import { readTaiPair } from '#shared/time/tai-pair';
import { type Db } from '../db';
import { ErrorRows } from '../reconcile/error-rows';
import { eventName } from '../reconcile/event-columns';
import { leapSecondsOf } from '../reconcile/tables-in-force';
import { segmentById, versionById } from '../reconcile/version-rows';
import { part, rowsOf, type Query } from '../search/query';
import { groundingOf } from './grounding';

interface RecordRow extends Omit<EventInFull['record'], 'extra'> {
  readonly id: number;
  readonly networkId: number;
  readonly siteId: number;
  readonly site: string;
  readonly kind: EventInFull['kind'];
  readonly extra: string | null;
}

interface VersionRow {
  readonly groundingId: number;
  readonly siteVersionId: number;
  readonly segmentId: number | null;
  readonly referenceVersionId: number | null;
  readonly leapSecondTableId: number;
  readonly taiS: number;
  readonly ps: number;
  readonly xM: number;
  readonly yM: number;
  readonly zM: number;
  readonly readingSigmaNs: number;
  readonly sigmaOrigin: EventVersion['sigmaOrigin'];
  readonly sigmaNs: number;
  readonly sinceEpochDays: number;
  readonly amplitude: number | null;
  readonly version: number;
  readonly changeNumber: number;
  readonly endedChange: number | null;
}

/** At which site an event's record came. */
export function placeOfEvent(db: Pick<Db, '$client'>, eventId: number): Place | undefined {
  const [row] = rowsOf<{ siteId: number; networkId: number }>(
    db,
    part('SELECT s.id AS siteId, s.network_id AS networkId FROM triggers t JOIN sites s ON s.id = t.site_id WHERE t.id = ?', eventId),
  );
  return row && { kind: 'site', ...row };
}

const recordQuery = (id: number): Query =>
  part(
    `SELECT t.id, s.network_id AS networkId, t.site_id AS siteId, s.code AS site, t.kind, t.series, t.sequence, t.variant, t.reading,
       t.reading_form AS readingForm, t.sigma, t.amplitude, t.extra, t.received_at_ms AS receivedAtMs, t.intake_id AS intakeId,
       t.mended_from_id AS mendedFromId
     FROM triggers t JOIN sites s ON s.id = t.site_id WHERE t.id = ?`,
    id,
  );

/** What an event is, and what it was, the newest first. */
export const eventVersionsQuery = (id: number): Query => {
  const columns = `grounding_id AS groundingId, g.site_version_id AS siteVersionId, g.segment_id AS segmentId, g.reference_version_id AS referenceVersionId,
    g.leap_second_table_id AS leapSecondTableId, tai_s AS taiS, ps, x_m AS xM, y_m AS yM, z_m AS zM, reading_sigma_ns AS readingSigmaNs,
    sigma_origin AS sigmaOrigin, sigma_ns AS sigmaNs, since_epoch_days AS sinceEpochDays, amplitude, version, change_number AS changeNumber`;
  return part(
    `SELECT ${columns}, NULL AS endedChange FROM events e JOIN groundings g ON g.id = e.grounding_id WHERE e.trigger_id = ?
     UNION ALL
     SELECT ${columns}, v.ended_change AS endedChange FROM event_versions v JOIN groundings g ON g.id = v.grounding_id WHERE v.trigger_id = ?
     ORDER BY version DESC`,
    id,
    id,
  );
};

/** The independent terms of the time error of one event, by the versions that it rests on. */
function termsOf(db: Db, row: VersionRow): EventVersion['terms'] {
  const errors = new ErrorRows(db);
  const columns = { ...emptyVersionedEvents(1), count: 1 };
  columns.version[0] = errors.versionRow(versionById(db, row.siteVersionId));
  columns.segment[0] = row.segmentId === null ? -1 : errors.segmentRow(segmentById(db, row.segmentId, row.referenceVersionId));
  columns.readingSigmaNs[0] = row.readingSigmaNs;
  columns.sinceEpochDays[0] = row.sinceEpochDays;
  return [...errorTerms(columns, errors.tables(), 0)];
}

/** From what the site wrote to the event, by the numbers that it was computed with. */
function correctionOf(db: Db, row: VersionRow, { record, rests }: { record: RecordRow; rests: Grounding }): Correction | null {
  const scale = SCALES.find((known) => known === rests.site.scale);
  const readAt =
    record.readingForm === 'tai-pair'
      ? readTaiPair(record.reading)
      : record.readingForm === 'iso' && scale !== undefined
        ? createReadingParser(scale, leapSecondsOf(db, row.leapSecondTableId))(record.reading)
        : 'reading-form';
  if (typeof readAt === 'string') return null;
  const { offsetNs = 0, rateNsPerDay = 0 } = rests.segment ?? {};
  return {
    written: record.reading,
    scale: rests.site.scale,
    readAt: { taiS: readAt.taiS, ps: readAt.ps },
    delayNs: rests.site.delayNs,
    offsetNs,
    sinceEpochDays: row.sinceEpochDays,
    driftNs: rateNsPerDay * row.sinceEpochDays,
    takenOffNs: nanosecondsOf(readAt.taiS - row.taiS, readAt.ps - row.ps),
    at: { taiS: row.taiS, ps: row.ps },
    itrsM: rests.site.itrsM,
    placeM: [row.xM, row.yM, row.zM],
  };
}

function versionOf(db: Db, record: RecordRow, row: VersionRow): EventVersion {
  const rests = groundingOf(db, row.groundingId);
  return {
    version: row.version,
    at: { taiS: row.taiS, ps: row.ps },
    placeM: [row.xM, row.yM, row.zM],
    sigmaNs: row.sigmaNs,
    sigmaOrigin: row.sigmaOrigin,
    amplitude: row.amplitude,
    changeNumber: row.changeNumber,
    endedChange: row.endedChange,
    terms: termsOf(db, row),
    correction: correctionOf(db, row, { record, rests }),
    grounding: rests,
  };
}

/** The further columns of a record. */
export const extraOf = (json: string | null): Record<string, string> => (json === null ? {} : (JSON.parse(json) as Record<string, string>)); // a CHECK holds it to an object, and ingest writes texts alone

/** One event with everything that it rests on; undefined when there is no such record. */
export function eventInFull(db: Db, eventId: number): EventInFull | undefined {
  const [row] = rowsOf<RecordRow>(db, recordQuery(eventId));
  if (!row) return undefined;
  const { id, networkId, siteId, site, kind, extra, ...record } = row;
  const versions = rowsOf<VersionRow>(db, eventVersionsQuery(eventId)).map((one) => versionOf(db, row, one));
  return {
    id,
    networkId,
    name: eventName(site, record),
    siteId,
    site,
    kind,
    record: { ...record, extra: extraOf(extra) },
    current: versions.find(({ endedChange }) => endedChange === null) ?? null,
    former: versions.filter(({ endedChange }) => endedChange !== null),
  };
}
