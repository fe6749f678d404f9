import { describe, expect, it } from 'vitest';
import { parseLeapSeconds } from './leap-seconds';
import { createReadingParser, readingFaultText, resolutionSigmaNs, type ReadingFault } from './reading';
import { SCALES, type Scale } from './scales';
import { sha1OfAscii } from './sha1';
import { shippedLeapSeconds } from './shipped-leap-seconds';

const table = shippedLeapSeconds();
const NOON_TAI_S = 1_772_366_400; // 2026-03-01T12:00:00 TAI

describe('a reading', () => {
  it.each<[string, Scale, number, number, number]>([
    ['2026-03-01T12:00:00', 'TAI', NOON_TAI_S, 0, 0],
    ['2026-03-01 12:00:00', 'TAI', NOON_TAI_S, 0, 0],
    ['2026-03-01T12:00:00', 'UTC', NOON_TAI_S + 37, 0, 0],
    ['2026-03-01T12:00:00Z', 'UTC', NOON_TAI_S + 37, 0, 0],
    ['2026-03-01 12:00:00.5Z', 'UTC', NOON_TAI_S + 37, 500_000_000_000, 1],
    ['2026-03-01T12:00:00', 'GPS', NOON_TAI_S + 19, 0, 0],
    ['2026-03-01T12:00:32.184', 'TT', NOON_TAI_S, 0, 3],
    ['2026-03-01T12:00:32.183999999999', 'TT', NOON_TAI_S - 1, 999_999_999_999, 12],
    ['2026-03-01T12:00:00.000000000001', 'TAI', NOON_TAI_S, 1, 12],
    ['2026-03-01T12:00:00.999999999999', 'GPS', NOON_TAI_S + 19, 999_999_999_999, 12],
    ['2026-03-01T12:00:00.10', 'TAI', NOON_TAI_S, 100_000_000_000, 2],
    ['2016-12-31T23:59:60.25', 'UTC', 1_483_228_836, 250_000_000_000, 2],
    ['2016-12-31T23:59:60Z', 'UTC', 1_483_228_836, 0, 0],
    ['2017-01-01T00:00:00', 'UTC', 1_483_228_837, 0, 0],
    ['1972-01-01T00:00:00', 'UTC', 63_072_010, 0, 0],
    ['1972-06-30T23:59:60', 'UTC', 78_796_810, 0, 0],
    ['2024-02-29T00:00:00', 'TAI', 1_709_164_800, 0, 0],
    ['2000-02-29T23:59:59', 'TAI', 951_868_799, 0, 0],
    ['1970-01-01T00:00:00', 'TAI', 0, 0, 0],
    ['1969-12-31T23:59:59.9', 'TAI', -1, 900_000_000_000, 1],
    ['0000-01-01T00:00:00', 'TAI', -62_167_219_200, 0, 0],
    ['9999-12-31T23:59:59', 'TAI', 253_402_300_799, 0, 0],
  ])('%s in %s', (text, scale, taiS, ps, decimals) => {
    expect(createReadingParser(scale, table)(text)).toEqual({ taiS, ps, decimals });
  });

  it.each<[ReadingFault, string, Scale]>([
    ['reading-empty', '', 'UTC'],
    ['reading-form', ' ', 'UTC'],
    ['reading-form', 'Z', 'UTC'],
    ['reading-form', 'now', 'UTC'],
    ['reading-form', '2026-03-01', 'UTC'],
    ['reading-form', '12:00:00', 'UTC'],
    ['reading-form', '2026-03-01T12:00', 'UTC'],
    ['reading-form', '2026-03-01T12:00:0', 'UTC'],
    ['reading-form', ' 2026-03-01T12:00:00', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00 ', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00 Z', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00\t', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00\n', 'UTC'],
    ['reading-form', '\ufeff2026-03-01T12:00:00', 'UTC'],
    ['reading-form', '2026-03-01  12:00:00', 'UTC'],
    ['reading-form', '2026-03-01\t12:00:00', 'UTC'],
    ['reading-form', '2026-03-01\u00a012:00:00', 'UTC'],
    ['reading-form', '2026-03-01t12:00:00', 'UTC'],
    ['reading-form', '2026-03-01_12:00:00', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00z', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00ZZ', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00Z', 'TAI'],
    ['reading-form', '2026-03-01T12:00:00Z', 'GPS'],
    ['reading-form', '2026-03-01T12:00:00.5Z', 'TT'],
    ['reading-form', '2026-03-01T12:00:00 UTC', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00+00:00', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00-07', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00.', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00.Z', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00,5', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00:5', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00.1234567890123', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00.12 4', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00.1e3', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00.-1', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00.123x', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00.5.5', 'UTC'],
    ['reading-form', '2026/03/01T12:00:00', 'UTC'],
    ['reading-form', '2026-03-01T12.00.00', 'UTC'],
    ['reading-form', '2026-03-01T120000', 'UTC'],
    ['reading-form', '20260301T120000Z', 'UTC'],
    ['reading-form', '26-03-01T12:00:00', 'UTC'],
    ['reading-form', '2026-3-01T12:00:00', 'UTC'],
    ['reading-form', '2026-03-1T12:00:00', 'UTC'],
    ['reading-form', '2026-03-01T2:00:00', 'UTC'],
    ['reading-form', '02026-03-01T12:00:00', 'UTC'],
    ['reading-form', '+2026-03-01T12:00:00', 'UTC'],
    ['reading-form', '-026-03-01T12:00:00', 'TAI'],
    ['reading-form', 'yyyy-03-01T12:00:00', 'UTC'],
    ['reading-form', '20a6-03-01T12:00:00', 'UTC'],
    ['reading-form', '2026-o3-01T12:00:00', 'UTC'],
    ['reading-form', '2026-03-0lT12:00:00', 'UTC'],
    ['reading-form', '2026-03-01T1 :00:00', 'UTC'],
    ['reading-form', '2026-03-01T12:-1:00', 'UTC'],
    ['reading-form', '2026-03-01T12:00:0x', 'UTC'],
    ['reading-form', '2026-03-01T12:00:00PM', 'UTC'],
    ['reading-form', '\u0662\u0660\u0662\u0666-03-01T12:00:00', 'UTC'],
    ['reading-form', '2026-060T12:00:00.00', 'UTC'],
    ['reading-form', '2026-W09-7T12:00:00', 'UTC'],
    ['reading-form', '1772366400', 'UTC'],
    ['reading-form', '1772366400.123456789', 'UTC'],
    ['reading-form', 'Sun, 01 Mar 2026 12:00:00 GMT', 'UTC'],
    ['reading-form', '2026-13-01T12:00:0', 'UTC'], // form goes before date
    ['date', '2026-00-01T12:00:00', 'UTC'],
    ['date', '2026-13-01T12:00:00', 'UTC'],
    ['date', '2026-03-00T12:00:00', 'UTC'],
    ['date', '2026-03-32T12:00:00', 'UTC'],
    ['date', '2026-04-31T12:00:00', 'UTC'],
    ['date', '2026-02-29T12:00:00', 'UTC'],
    ['date', '1900-02-29T12:00:00', 'TAI'],
    ['date', '2016-13-31T23:59:60', 'UTC'],
    ['date', '1971-02-29T00:00:00', 'UTC'], // date goes before 1972
    ['date', '2026-99-99T99:99:99', 'UTC'], // date goes before time of day
    ['time-of-day', '2026-03-01T24:00:00', 'UTC'],
    ['time-of-day', '2026-03-01T25:00:00', 'UTC'],
    ['time-of-day', '2026-03-01T12:60:00', 'UTC'],
    ['time-of-day', '2026-03-01T12:00:61', 'UTC'],
    ['time-of-day', '2016-12-31T23:59:61', 'UTC'],
    ['time-of-day', '2026-03-01T99:00:00', 'GPS'],
    ['time-of-day', '2026-03-01T24:00:60', 'UTC'], // time of day goes before the leap second
    ['time-of-day', '1960-01-01T24:00:00', 'UTC'], // and before 1972
    ['no-leap-second', '2026-03-01T23:59:60', 'UTC'],
    ['no-leap-second', '2016-06-30T23:59:60', 'UTC'],
    ['no-leap-second', '2017-12-31T23:59:60', 'UTC'],
    ['no-leap-second', '2017-01-01T23:59:60', 'UTC'],
    ['no-leap-second', '2016-12-30T23:59:60', 'UTC'],
    ['no-leap-second', '2016-12-31T12:59:60', 'UTC'],
    ['no-leap-second', '2016-12-31T23:58:60', 'UTC'],
    ['no-leap-second', '2016-12-31T00:00:60', 'UTC'],
    ['no-leap-second', '2016-12-31T23:59:60.999', 'TAI'],
    ['no-leap-second', '2016-12-31T23:59:60', 'GPS'],
    ['no-leap-second', '2016-12-31T23:59:60', 'TT'],
    ['no-leap-second', '1971-12-31T23:59:60', 'UTC'], // the leap second goes before 1972
    ['before-1972', '1971-12-31T23:59:59.999999999999', 'UTC'],
    ['before-1972', '1970-01-01T00:00:00Z', 'UTC'],
    ['before-1972', '0000-01-01T00:00:00', 'UTC'],
  ])('is set aside for %s: "%s" in %s', (fault, text, scale) => {
    const parse = createReadingParser(scale, table);
    expect(parse(text)).toBe(fault);
    parse('2016-12-31T23:59:59');
    expect(parse(text)).toBe(fault); // whatever day was read before
    const sentence = readingFaultText(fault, text, scale);
    expect(sentence).toMatch(/ must be | not of the form |; write | are 00 | are 01 | exists only | belong to UTC| use TAI/);
    if (text !== '') expect(sentence).toContain(JSON.stringify(text));
  });

  it('in second 59 of a day that a negative leap second ends early is set aside for time-of-day', () => {
    const hash = (sha1OfAscii('39923126974023129600227206080010228778560011230368320010').match(/.{8}/g) ?? []).join(' ');
    const list = parseLeapSeconds(`#$ 3992312697\n#@ 4023129600\n2272060800 10\n2287785600 11\n2303683200 10\n#h ${hash}\n`);
    if (!list.ok) throw new Error(list.problem.text);
    const parse = createReadingParser('UTC', list.value);
    expect(parse('1972-12-31T23:59:59')).toBe('time-of-day');
    expect(parse('1972-12-31T23:59:60')).toBe('no-leap-second');
    const [last, first] = [parse('1972-12-31T23:59:58'), parse('1973-01-01T00:00:00')];
    expect([last, first]).toEqual([
      { taiS: 94_694_409, ps: 0, decimals: 0 },
      { taiS: 94_694_410, ps: 0, decimals: 0 },
    ]);
    expect(createReadingParser('TAI', list.value)('1972-12-31T23:59:59')).toMatchObject({ decimals: 0 });
  });

  it('reads the same whatever was read before it', () => {
    for (const scale of SCALES) {
      const shared = createReadingParser(scale, table);
      const texts = ['2016-12-31T23:59:59', '2026-02-29T00:00:00', '1971-01-01T00:00:00', '2016-12-31T23:59:60', '2017-01-01T00:00:00.5'];
      for (const text of [...texts, ...texts.toReversed()]) expect(shared(text)).toEqual(createReadingParser(scale, table)(text));
    }
  });

  it('is explained in one line even when it is long or has line ends', () => {
    const sentence = readingFaultText('reading-form', `2026\n${'x'.repeat(1e6)}`, 'UTC');
    expect(sentence).not.toContain('\n');
    expect(sentence.length).toBeLessThan(300);
  });

  it('with a Z in another scale is told so', () => {
    expect(readingFaultText('reading-form', '2026-03-01T12:00:00Z', 'GPS')).toContain("a Z says UTC, but the site's log is in GPS");
  });
});

describe('the standard error of a resolution', () => {
  it.each([
    [0, 1e9 / Math.sqrt(12)],
    [9, 0.288675134594813],
    [12, 0.000288675134594813],
  ])('with %i decimals', (decimals, sigmaNs) => {
    expect(resolutionSigmaNs(decimals)).toBeCloseTo(sigmaNs, 12);
  });
});
