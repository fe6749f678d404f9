import { S_PER_DAY } from '../constants';
import { type Outcome, problemOf, valueOf } from '../outcome';
import { type EarthOrientation, MOST_UT1_CHANGE_S_PER_DAY, type OrientationValues } from './earth-orientation';

/** One day of an Earth-orientation table. */
export interface OrientationRow {
  /** 0 h UTC of the day, TAI seconds since 1970-01-01T00:00:00 TAI. */
  readonly taiS: number;
  /** Modified Julian Date of the day (UTC). */
  readonly mjd: number;
  readonly values: OrientationValues;
  /** Measured (final or rapid), or predicted by the IERS. */
  readonly kind: 'measured' | 'predicted';
}

/** Refuses rows that no Earth can have: too few, a day missing, or UT1 - TAI jumping as it does when a leap second was not taken out. */
function checkRows(rows: readonly OrientationRow[]): ReturnType<typeof problemOf> | undefined {
  for (const [index, row] of rows.entries()) {
    const before = rows[index - 1];
    if (before === undefined) continue;
    if (row.mjd !== before.mjd + 1) {
      return problemOf('orientation-order', `MJD ${row.mjd}`, `follows MJD ${before.mjd}; a table holds each day once, in order`);
    }
    const changeS = row.values.ut1MinusTaiS - before.values.ut1MinusTaiS;
    if (Math.abs(changeS) > MOST_UT1_CHANGE_S_PER_DAY) {
      return problemOf(
        'orientation-jump',
        `MJD ${row.mjd}`,
        `UT1 - TAI changes by ${changeS.toFixed(6)} s in a day, at most ${MOST_UT1_CHANGE_S_PER_DAY} s can be right: the leap-second list and this table do not belong together`,
      );
    }
  }
  return undefined;
}

/** A loaded table: its rows, and the orientation interpolated between them. */
export interface OrientationTable extends EarthOrientation {
  readonly rows: readonly OrientationRow[];
}

/**
 * Makes an orientation from daily rows: linear between days in UT1 - TAI and in the pole, the end values held before and after.
 *
 * @param rows one for each day without gaps, in order, at least one
 * @returns the table; its warnings are `orientation-before` and `orientation-after` outside the rows, `orientation-predicted` where the
 *   later of the two rows is a prediction. Problems: `orientation-empty`, `orientation-order`, `orientation-jump`. Interpolation adds up
 *   to 0.1 ms of UT1 (0.0015 arcseconds): tides of less than a day are in no daily table
 */
export function orientationTable(rows: readonly OrientationRow[]): Outcome<OrientationTable> {
  const first = rows[0];
  const last = rows.at(-1);
  if (first === undefined || last === undefined) {
    return problemOf('orientation-empty', 'earth orientation', 'no day with values; an IERS finals2000A file has one line for each day');
  }
  const problem = checkRows(rows);
  if (problem) return problem;

  /** The first row later than a time that lies within the table. */
  const indexAfter = (taiS: number): number => {
    // A day with a leap second is 86,401 s long, so the division can only be too far on, and by one day at most.
    const guess = Math.min(rows.length - 1, Math.floor((taiS - first.taiS) / S_PER_DAY) + 1);
    return (rows[guess - 1] ?? first).taiS > taiS ? guess - 1 : guess;
  };

  const valuesAt = (taiS: number): OrientationValues => {
    if (taiS <= first.taiS) return first.values;
    if (taiS >= last.taiS) return last.values;
    const index = indexAfter(taiS);
    const before = rows[index - 1] ?? first;
    const after = rows[index] ?? last;
    const share = (taiS - before.taiS) / (after.taiS - before.taiS);
    const between = (from: number, to: number): number => from + share * (to - from);
    return {
      ut1MinusTaiS: between(before.values.ut1MinusTaiS, after.values.ut1MinusTaiS),
      poleXRad: between(before.values.poleXRad, after.values.poleXRad),
      poleYRad: between(before.values.poleYRad, after.values.poleYRad),
    };
  };

  const warningAt: EarthOrientation['warningAt'] = (taiS) => {
    const where = 'earth orientation';
    if (taiS < first.taiS) {
      return { code: 'orientation-before', where, text: `the table starts on MJD ${first.mjd}; before it the first day's values are held` };
    }
    if (taiS > last.taiS) {
      return { code: 'orientation-after', where, text: `the table ends on MJD ${last.mjd}; after it the last day's values are held` };
    }
    const row = taiS === last.taiS ? last : rows[indexAfter(taiS)];
    return row?.kind === 'predicted'
      ? { code: 'orientation-predicted', where, text: `the values of MJD ${row.mjd} are a prediction` }
      : undefined;
  };

  return valueOf({ rows, valuesAt, warningAt });
}
