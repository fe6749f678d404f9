import { type Instant } from './instant';

/**
 * One stretch of a clock record: at true time t the clock reads offset + rate x (t - at) ahead on its scale.
 *
 * It holds from `from` to the next segment's `from`. Standard errors are those of offset and rate, the covariance that between them.
 */
export interface ClockSegment {
  readonly from: Instant;
  /** The epoch at which the clock was ahead by exactly the offset. */
  readonly at: Instant;
  /** Positive when the clock is ahead. */
  readonly offsetNs: number;
  readonly offsetSigmaNs: number;
  /** Positive when the clock gains; a day is 86,400 SI seconds. */
  readonly rateNsPerDay: number;
  readonly rateSigmaNsPerDay: number;
  readonly covarianceNs2PerDay: number;
  /** Code of what the clock was compared with, whose error is common to all segments that name it. */
  readonly reference?: string;
}

/** A clock record: its segments, sorted by `from`. */
export type ClockRecord = readonly ClockSegment[];

const EVER: Instant = { taiS: Number.MIN_SAFE_INTEGER, ps: 0 };

/** The record of a clock that is declared to be exact: one segment for all time, no offset, no rate, no error. */
export const EXACT_CLOCK: ClockRecord = [
  {
    from: EVER,
    at: { taiS: 0, ps: 0 },
    offsetNs: 0,
    offsetSigmaNs: 0,
    rateNsPerDay: 0,
    rateSigmaNsPerDay: 0,
    covarianceNs2PerDay: 0,
  },
];
