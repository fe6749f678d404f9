import { emptyEvents, type ErrorTables, type EventColumns } from '#shared/relativity/events';
import { type Vec3 } from '#shared/relativity/vector';

/** One event as a row; what is left out is 0, the clock exact. */
export interface EventRow {
  readonly taiS?: number;
  readonly ps?: number;
  readonly placeM?: Vec3;
  readonly site?: number;
  readonly readingSigmaNs?: number;
  readonly segment?: number;
  readonly sinceEpochDays?: number;
}

/** The columns of a few events, in the order given; `sigmaNs` stays 0. */
export function eventColumns(rows: readonly EventRow[]): EventColumns {
  const events = { ...emptyEvents(rows.length), count: rows.length };
  for (const [i, row] of rows.entries()) {
    events.taiS[i] = row.taiS ?? 0;
    events.ps[i] = row.ps ?? 0;
    [events.xM[i], events.yM[i], events.zM[i]] = row.placeM ?? [0, 0, 0];
    events.site[i] = row.site ?? 0;
    events.readingSigmaNs[i] = row.readingSigmaNs ?? 0;
    events.segment[i] = row.segment ?? -1;
    events.sinceEpochDays[i] = row.sinceEpochDays ?? 0;
  }
  return events;
}

/** The tables of sites that have no error of their own and clocks that are exact. */
export function errorFree(siteCount: number): ErrorTables {
  return {
    siteDelaySigmaNs: new Float64Array(siteCount),
    sitePositionSigmaM: new Float64Array(siteCount),
    segmentOffsetSigmaNs: new Float64Array(),
    segmentRateSigmaNsPerDay: new Float64Array(),
    segmentCovarianceNs2PerDay: new Float64Array(),
    segmentReference: new Int32Array(),
    referenceSigmaNs: new Float64Array(),
  };
}
