import { S_PER_DAY } from '../constants';

/** Turns of the Earth in one day of UT1, less one. Source: IAU 2000 Resolution B1.8; IERS Conventions 2010, equation 5.15. */
const TURNS_BEYOND_ONE = 0.00273781191135448;

/** Mean rate of the Earth rotation angle while UT1 runs as TAI does, radians per second. */
export const EARTH_ROTATION_RAD_S = (2 * Math.PI * (1 + TURNS_BEYOND_ONE)) / S_PER_DAY;

/** Earth rotation angle at 2000-01-01T12:00:00 UT1, turns. Source: as above. */
const TURNS_AT_J2000 = 0.779057273264;

/** Noon of 2000-01-01 in seconds since 1970-01-01T00:00:00 of the same scale. */
const J2000_S = 946_728_000;

// The upper part has 28 bits, so that its product with a whole number of days below 2^25 is exact and its whole turns drop out cleanly.
const UPPER_BITS = 2 ** 36;
const BEYOND_ONE_UPPER = Math.round(TURNS_BEYOND_ONE * UPPER_BITS) / UPPER_BITS;
const BEYOND_ONE_LOWER = TURNS_BEYOND_ONE - BEYOND_ONE_UPPER;

/**
 * The Earth rotation angle: from the celestial to the terrestrial intermediate origin.
 *
 * @param taiS whole TAI seconds since 1970-01-01T00:00:00 TAI
 * @param ut1MinusTaiS UT1 - TAI, seconds
 * @returns radians in [0, 2 pi), rounding below 1e-15 turns: whole days are split off before anything is multiplied
 *
 * Source: IAU 2000 Resolution B1.8; IERS Conventions 2010, equation 5.15.
 */
export function earthRotationAngleRad(taiS: number, ut1MinusTaiS: number): number {
  const sinceJ2000S = taiS - J2000_S;
  const days = Math.floor(sinceJ2000S / S_PER_DAY);
  const restDays = (sinceJ2000S - days * S_PER_DAY + ut1MinusTaiS) / S_PER_DAY;
  const upperTurns = (BEYOND_ONE_UPPER * days) % 1;
  const turns = upperTurns + BEYOND_ONE_LOWER * days + TURNS_BEYOND_ONE * restDays + restDays + TURNS_AT_J2000;
  return (turns - Math.floor(turns)) * 2 * Math.PI;
}
