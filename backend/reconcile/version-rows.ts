import { type Vec3 } from '#shared/relativity/vector';
import { type ClockSegment, EXACT_CLOCK } from '#shared/time/clock-record';
import { type Instant } from '#shared/time/instant';
import { SCALES, type Scale } from '#shared/time/scales';
import { type Db } from '../db';

/** A site's version as it was stated. */
export interface SiteVersion {
  readonly id: number;
  readonly siteId: number;
  readonly from: Instant;
  /** undefined for a platform's own time, which has no readings on the ground. */
  readonly scale: Scale | undefined;
  /** null for a clock that was declared exact. */
  readonly clockId: number | null;
  /** undefined for a platform. */
  readonly itrsM: Vec3 | undefined;
  readonly positionSigmaM: number;
  readonly delayNs: number;
  readonly delaySigmaNs: number;
  readonly readingSigmaNs: number | undefined;
}

/** A segment of a clock record with what its error rests on. */
export interface StatedSegment {
  /** null for the one segment of an exact clock. */
  readonly id: number | null;
  readonly segment: ClockSegment;
  /** The version of its reference that is in force; null for none. */
  readonly referenceVersionId: number | null;
}

/** The record of a clock that was declared exact. */
export const EXACT_SEGMENTS: readonly StatedSegment[] = EXACT_CLOCK.map((segment) => ({ id: null, segment, referenceVersionId: null }));

interface VersionRow {
  id: number;
  site_id: number;
  from_tai_s: number;
  from_ps: number;
  scale: string;
  clock_id: number | null;
  itrs_x_m: number | null;
  itrs_y_m: number | null;
  itrs_z_m: number | null;
  position_sigma_m: number;
  delay_ns: number;
  delay_sigma_ns: number;
  reading_sigma_ns: number | null;
}

const VERSION_COLUMNS = `id, site_id, from_tai_s, from_ps, scale, clock_id, itrs_x_m, itrs_y_m, itrs_z_m, position_sigma_m, delay_ns,
  delay_sigma_ns, reading_sigma_ns`;

function versionOf(row: VersionRow): SiteVersion {
  const { itrs_x_m: x, itrs_y_m: y, itrs_z_m: z } = row;
  return {
    id: row.id,
    siteId: row.site_id,
    from: { taiS: row.from_tai_s, ps: row.from_ps },
    scale: SCALES.find((scale) => scale === row.scale),
    clockId: row.clock_id,
    itrsM: x === null || y === null || z === null ? undefined : [x, y, z],
    positionSigmaM: row.position_sigma_m,
    delayNs: row.delay_ns,
    delaySigmaNs: row.delay_sigma_ns,
    readingSigmaNs: row.reading_sigma_ns ?? undefined,
  };
}

/** The versions of a network's sites that are in force: by site, then by the instant from which they hold. */
export function versionsInForce(db: Db, networkId: number): readonly SiteVersion[] {
  const query = `SELECT ${VERSION_COLUMNS} FROM site_versions
    WHERE superseded_at IS NULL AND site_id IN (SELECT id FROM sites WHERE network_id = ?) ORDER BY site_id, from_tai_s, from_ps`;
  return db.$client.prepare<[number], VersionRow>(query).all(networkId).map(versionOf);
}

/** A version, in force or not. */
export function versionById(db: Db, id: number): SiteVersion {
  const row = db.$client.prepare<[number], VersionRow>(`SELECT ${VERSION_COLUMNS} FROM site_versions WHERE id = ?`).get(id);
  if (!row) throw new Error(`there is no site version ${id}`);
  return versionOf(row);
}

interface SegmentRow {
  id: number;
  clock_id: number;
  from_tai_s: number;
  from_ps: number;
  at_tai_s: number;
  at_ps: number;
  offset_ns: number;
  offset_sigma_ns: number;
  rate_ns_per_day: number;
  rate_sigma_ns_per_day: number;
  covariance_ns2_per_day: number;
  reference_version_id: number | null;
}

const SEGMENT_COLUMNS = `s.id, s.clock_id, s.from_tai_s, s.from_ps, s.at_tai_s, s.at_ps, s.offset_ns, s.offset_sigma_ns, s.rate_ns_per_day,
  s.rate_sigma_ns_per_day, s.covariance_ns2_per_day`;

const segmentOf = (row: SegmentRow): StatedSegment => ({
  id: row.id,
  segment: {
    from: { taiS: row.from_tai_s, ps: row.from_ps },
    at: { taiS: row.at_tai_s, ps: row.at_ps },
    offsetNs: row.offset_ns,
    offsetSigmaNs: row.offset_sigma_ns,
    rateNsPerDay: row.rate_ns_per_day,
    rateSigmaNsPerDay: row.rate_sigma_ns_per_day,
    covarianceNs2PerDay: row.covariance_ns2_per_day,
  },
  referenceVersionId: row.reference_version_id,
});

/** The clock records of a network that are in force, by clock: each sorted by the instant from which its segments hold. */
export function clockRecordsInForce(db: Db, networkId: number): ReadonlyMap<number, readonly StatedSegment[]> {
  const query = `SELECT ${SEGMENT_COLUMNS}, r.id AS reference_version_id FROM clock_segments AS s
    LEFT JOIN time_reference_versions AS r ON r.reference_id = s.reference_id AND r.superseded_at IS NULL
    WHERE s.superseded_at IS NULL AND s.clock_id IN (SELECT id FROM clocks WHERE network_id = ?) ORDER BY s.clock_id, s.from_tai_s, s.from_ps`;
  const records = new Map<number, StatedSegment[]>();
  for (const row of db.$client.prepare<[number], SegmentRow>(query).all(networkId)) {
    const record = records.get(row.clock_id);
    if (record) record.push(segmentOf(row));
    else records.set(row.clock_id, [segmentOf(row)]);
  }
  return records;
}

/** A segment, in force or not, with a version of its reference. */
export function segmentById(db: Db, id: number, referenceVersionId: number | null): StatedSegment {
  const query = `SELECT ${SEGMENT_COLUMNS}, ? AS reference_version_id FROM clock_segments AS s WHERE s.id = ?`;
  const row = db.$client.prepare<[number | null, number], SegmentRow>(query).get(referenceVersionId, id);
  if (!row) throw new Error(`there is no clock segment ${id}`);
  return segmentOf(row);
}

/** One standard error of a version of a reference, ns. */
export function referenceSigmaNs(db: Db, versionId: number): number {
  const sigma = db.$client.prepare<[number], number>('SELECT sigma_ns FROM time_reference_versions WHERE id = ?').pluck().get(versionId);
  if (sigma === undefined) throw new Error(`there is no version ${versionId} of a time reference`);
  return sigma;
}
