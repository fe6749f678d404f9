import { type LiveEvent } from '#shared/coincidence/held-events';
import { KINDS, type Kind, SIGMA_SOURCES } from '#shared/reconcile/record';
import { prepareClock, type PreparedSegment, restOfDaysSinceAt } from '#shared/time/correction';
import { type LeapSecondTable } from '#shared/time/leap-seconds';
import { createReadingParser, type Reading } from '#shared/time/reading';
import { readTaiPair } from '#shared/time/tai-pair';
import { type Db } from '../db';
import { type ErrorRows } from './error-rows';
import { leapSecondsOf } from './tables-in-force';
import { segmentById, type SiteVersion, versionById } from './version-rows';

/** An event that stands, as the finder takes it, and what else is known of it. */
export interface StoredEvent extends LiveEvent {
  readonly triggerId: number;
  readonly siteId: number;
  /** Row of the site's delay and place in the error tables. */
  readonly version: number;
  readonly kind: Kind;
  readonly sigmaSource: (typeof SIGMA_SOURCES)[number];
  /** NaN where the site gave none. */
  readonly amplitude: number;
  /** 1, 2, 3, ...: how often it was computed. */
  readonly eventVersion: number;
}

/** A row of `events` with the texts of its trigger; `EVENT_QUERY` reads it. */
export interface EventRow {
  trigger_id: number;
  site_id: number;
  series: string;
  sequence: string;
  kind: string;
  reading: string;
  reading_form: string;
  grounding_id: number;
  tai_s: number;
  ps: number;
  x_m: number;
  y_m: number;
  z_m: number;
  reading_sigma_ns: number;
  sigma_origin: string;
  sigma_ns: number;
  since_epoch_days: number;
  amplitude: number | null;
  version: number;
}

/** Reads rows of events that stand, as `EventRow`; a condition on `e` (events) or `t` (triggers) follows. */
export const EVENT_QUERY = `SELECT e.trigger_id, e.site_id, t.series, t.sequence, e.kind, t.reading, t.reading_form, e.grounding_id, e.tai_s,
  e.ps, e.x_m, e.y_m, e.z_m, e.reading_sigma_ns, e.sigma_origin, e.sigma_ns, e.since_epoch_days, e.amplitude, e.version
  FROM events AS e JOIN triggers AS t ON t.id = e.trigger_id`;

interface Ground {
  readonly versionRow: number;
  readonly segmentRow: number;
  readonly prepared: PreparedSegment | undefined;
  readonly read: (text: string, form: string) => Reading | undefined;
}

interface GroundingRow {
  site_version_id: number;
  segment_id: number | null;
  reference_version_id: number | null;
  leap_second_table_id: number;
}

function readerOf({ scale }: SiteVersion, leapSeconds: LeapSecondTable): Ground['read'] {
  const parse = scale && createReadingParser(scale, leapSeconds);
  return (text, form) => {
    const reading = form === 'tai-pair' ? readTaiPair(text) : parse?.(text);
    return typeof reading === 'string' ? undefined : reading;
  };
}

/**
 * Makes the function that turns rows of the database into events, in whatever versions they rest on.
 *
 * @param db any connection
 * @param siteRowOf row of a site by its id
 * @param errors where the events' errors get their rows
 */
export function createEventReader(db: Db, siteRowOf: (siteId: number) => number, errors: ErrorRows): (row: EventRow) => StoredEvent {
  const grounds = new Map<number, Ground>();
  const groundOf = (id: number): Ground => {
    const known = grounds.get(id);
    if (known) return known;
    const query = 'SELECT site_version_id, segment_id, reference_version_id, leap_second_table_id FROM groundings WHERE id = ?';
    const row = db.$client.prepare<[number], GroundingRow>(query).get(id);
    if (!row) throw new Error(`there is no grounding ${id}`);
    const version = versionById(db, row.site_version_id);
    const stated = row.segment_id === null ? undefined : segmentById(db, row.segment_id, row.reference_version_id);
    const ground: Ground = {
      versionRow: errors.versionRow(version),
      segmentRow: stated ? errors.segmentRow(stated) : -1,
      prepared: stated && prepareClock([stated.segment], version.delayNs)[0],
      read: readerOf(version, leapSecondsOf(db, row.leap_second_table_id)),
    };
    grounds.set(id, ground);
    return ground;
  };
  return (row) => {
    const { versionRow, segmentRow, prepared, read } = groundOf(row.grounding_id);
    // The rest of the double is in no column: it is what the reading says, computed again.
    const reading = prepared && read(row.reading, row.reading_form);
    return {
      triggerId: row.trigger_id,
      siteId: row.site_id,
      site: siteRowOf(row.site_id),
      series: row.series,
      sequence: row.sequence,
      kind: KINDS.find((kind) => kind === row.kind) ?? 'test',
      taiS: row.tai_s,
      ps: row.ps,
      xM: row.x_m,
      yM: row.y_m,
      zM: row.z_m,
      version: versionRow,
      readingSigmaNs: row.reading_sigma_ns,
      sigmaSource: SIGMA_SOURCES.find((source) => source === row.sigma_origin) ?? 'record',
      sigmaNs: row.sigma_ns,
      segment: segmentRow,
      sinceEpochDays: row.since_epoch_days,
      sinceEpochRestDays: prepared && reading ? restOfDaysSinceAt(prepared, reading, row.since_epoch_days) : 0,
      amplitude: row.amplitude ?? NaN,
      eventVersion: row.version,
    };
  };
}
