import { S_PER_DAY, L_G, TT_MINUS_TAI_PS } from '../constants';
import { instantOf, PS_PER_S, type Instant } from './instant';
import { type DayTime } from './scales';

/** 1977-01-01T00:00:00 TAI, where TT and TCG both read 1977-01-01T00:00:32.184. Source: IAU 2000 Resolution B1.9. */
const EPOCH_TAI_S = 2557 * S_PER_DAY;

/**
 * Where an instant lies on geocentric coordinate time, TCG: ahead of TT by L_G / (1 - L_G) of the TT since 1977.
 *
 * Only the small difference passes through a double (half a second in 2000), so the result is good to 1 ps for a century and more.
 * Source: IAU 2000 Resolution B1.9, dTT/dTCG = 1 - L_G.
 */
export function tcgAt(instant: Instant): DayTime {
  const sinceEpochS = instant.taiS - EPOCH_TAI_S + instant.ps / PS_PER_S;
  const gainedPs = Math.round(((L_G * PS_PER_S) / (1 - L_G)) * sinceEpochS);
  const { taiS: readS, ps } = instantOf(instant.taiS, instant.ps + TT_MINUS_TAI_PS + gainedPs);
  const day = Math.floor(readS / S_PER_DAY);
  return { day, secondOfDay: readS - day * S_PER_DAY, ps };
}

/** The instant at which TCG reads so; the inverse of {@link tcgAt}, good to 1 ps for a century and more. */
export function instantFromTcg(tcg: DayTime): Instant {
  const read = instantOf(tcg.day * S_PER_DAY + tcg.secondOfDay, tcg.ps - TT_MINUS_TAI_PS);
  const sinceEpochS = read.taiS - EPOCH_TAI_S + read.ps / PS_PER_S;
  return instantOf(read.taiS, read.ps - Math.round(L_G * PS_PER_S * sinceEpochS));
}
