import { describe, expect, it } from 'vitest';
import { figureText, groupedDigits } from './figure';

describe('a figure', () => {
  it.each([
    [153280, '153\u202f280'],
    [9, '9'],
    [-1234.5678, '\u22121234.5678'],
    [12345.00625, '12\u202f345.00625'],
    [1e-9, '1e-9'],
    [0, '0'],
  ])('of %d has every digit that was stated, in threes', (value, text) => {
    expect(figureText(value)).toBe(text);
  });

  it('stands in threes in a sentence too, but not in codes and decimals', () => {
    expect(groupedDigits('from 0 to 1000000000000000')).toBe('from 0 to 1\u202f000\u202f000\u202f000\u202f000\u202f000');
    expect(groupedDigits('0.123456 of A12345, 2027-03-01T00:00:00Z')).toBe('0.123456 of A12345, 2027-03-01T00:00:00Z');
  });
});
