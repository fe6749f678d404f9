import { type Instant } from '#shared/time/instant';
import { type LeapSecondTable, taiMinusUtcOnDay } from '#shared/time/leap-seconds';

const MS_PER_S = 1_000;
const PS_PER_MS = 1e9;
const S_PER_DAY = 86_400;

/** The server's own clock (milliseconds since 1970, UTC) as an instant, to tell what holds at present; no result depends on it. */
export function presentInstant(table: LeapSecondTable, nowMs: number): Instant {
  const utcS = Math.floor(nowMs / MS_PER_S);
  const taiMinusUtcS = taiMinusUtcOnDay(table, Math.floor(utcS / S_PER_DAY)) ?? 0;
  return { taiS: utcS + taiMinusUtcS, ps: (nowMs - utcS * MS_PER_S) * PS_PER_MS };
}
