/**
 * Events as columns, one row an event: what the finder, the pairs and the screens all compute from.
 *
 * Rows are in the order of events (time, then site, series and sequence) wherever a function says 'sorted'. All columns have at least
 * `count` rows. Places are in the geocentric inertial frame (GCRS axes).
 */
export interface EventColumns {
  readonly count: number;
  /** Whole TAI seconds since 1970-01-01T00:00:00 TAI. */
  readonly taiS: Float64Array;
  /** Picoseconds within the second, whole, in [0, 1e12). */
  readonly ps: Float64Array;
  readonly xM: Float64Array;
  readonly yM: Float64Array;
  readonly zM: Float64Array;
  /** Row of the site; of its delay and place in `ErrorTables` too, unless `version` says another. */
  readonly site: Uint16Array;
  /** Row of the site's delay and place in `ErrorTables`, where a site may have had several; absent where each has one. */
  readonly version?: Uint16Array;
  /** One standard error of the reading alone. */
  readonly readingSigmaNs: Float64Array;
  /** All time errors of the event together, see `timeVarianceNs2`. */
  readonly sigmaNs: Float64Array;
  /** Row of the clock segment in `ErrorTables`, or -1 for a clock that is exact. */
  readonly segment: Int32Array;
  /** Days of 86,400 s from the segment's epoch to the reading less its delay; 0 for an exact clock. */
  readonly sinceEpochDays: Float64Array;
  /** What the double of `sinceEpochDays` leaves out, days: two readings a microsecond apart would else share half their digits. */
  readonly sinceEpochRestDays: Float64Array;
}

/** What the events' errors refer to: one row a site (or a version of one), a clock segment, a reference. */
export interface ErrorTables {
  readonly siteDelaySigmaNs: Float64Array;
  /** Standard error of each axis. */
  readonly sitePositionSigmaM: Float64Array;
  readonly segmentOffsetSigmaNs: Float64Array;
  readonly segmentRateSigmaNsPerDay: Float64Array;
  /** Covariance of offset and rate. */
  readonly segmentCovarianceNs2PerDay: Float64Array;
  /** Row of the reference that the segment was compared with, or -1. */
  readonly segmentReference: Int32Array;
  readonly referenceSigmaNs: Float64Array;
}

/** Room for `capacity` events, all zero; segments -1. */
export function emptyEvents(capacity: number): EventColumns {
  return {
    count: 0,
    taiS: new Float64Array(capacity),
    ps: new Float64Array(capacity),
    xM: new Float64Array(capacity),
    yM: new Float64Array(capacity),
    zM: new Float64Array(capacity),
    site: new Uint16Array(capacity),
    readingSigmaNs: new Float64Array(capacity),
    sigmaNs: new Float64Array(capacity),
    segment: new Int32Array(capacity).fill(-1),
    sinceEpochDays: new Float64Array(capacity),
    sinceEpochRestDays: new Float64Array(capacity),
  };
}
