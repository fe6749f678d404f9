import { describe, expect, it } from 'vitest';
import { readFinalsFile } from './finals-file';

// Lines in the columns of the IERS's readme.finals2000A; the numbers are invented but of the usual size. A leap second ends MJD 57753
// (2016-12-31), so that UT1-UTC jumps by one second and UT1-TAI does not. The last line has no values yet, the one before is a prediction.
const LINES = [
  '161228 57750.00 I  0.092341 0.000030  0.271020 0.000031  I-0.4062310 0.0000052  0.9032 0.0041  I     0.101    0.128    -0.087    0.160  0.092300  0.271100 -0.4062400     0.095    -0.090  ',
  '161229 57751.00 I  0.090312 0.000030  0.271311 0.000031  I-0.4071211 0.0000050  0.8911 0.0036  I     0.099    0.128    -0.081    0.160  0.090300  0.271400 -0.4071300     0.093    -0.085  ',
  '161230 57752.00 I  0.088210 0.000030  0.271702 0.000030  I-0.4080904 0.0000049  0.9823 0.0035  I     0.097    0.128    -0.079    0.160                                                      ',
  '161231 57753.00 I  0.086305 0.000030  0.272233 0.000030  I-0.4091217 0.0000051  1.0712 0.0034  I     0.094    0.128    -0.075    0.160                                                      ',
  '17 1 1 57754.00 I  0.084411 0.000030  0.272819 0.000030  I 0.5897701 0.0000050  1.1323 0.0035  I     0.090    0.128    -0.071    0.160                                                      ',
  '17 1 2 57755.00 I  0.082507 0.000031  0.273404 0.000030  I 0.5886112 0.0000052  1.1754 0.0036  I     0.087    0.128    -0.066    0.160                                                      ',
  '17 1 3 57756.00 I  0.080598 0.000031  0.273998 0.000031  I 0.5874201 0.0000053  1.2001 0.0036',
  '17 1 4 57757.00 P  0.078702 0.000250  0.274571 0.000210  P 0.5862207 0.0000410',
  '17 1 5 57758.00 P  0.076811 0.000410  0.275140 0.000330  P 0.5850302 0.0000760                 P     0.081    0.128    -0.058    0.160                                                     ',
  '17 1 6 57759.00                                                                                                                                                                             ',
];
const FILE = LINES.join('\n');
/** 36 s before 2017-01-01 and 37 s from it. Source: IERS leap-second list. */
const taiMinusUtcS = (utcDay: number): number => (utcDay < 17_167 ? 36 : 37);
const ARCSEC_RAD = Math.PI / 648_000;

function read(text: string) {
  const outcome = readFinalsFile(text, taiMinusUtcS);
  if (!outcome.ok) throw new Error(outcome.problem.text);
  return outcome.value;
}

function problemWith(text: string) {
  const outcome = readFinalsFile(text, taiMinusUtcS);
  if (outcome.ok) throw new Error('was accepted');
  return outcome.problem;
}

/** The file with one line changed from a column (counted from 1) on. */
function changed(line: number, column: number, by: string): string {
  return LINES.map((text, index) => (index === line - 1 ? text.slice(0, column - 1) + by + text.slice(column - 1 + by.length) : text)).join(
    '\n',
  );
}

describe('readFinalsFile', () => {
  it('reads every day that has values and leaves out the blank end', () => {
    const { rows } = read(FILE);
    expect(rows.map(({ mjd }) => mjd)).toEqual([57750, 57751, 57752, 57753, 57754, 57755, 57756, 57757, 57758]);
    expect(rows.map(({ kind }) => kind).filter((kind) => kind === 'predicted')).toHaveLength(2);
  });

  it('takes Bulletin B where a line has it, else Bulletin A', () => {
    const { rows } = read(FILE);
    expect(rows[0]!.values.ut1MinusTaiS).toBeCloseTo(-0.40624 - 36, 12);
    expect(rows[0]!.values.poleXRad / ARCSEC_RAD).toBeCloseTo(0.0923, 12);
    expect(rows[2]!.values.ut1MinusTaiS).toBeCloseTo(-0.4080904 - 36, 12);
    expect(rows[2]!.values.poleYRad / ARCSEC_RAD).toBeCloseTo(0.271702, 12);
  });

  it('counts TAI seconds at 0 h UTC of each day, so that a day with a leap second is one longer', () => {
    const seconds = read(FILE).rows.map(({ taiS }) => taiS);
    expect(seconds[0]).toBe((57_750 - 40_587) * 86_400 + 36);
    expect(seconds[4]! - seconds[3]!).toBe(86_401);
  });

  it('keeps UT1 - TAI continuous across the leap second', () => {
    const { rows, valuesAt } = read(FILE);
    expect(rows[4]!.values.ut1MinusTaiS - rows[3]!.values.ut1MinusTaiS).toBeCloseTo(-0.0011082, 9);
    const [before, after] = [valuesAt(rows[4]!.taiS - 1), valuesAt(rows[4]!.taiS)];
    expect(Math.abs(after.ut1MinusTaiS - before.ut1MinusTaiS)).toBeLessThan(2e-8);
  });

  it('accepts CRLF, empty lines and lines cut after their last value', () => {
    const { rows } = read(`\r\n${LINES.map((line) => line.trimEnd()).join('\r\n\r\n')}\r\n`);
    expect(rows).toEqual(read(FILE).rows);
  });

  it('reads numbers without a leading zero, as Fortran writes them', () => {
    expect(read(changed(4, 59, ' -.4091217')).rows[3]!.values.ut1MinusTaiS).toBeCloseTo(-36.4091217, 12);
  });

  it.each([
    ['a value that is no number', changed(3, 19, ' 0.08x210'), 'line 3, columns 19-27 (PM-x)', "'0.08x210'"],
    ['a blank value among filled ones', changed(3, 38, '         '), 'line 3, columns 38-46 (PM-y)', "''"],
    ['a pole that no Earth has', changed(3, 19, ' 8.088210'), 'line 3, columns 19-27 (PM-x)', "'8.088210'"],
    ['UT1-UTC beyond a second', changed(3, 59, '-1.4080904'), 'line 3, columns 59-68 (UT1-UTC)', "'-1.4080904'"],
    ['an unknown flag', changed(3, 17, 'X'), 'line 3, column 17 (flag of polar motion)', "'X'"],
    ['a blank flag', changed(3, 58, ' '), 'line 3, column 58 (flag of UT1-UTC)', "''"],
    ['half of Bulletin B', changed(2, 155, '           '), 'line 2, columns 155-165 (UT1-UTC of Bulletin B)', "''"],
    ['an exponent', changed(3, 19, ' 8.82e-02'), 'line 3, columns 19-27 (PM-x)', "'8.82e-02'"],
    ['a date that is not its MJD', changed(3, 5, '29'), 'line 3, columns 8-15 (MJD)', "'57752.00'"],
    ['a day that is not whole', changed(3, 8, '57752.50'), 'line 3, columns 8-15 (MJD)', "'57752.50'"],
    ['text that is no table', '<html>not found</html>', 'line 1, columns 8-15 (MJD)', "'ot found'"],
  ])('refuses %s, naming line, columns and value', (_, text, where, value) => {
    const problem = problemWith(text);
    expect(problem).toMatchObject({ code: 'orientation-field', where });
    expect(problem.text).toContain(value);
  });

  it('refuses a missing, a repeated and a shuffled day', () => {
    expect(problemWith(LINES.filter((_, index) => index !== 3).join('\n'))).toMatchObject({
      code: 'orientation-order',
      where: 'MJD 57754',
    });
    expect(problemWith([...LINES.slice(0, 2), LINES[1]].join('\n'))).toMatchObject({ code: 'orientation-order', where: 'MJD 57751' });
    expect(problemWith([LINES[1], LINES[0]].join('\n')).code).toBe('orientation-order');
  });

  it('refuses a day without values between days with them', () => {
    const blank = LINES[4]!.slice(0, 15);
    expect(problemWith(LINES.with(4, blank).join('\n'))).toMatchObject({ code: 'orientation-order', where: 'MJD 57755' });
  });

  it('refuses a table that does not fit the leap seconds', () => {
    const outcome = readFinalsFile(FILE, () => 36);
    expect(outcome).toMatchObject({ ok: false, problem: { code: 'orientation-jump', where: 'MJD 57754' } });
  });

  it('refuses a day before TAI - UTC is known', () => {
    expect(readFinalsFile(FILE, () => Number.NaN)).toMatchObject({ ok: false, problem: { code: 'orientation-field' } });
  });

  it('refuses nothing at all, and a file without values', () => {
    expect(problemWith('').code).toBe('orientation-empty');
    expect(problemWith(LINES[9]!).code).toBe('orientation-empty');
  });

  it('refuses a file of more than 100,000 lines unread', () => {
    expect(problemWith('\n'.repeat(100_000)).code).toBe('orientation-size');
  });
});
