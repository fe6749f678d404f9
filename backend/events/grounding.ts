import { type Grounding } from '#shared/contract/event-routes';
import { type Db } from '../db';
import { part, rowsOf, type Query } from '../search/query';

type SiteVersion = Grounding['site'];
type Segment = NonNullable<Grounding['segment']>;
type Reference = NonNullable<Grounding['reference']>;
type Orientation = NonNullable<Grounding['orientation']>;

interface IdsRow {
  readonly siteVersionId: number;
  readonly segmentId: number | null;
  readonly referenceVersionId: number | null;
  readonly run: string;
  readonly leapSecondTableId: number;
  readonly orientationTableId: number | null;
}

type SiteRow = Omit<SiteVersion, 'itrsM'> & { readonly x: number | null; readonly y: number | null; readonly z: number | null };
type SegmentRow = Omit<Segment, 'from' | 'at'> & Record<'fromTaiS' | 'fromPs' | 'atTaiS' | 'atPs', number>;
type InForce<T extends { isInForce: boolean }> = Omit<T, 'isInForce'> & { readonly isInForce: number };

const STATED = 'v.id, v.number, v.created_at AS createdAt, v.superseded_at AS supersededAt';

const siteQuery = (id: number): Query =>
  part(
    `SELECT ${STATED}, v.scale, v.delay_ns AS delayNs, v.delay_sigma_ns AS delaySigmaNs, v.itrs_x_m AS x, v.itrs_y_m AS y, v.itrs_z_m AS z,
       v.position_sigma_m AS positionSigmaM, v.origin
     FROM site_versions v WHERE v.id = ?`,
    id,
  );

const segmentQuery = (id: number): Query =>
  part(
    `SELECT ${STATED}, c.code AS clock, v.segment, v.from_tai_s AS fromTaiS, v.from_ps AS fromPs, v.at_tai_s AS atTaiS, v.at_ps AS atPs,
       v.offset_ns AS offsetNs, v.offset_sigma_ns AS offsetSigmaNs, v.rate_ns_per_day AS rateNsPerDay, v.rate_sigma_ns_per_day AS rateSigmaNsPerDay,
       v.covariance_ns2_per_day AS covarianceNs2PerDay, v.origin
     FROM clock_segments v JOIN clocks c ON c.id = v.clock_id WHERE v.id = ?`,
    id,
  );

const referenceQuery = (id: number): Query =>
  part(
    `SELECT ${STATED}, r.code, v.sigma_ns AS sigmaNs FROM time_reference_versions v JOIN time_references r ON r.id = v.reference_id WHERE v.id = ?`,
    id,
  );

/** What events rest on, in full, whether it is in force or not. */
export function groundingOf(db: Pick<Db, '$client'>, id: number): Grounding {
  const one = <Row>([row]: readonly Row[]): Row => {
    if (row === undefined) throw new Error(`the grounding ${id} rests on what is not there`);
    return row;
  };
  const ids = one(
    rowsOf<IdsRow>(
      db,
      part(
        `SELECT g.site_version_id AS siteVersionId, g.segment_id AS segmentId, g.reference_version_id AS referenceVersionId, r.code AS run,
         g.leap_second_table_id AS leapSecondTableId, g.orientation_table_id AS orientationTableId
       FROM groundings g JOIN runs r ON r.id = g.run_id WHERE g.id = ?`,
        id,
      ),
    ),
  );
  const { x, y, z, ...site } = one(rowsOf<SiteRow>(db, siteQuery(ids.siteVersionId)));
  const leapSeconds = one(
    rowsOf<InForce<Grounding['leapSeconds']>>(
      db,
      part(
        'SELECT id, updated_tai_s AS updatedTaiS, expires_tai_s AS expiresTaiS, is_in_force AS isInForce FROM leap_second_tables WHERE id = ?',
        ids.leapSecondTableId,
      ),
    ),
  );
  const orientationQuery = (tableId: number): Query =>
    part('SELECT id, first_mjd AS firstMjd, last_mjd AS lastMjd, is_in_force AS isInForce FROM orientation_tables WHERE id = ?', tableId);
  return {
    site: { ...site, itrsM: x === null || y === null || z === null ? null : [x, y, z] },
    segment: ids.segmentId === null ? null : segmentOf(one(rowsOf<SegmentRow>(db, segmentQuery(ids.segmentId)))),
    reference: ids.referenceVersionId === null ? null : one(rowsOf<Reference>(db, referenceQuery(ids.referenceVersionId))),
    run: ids.run,
    leapSeconds: { ...leapSeconds, isInForce: leapSeconds.isInForce === 1 },
    orientation:
      ids.orientationTableId === null ? null : inForce(one(rowsOf<InForce<Orientation>>(db, orientationQuery(ids.orientationTableId)))),
  };
}

const inForce = (row: InForce<Orientation>): Orientation => ({ ...row, isInForce: row.isInForce === 1 });

const segmentOf = ({ fromTaiS, fromPs, atTaiS, atPs, ...segment }: SegmentRow): Segment => ({
  ...segment,
  from: { taiS: fromTaiS, ps: fromPs },
  at: { taiS: atTaiS, ps: atPs },
});
