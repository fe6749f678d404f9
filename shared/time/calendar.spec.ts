import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { civilFromDays, daysFromCivil, daysInMonth, isCivilDate, isLeapYear } from './calendar';

const MS_PER_DAY = 86_400_000;

describe('days from a date', () => {
  it.each([
    [1970, 1, 1, 0],
    [1969, 12, 31, -1],
    [2000, 2, 29, 11_016],
    [2000, 3, 1, 11_017],
    [1900, 1, 1, -25_567], // RFC 5905: NTP's epoch
    [1858, 11, 17, -40_587], // day 0 of the modified Julian date
    [0, 3, 1, -719_468],
    [-1, 12, 31, -719_529],
    [9999, 12, 31, 2_932_896],
  ])('of %i-%i-%i', (year, month, day, days) => {
    expect(daysFromCivil(year, month, day)).toBe(days);
    expect(civilFromDays(days)).toEqual({ year, month, day });
  });

  it('agree with the calendar of ECMAScript over 20,000 years, and back', () => {
    fc.assert(
      fc.property(fc.integer({ min: -4_371_587, max: 2_932_896 }), (days) => {
        const date = new Date(days * MS_PER_DAY);
        const civil = { year: date.getUTCFullYear(), month: date.getUTCMonth() + 1, day: date.getUTCDate() };
        expect(civilFromDays(days)).toEqual(civil);
        expect(daysFromCivil(civil.year, civil.month, civil.day)).toBe(days);
      }),
      { numRuns: 2000 },
    );
  });
});

describe('the Gregorian rule', () => {
  it.each([
    [2000, true],
    [1900, false],
    [2100, false],
    [2024, true],
    [2023, false],
    [0, true],
    [-4, true],
    [-100, false],
  ])('leap year %i: %s', (year, leap) => {
    expect(isLeapYear(year)).toBe(leap);
    expect(daysInMonth(year, 2)).toBe(leap ? 29 : 28);
    expect(isCivilDate(year, 2, 29)).toBe(leap);
  });

  it.each([
    [2026, 0, 1],
    [2026, 13, 1],
    [2026, 1, 0],
    [2026, 1, 32],
    [2026, 4, 31],
    [2026, 6, 31],
    [2026, 9, 31],
    [2026, 11, 31],
  ])('has no %i-%i-%i', (year, month, day) => {
    expect(isCivilDate(year, month, day)).toBe(false);
  });
});
