import { S_PER_DAY } from '../constants';
import { type Outcome, problemOf, valueOf } from '../outcome';
import { MOST_POLE_RAD, type OrientationValues } from './earth-orientation';
import { type OrientationRow, type OrientationTable, orientationTable } from './orientation-table';

/** A field of a fixed-width line: first and last column, counted from 1 as the format's description does. */
interface Field {
  readonly name: string;
  readonly from: number;
  readonly to: number;
}

// Source: IERS, readme.finals2000A, the description of the columns.
const YEAR: Field = { name: 'year', from: 1, to: 2 };
const MONTH: Field = { name: 'month', from: 3, to: 4 };
const DAY: Field = { name: 'day', from: 5, to: 6 };
const MJD: Field = { name: 'MJD', from: 8, to: 15 };
const POLE_FLAG: Field = { name: 'flag of polar motion', from: 17, to: 17 };
const POLE_X: Field = { name: 'PM-x', from: 19, to: 27 };
const POLE_Y: Field = { name: 'PM-y', from: 38, to: 46 };
const UT1_FLAG: Field = { name: 'flag of UT1-UTC', from: 58, to: 58 };
const UT1_UTC: Field = { name: 'UT1-UTC', from: 59, to: 68 };
const FINAL_POLE_X: Field = { name: 'PM-x of Bulletin B', from: 135, to: 144 };
const FINAL_POLE_Y: Field = { name: 'PM-y of Bulletin B', from: 145, to: 154 };
const FINAL_UT1_UTC: Field = { name: 'UT1-UTC of Bulletin B', from: 155, to: 165 };

const RAD_PER_ARCSEC = Math.PI / 648_000;
const MJD_OF_1970 = 40_587;
/** UTC is kept within 0.9 s of UT1 (ITU-R TF.460-6); a row beyond this is not one. */
const MOST_UT1_UTC_S = 1;
/** A file longer than this is refused before it is read: 274 years of days. */
const MOST_LINES = 100_000;

const textOf = (line: string, field: Field): string => line.slice(field.from - 1, field.to).trim();

/** Modified Julian Date of a day of the Gregorian calendar. Source: Fliegel and Van Flandern 1968, Communications of the ACM 11, 657. */
function mjdOfDate(year: number, month: number, day: number): number {
  const shift = Math.trunc((month - 14) / 12);
  return (
    day -
    32_075 +
    Math.trunc((1461 * (year + 4800 + shift)) / 4) +
    Math.trunc((367 * (month - 2 - shift * 12)) / 12) -
    Math.trunc((3 * Math.trunc((year + 4900 + shift) / 100)) / 4) -
    2_400_001
  );
}

/** Reads the fields of one line; the first that is wrong is kept as the problem, and what follows it is not looked at. */
function fieldReader(line: string, lineNumber: number) {
  let found: ReturnType<typeof problemOf> | undefined;
  const refuse = (field: Field, why: string): number => {
    const columns = field.from === field.to ? `column ${field.from}` : `columns ${field.from}-${field.to}`;
    found ??= problemOf('orientation-field', `line ${lineNumber}, ${columns} (${field.name})`, `'${textOf(line, field)}' ${why}`);
    return 0;
  };
  const numberIn = (field: Field, least: number, most: number): number => {
    const text = textOf(line, field);
    const value = /^[+-]?(\d+\.?\d*|\.\d+)$/.test(text) ? Number(text) : Number.NaN;
    return value >= least && value <= most ? value : refuse(field, `is not a number from ${least} to ${most}`);
  };
  return { problem: () => found, refuse, numberIn };
}

/** One line as a row, undefined where the IERS has no values for its day yet. */
function rowOf(line: string, lineNumber: number, taiMinusUtcS: (utcDay: number) => number): Outcome<OrientationRow | undefined> {
  const { problem, refuse, numberIn } = fieldReader(line, lineNumber);
  const mjd = numberIn(MJD, 37_300, 88_069);
  if (!Number.isInteger(mjd)) refuse(MJD, 'is not a whole day: rows are for 0 h UTC');
  const [year, month, day] = [numberIn(YEAR, 0, 99), numberIn(MONTH, 1, 12), numberIn(DAY, 1, 31)];
  if (mjdOfDate(1900 + year, month, day) !== mjd && mjdOfDate(2000 + year, month, day) !== mjd) {
    refuse(MJD, `is not the day ${textOf(line, YEAR)}-${month}-${day} that the line starts with`);
  }
  const wrongDay = problem();
  if (wrongDay) return wrongDay;
  if ([POLE_FLAG, POLE_X, POLE_Y, UT1_FLAG, UT1_UTC].every((field) => textOf(line, field) === '')) return valueOf(undefined);

  for (const flag of [POLE_FLAG, UT1_FLAG]) {
    if (!['I', 'P'].includes(textOf(line, flag))) refuse(flag, 'is neither I (measured) nor P (predicted)');
  }
  const hasFinal = [FINAL_POLE_X, FINAL_POLE_Y, FINAL_UT1_UTC].some((field) => textOf(line, field) !== '');
  const mostPoleArcsec = MOST_POLE_RAD / RAD_PER_ARCSEC;
  const rapid = {
    x: numberIn(POLE_X, -mostPoleArcsec, mostPoleArcsec),
    y: numberIn(POLE_Y, -mostPoleArcsec, mostPoleArcsec),
    ut1UtcS: numberIn(UT1_UTC, -MOST_UT1_UTC_S, MOST_UT1_UTC_S),
  };
  const best = hasFinal
    ? {
        x: numberIn(FINAL_POLE_X, -mostPoleArcsec, mostPoleArcsec),
        y: numberIn(FINAL_POLE_Y, -mostPoleArcsec, mostPoleArcsec),
        ut1UtcS: numberIn(FINAL_UT1_UTC, -MOST_UT1_UTC_S, MOST_UT1_UTC_S),
      }
    : rapid;
  const leapS = taiMinusUtcS(mjd - MJD_OF_1970);
  if (!Number.isInteger(leapS)) refuse(MJD, 'is a day on which TAI - UTC is not a known whole number of seconds');
  const wrongValue = problem();
  if (wrongValue) return wrongValue;

  const values: OrientationValues = {
    ut1MinusTaiS: best.ut1UtcS - leapS,
    poleXRad: best.x * RAD_PER_ARCSEC,
    poleYRad: best.y * RAD_PER_ARCSEC,
  };
  const predicted = [POLE_FLAG, UT1_FLAG].some((flag) => textOf(line, flag) === 'P');
  return valueOf({ mjd, taiS: (mjd - MJD_OF_1970) * S_PER_DAY + leapS, values, kind: predicted ? 'predicted' : 'measured' });
}

/**
 * Reads an IERS finals2000A file (all, data or daily): one line for each day, fixed columns.
 *
 * Bulletin B's values are taken where a line has them, else Bulletin A's. Days at the end without values are left out; empty lines and
 * both kinds of line end are accepted.
 *
 * @param text the file as it is
 * @param taiMinusUtcS TAI - UTC in whole seconds at 0 h UTC of a day, counted from 1970-01-01 = 0
 * @returns the table (see `orientationTable`). Problems: `orientation-field` names line, columns, field and value;
 *   `orientation-order`, `orientation-jump` name the day; `orientation-empty`; `orientation-size` above 100,000 lines
 *
 * Source: IERS, readme.finals2000A.
 */
export function readFinalsFile(text: string, taiMinusUtcS: (utcDay: number) => number): Outcome<OrientationTable> {
  const lines = text.split(/\r?\n/);
  if (lines.length > MOST_LINES) {
    return problemOf('orientation-size', 'earth orientation', `${lines.length} lines; at most ${MOST_LINES} are read`);
  }
  const rows: OrientationRow[] = [];
  for (const [index, line] of lines.entries()) {
    if (line.trim() === '') continue;
    const row = rowOf(line, index + 1, taiMinusUtcS);
    if (!row.ok) return row;
    if (row.value) rows.push(row.value);
  }
  return orientationTable(rows);
}
