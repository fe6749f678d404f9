import { S_PER_DAY } from '#shared/constants';
import { type Instant } from '#shared/time/instant';
import { type LeapSecondTable, taiMinusUtcOnDay } from '#shared/time/leap-seconds';
import { type Ground } from '../ground';
import { leapSecondsInForce } from './leap-seconds-in-force';

const MS_PER_S = 1_000;
const PS_PER_MS = 1e9;

/** A time of the server's own clock (milliseconds since 1970, UTC) on the time axis; no result depends on it. */
export function taiOf(clockMs: number, leapSeconds: LeapSecondTable): Instant {
  const utcS = Math.floor(clockMs / MS_PER_S);
  const taiMinusUtcS = taiMinusUtcOnDay(leapSeconds, Math.floor(utcS / S_PER_DAY)) ?? 0;
  return { taiS: utcS + taiMinusUtcS, ps: (clockMs - utcS * MS_PER_S) * PS_PER_MS };
}

/** The present by the leap-second list in force, to tell what holds now. */
export const presentOf = ({ db, nowMs }: Pick<Ground, 'db' | 'nowMs'>): Instant => taiOf(nowMs(), leapSecondsInForce(db));
