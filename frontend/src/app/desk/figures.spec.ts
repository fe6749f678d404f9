import { describe, expect, it } from 'vitest';
import { ageText, margin, plain, signed, timeText } from './figures';

describe('printed figures', () => {
  it.each([
    [signed(14.2071, 3), '+14.207'],
    [signed(-2.41, 3), '\u22122.410'],
    [plain(-1119.84, 1), '\u22121119.8'],
    [plain(552062.2, 0), '552\u202f062'],
    [margin(-40.12), '\u221240.1'],
    [margin(-552062.26), '\u2212552\u202f062'],
    [margin('Infinity'), '+\u221e'],
    [timeText(144.2), '144 ns'],
    [timeText(33.979), '34.0 ns'],
    [timeText(4_100_000), '4.100 ms'],
    [timeText(41_000), '41.00 \u00b5s'],
    [ageText(3.24), '3.2 s'],
    [ageText(200), '3 min'],
  ])('%s is %s', (printed, text) => expect(printed).toBe(text));
});
