import { describe, expect, it } from 'vitest';
import { ageText, margin, plain, signed, timeText, wholeMargin } from './figures';

describe('printed figures', () => {
  it.each([
    [signed(14.2071, 3), '+14.207'],
    [signed(-2.41, 3), '\u22122.410'],
    [plain(-1119.84, 1), '\u22121119.8'],
    [plain(552062.2, 0), '552\u202f062'],
    [margin(-40.12), '\u221240.1\u00a0\u03c3'],
    [margin(-552062.26), '\u2212552\u202f000\u00a0\u03c3'],
    [margin(1234.4), '+1230\u00a0\u03c3'],
    [wholeMargin(-552062.26), '\u2212552\u202f062\u00a0\u03c3'],
    [margin('Infinity'), '+\u221e\u00a0\u03c3'],
    [timeText(144.2), '144\u00a0ns'],
    [timeText(33.979), '34.0\u00a0ns'],
    [timeText(4_100_000), '4.100\u00a0ms'],
    [timeText(41_000), '41.00\u00a0\u00b5s'],
    [ageText(3.24), '3.2\u00a0s'],
    [ageText(200), '3\u00a0min'],
  ])('%s is %s', (printed, text) => expect(printed).toBe(text));
});
