import { S_PER_DAY } from '../constants';
import { type ClockRecord, type ClockSegment } from './clock-record';
import { addDecimals, decimalOf, digitsAt, floorDivide, nearestDivide, shiftDecimal, splitDecimal, type Decimal } from './decimal';
import { compareInstants, instantOf, PS_PER_S, type Instant } from './instant';

/** A segment of a clock record made ready for the readings of one site, whose delay is taken off with it. */
export interface PreparedSegment {
  readonly segment: ClockSegment;
  /** The first reading of the segment, on the time axis: reading less delay has reached `from`. */
  readonly firstReading: Instant;
  /** The reading, on the time axis, that less the delay is `at`; may have a fraction of a picosecond. */
  readonly epochS: number;
  readonly epochPs: number;
  /** Delay and offset together: whole seconds, whole picoseconds, and the rest of a picosecond in [0, 1). */
  readonly shiftS: number;
  readonly shiftPs: number;
  readonly shiftRestPs: number;
  /** Picoseconds gained in a second. */
  readonly ratePsPerS: number;
  readonly exact: ExactTerms;
}

/** The same terms as exact decimals, in picoseconds and days. */
interface ExactTerms {
  readonly atPs: bigint;
  readonly delayPs: Decimal;
  readonly shiftPs: Decimal;
  readonly ratePsPerDay: Decimal;
}

const BIG_PS_PER_S = BigInt(PS_PER_S);
const PS_PER_DAY = BigInt(S_PER_DAY) * BIG_PS_PER_S;
const PS_PER_NS_PER_DAY = 1000 / S_PER_DAY;
/** Ten roundings of 1.1e-16 cover those in the rate term, in the time since `at`, and in their sum. */
const ROUNDING = 1.2e-15;

/**
 * Makes a clock record ready for one site.
 *
 * Nanoseconds become picoseconds by moving the decimal point, so a delay of 0.1 ns is 100 ps and an offset of 20 s loses nothing.
 *
 * @param record segments sorted by `from`
 * @param delayNs from detector to clock, positive when the clock sees the event later
 */
export function prepareClock(record: ClockRecord, delayNs: number): readonly PreparedSegment[] {
  return record.map((segment) => prepareSegment(segment, shiftDecimal(decimalOf(delayNs), 3)));
}

function prepareSegment(segment: ClockSegment, delayPs: Decimal): PreparedSegment {
  const shiftPs = addDecimals(delayPs, shiftDecimal(decimalOf(segment.offsetNs), 3));
  const delay = splitDecimal(delayPs);
  const shift = splitDecimal(shiftPs);
  const atPs = psOf(segment.at);
  const epoch = instantFromPs(atPs + delay.whole);
  const shiftS = floorDivide(shift.whole, BIG_PS_PER_S);
  return {
    segment,
    firstReading: instantFromPs(psOf(segment.from) + delay.whole + (delay.rest > 0 ? 1n : 0n)),
    epochS: epoch.taiS,
    epochPs: epoch.ps + delay.rest,
    shiftS: Number(shiftS),
    shiftPs: Number(shift.whole - shiftS * BIG_PS_PER_S),
    shiftRestPs: shift.rest,
    ratePsPerS: segment.rateNsPerDay * PS_PER_NS_PER_DAY,
    exact: { atPs, delayPs, shiftPs, ratePsPerDay: shiftDecimal(decimalOf(segment.rateNsPerDay), 3) },
  };
}

/**
 * Index of the segment that holds at a reading less its delay, compared exactly; -1 before the first.
 *
 * @param reading on the time axis, the delay not yet taken off
 */
export function segmentAt(clock: readonly PreparedSegment[], reading: Instant): number {
  let low = 0;
  let high = clock.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    const prepared = clock[middle];
    if (prepared !== undefined && compareInstants(prepared.firstReading, reading) <= 0) low = middle + 1;
    else high = middle;
  }
  return low - 1;
}

/** Days of 86,400 SI seconds from the segment's `at` to the reading less its delay: the time on which the rate and its error act. */
export function daysSinceAt(prepared: PreparedSegment, reading: Instant): number {
  return secondsSinceAt(prepared, reading) / S_PER_DAY;
}

/** Days on this grid times the seconds of a day are exact, up to 2^16 days. */
const GRID_DAYS = 2 ** -20;

/**
 * What a double of days since `at` leaves out: the two together are good to 1e-16 s, so that the time between two readings of a segment is.
 *
 * @param days what `daysSinceAt` said of the same reading
 */
export function restOfDaysSinceAt(prepared: PreparedSegment, reading: Instant, days: number): number {
  const onGrid = Math.round(days / GRID_DAYS) * GRID_DAYS;
  const restS = reading.taiS - prepared.epochS - onGrid * S_PER_DAY + (reading.ps - prepared.epochPs) / PS_PER_S;
  return restS / S_PER_DAY - (days - onGrid);
}

/**
 * The instant of the event behind a reading: reading - delay - (offset + rate x (reading - delay - at)).
 *
 * Rounded once, to the nearest picosecond, halves to the even one. Doubles carry only the rate term and fractions of a picosecond, and where
 * their rounding could decide, whole numbers decide: the result is that of exact decimal arithmetic on the numbers as they were written.
 *
 * @param reading on the time axis, in the segment's span
 */
export function eventInstant(prepared: PreparedSegment, reading: Instant): Instant {
  const drift = prepared.ratePsPerS * secondsSinceAt(prepared, reading);
  const less = drift + prepared.shiftRestPs;
  const below = Math.floor(less);
  const fromHalf = less - below - 0.5;
  const bound = ROUNDING * (Math.abs(drift) + Math.abs(prepared.ratePsPerS) + 1);
  if (!(Math.abs(fromHalf) > bound)) return exactEventInstant(prepared.exact, reading);
  return instantOf(reading.taiS - prepared.shiftS, reading.ps - prepared.shiftPs - (fromHalf > 0 ? below + 1 : below));
}

function secondsSinceAt(prepared: PreparedSegment, reading: Instant): number {
  return reading.taiS - prepared.epochS + (reading.ps - prepared.epochPs) / PS_PER_S;
}

/** The same in whole numbers: everything over the common denominator of the decimals and of a day. */
function exactEventInstant(terms: ExactTerms, reading: Instant): Instant {
  const { delayPs, shiftPs, ratePsPerDay } = terms;
  const places = Math.max(delayPs.places, shiftPs.places);
  const perPs = 10n ** BigInt(places);
  const readingPs = psOf(reading);
  const sinceAt = (readingPs - terms.atPs) * perPs - digitsAt(delayPs, places);
  const perRate = 10n ** BigInt(ratePsPerDay.places) * PS_PER_DAY;
  const unrounded = (readingPs * perPs - digitsAt(shiftPs, places)) * perRate - ratePsPerDay.digits * sinceAt;
  return instantFromPs(nearestDivide(unrounded, perPs * perRate));
}

function psOf(instant: Instant): bigint {
  return BigInt(instant.taiS) * BIG_PS_PER_S + BigInt(instant.ps);
}

function instantFromPs(ps: bigint): Instant {
  const taiS = floorDivide(ps, BIG_PS_PER_S);
  return { taiS: Number(taiS), ps: Number(ps - taiS * BIG_PS_PER_S) };
}
