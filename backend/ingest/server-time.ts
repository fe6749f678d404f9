import { S_PER_DAY } from '#shared/constants';
import { type Instant } from '#shared/time/instant';
import { type LeapSecondTable, utcDayAt } from '#shared/time/leap-seconds';
import { taiOf } from '../tables/present';

/**
 * How far behind a site's event the server's own clock may be, s. What lies farther in its future waits, and is tried again when its time has
 * come: a server's clock is seldom off by a second, and a site's log that is a minute ahead of it is off itself.
 */
export const FUTURE_BOUND_S = 60;

const MS_PER_S = 1_000;
const PS_PER_MS = 1e9;
/** The last instant that a time of the server's clock may name: the end of the year 9999. */
const LAST_MS = 253_402_300_799_999;

/** The latest instant that is not in the server's far future. */
export function latestAt(nowMs: number, leapSeconds: LeapSecondTable): Instant {
  const now = taiOf(nowMs, leapSeconds);
  return { taiS: now.taiS + FUTURE_BOUND_S, ps: now.ps };
}

/** When an instant is no longer in the server's far future, ms since 1970; null for never within four digits of a year. */
export function dueMs(instant: Instant, leapSeconds: LeapSecondTable): number | null {
  const utc = utcDayAt(leapSeconds, instant.taiS - FUTURE_BOUND_S);
  if (!utc) return 0;
  const ms = (utc.day * S_PER_DAY + utc.secondOfDay) * MS_PER_S + Math.ceil(instant.ps / PS_PER_MS);
  return ms <= LAST_MS ? ms : null;
}
