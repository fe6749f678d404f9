import { describe, expect, it } from 'vitest';
import { instantParts, instantText } from './instant-parts';
import { serverInstant } from './server-instant';

// TAI-UTC = 37 s since 2017-01-01 (IERS Bulletin C 52); GPS = TAI - 19 s (IS-GPS-200); TT = TAI + 32.184 s (IAU 1991 Rec. IV).
const instant = { taiS: serverInstant('2026-03-01T12:00:00.000Z').taiS, ps: 318_000_472_000 };

describe('a printed instant', () => {
  it.each([
    ['UTC', '2026-03-01 12:00:00.318000472 UTC'],
    ['TAI', '2026-03-01 12:00:37.318000472 TAI'],
    ['GPS', '2026-03-01 12:00:18.318000472 GPS'],
    ['TT', '2026-03-01 12:01:09.502000472 TT'],
  ] as const)('carries its scale: %s', (scale, text) => {
    expect(instantText(instant, scale, 9)).toBe(text);
  });

  it('has its decimals in threes', () => {
    expect(instantParts(instant, 'UTC', 9).groups).toEqual(['318', '000', '472']);
    expect(instantParts(instant, 'UTC', 4).groups).toEqual(['318', '0']);
    expect(instantParts(instant, 'UTC', 0).groups).toEqual([]);
  });

  it('names second 60 in a leap second of UTC alone', () => {
    const leap = { taiS: serverInstant('2017-01-01T00:00:00.000Z').taiS - 1, ps: 0 };
    expect(instantText(leap, 'UTC', 0)).toBe('2016-12-31 23:59:60 UTC');
    expect(instantText(leap, 'TAI', 0)).toBe('2017-01-01 00:00:36 TAI');
  });

  it('is printed in TAI where UTC is not defined', () => {
    expect(instantText({ taiS: 0, ps: 0 }, 'UTC', 0)).toBe('1970-01-01 00:00:00 TAI');
  });
});
