import { S_PER_DAY, TAI_MINUS_GPS_S } from '../constants';
import { type Instant } from './instant';

const WEEK_S = 7 * S_PER_DAY;
/** 1980-01-06T00:00:00 GPS in TAI seconds since 1970. Source: IS-GPS-200. */
const GPS_EPOCH_TAI_S = 3657 * S_PER_DAY + TAI_MINUS_GPS_S;

/** GPS time as receivers give it: full weeks since 1980-01-06 (not folded into 10 or 13 bits) and time of week. */
export interface GpsWeekTime {
  readonly week: number;
  /** Whole seconds since the week began, 0 to 604,799. */
  readonly secondOfWeek: number;
  readonly ps: number;
}

/** GPS week and second of week of an instant; the week is negative before 1980-01-06. Exact. Source: IS-GPS-200. */
export function gpsWeekAt(instant: Instant): GpsWeekTime {
  const gpsS = instant.taiS - GPS_EPOCH_TAI_S;
  const week = Math.floor(gpsS / WEEK_S);
  return { week, secondOfWeek: gpsS - week * WEEK_S, ps: instant.ps };
}
