import { describe, expect, it } from 'vitest';
import { daysFromCivil } from './calendar';
import { expiryWarnings, parseLeapSeconds, secondsInUtcDay, taiMinusUtcOnDay, utcDayAt, type LeapSecondTable } from './leap-seconds';
import { sha1OfAscii } from './sha1';
import { SHIPPED_LEAP_SECONDS_LIST, shippedLeapSeconds } from './shipped-leap-seconds';

const FIRST = ['2272060800', '10'] as const;

/** A list with a hash that fits its rows. */
function listOf(rows: readonly (readonly [string, string])[]): string {
  const digits = `39923126974023129600${rows.flat().join('')}`;
  const hash = (sha1OfAscii(digits).match(/.{8}/g) ?? []).join(' ');
  return `#$ 3992312697\n#@ 4023129600\n${rows.map((row) => row.join('\t')).join('\n')}\n#h ${hash}\n`;
}

function tableOf(text: string): LeapSecondTable {
  const table = parseLeapSeconds(text);
  if (!table.ok) throw new Error(table.problem.text);
  return table.value;
}

describe('the list that comes with the program', () => {
  const table = shippedLeapSeconds();

  it('has a hash that fits', () => {
    expect(table.sha1).toBe('a9bad14584c31c70758402aab37bfd545923836a');
  });

  it('begins in 1972 and has 27 leap seconds', () => {
    expect(table.steps).toHaveLength(28);
    expect(table.steps[0]).toEqual({ fromDay: 730, fromTaiS: 63_072_010, taiMinusUtcS: 10 });
    expect(table.steps.at(-1)?.taiMinusUtcS).toBe(37);
  });

  it('was updated on 2026-07-06 and expires on 2027-06-28, both with 37 leap seconds', () => {
    expect(table.updated.taiS).toBe(daysFromCivil(2026, 7, 6) * 86_400 + 7 * 3600 + 44 * 60 + 57 + 37);
    expect(table.expires).toEqual({ taiS: daysFromCivil(2027, 6, 28) * 86_400 + 37, ps: 0 });
  });

  it('reads the same with CRLF', () => {
    expect(tableOf(SHIPPED_LEAP_SECONDS_LIST.replaceAll('\n', '\r\n'))).toEqual(table);
  });

  it('knows no difference before 1972', () => {
    expect(taiMinusUtcOnDay(table, 729)).toBeUndefined();
    expect(taiMinusUtcOnDay(table, 730)).toBe(10);
    expect(utcDayAt(table, 63_072_009)).toBeUndefined();
    expect(utcDayAt(table, 63_072_010)).toEqual({ day: 730, secondOfDay: 0 });
    expect(secondsInUtcDay(table, 729)).toBe(86_400);
  });
});

describe('a warning about expiry', () => {
  const table = shippedLeapSeconds();

  it('comes with the first picosecond after it, not at it', () => {
    expect(expiryWarnings(table, table.expires, 'x')).toEqual([]);
    expect(expiryWarnings(table, { ...table.expires, ps: 1 }, 'run.to')).toEqual([
      expect.objectContaining({ code: 'leap-seconds-expired', where: 'run.to' }),
    ]);
  });
});

describe('a list', () => {
  it('may leave out leading zeros of the words of its hash', () => {
    // One word in 16 begins with zero, so some list of these 100 does; the last one that does is taken.
    const lists = Array.from({ length: 100 }, (_, days) => [FIRST, [String(2_287_785_600 + 86_400 * days), '11']] as const);
    const padded = lists.map((rows) => listOf(rows)).filter((text) => / 0[0-9a-f]{7}/.test(text.slice(text.indexOf('#h'))));
    const text = padded.at(-1) ?? '';
    const stripped = text.replace(/ 0+(?=[0-9a-f]+( |\n))/g, ' ');
    expect(stripped.length).toBeLessThan(text.length);
    expect(tableOf(stripped)).toEqual(tableOf(text));
  });

  it('may hold a negative leap second', () => {
    const table = tableOf(listOf([FIRST, ['2287785600', '11'], ['2303683200', '10']]));
    const newYear = daysFromCivil(1973, 1, 1);
    expect(secondsInUtcDay(table, newYear - 1)).toBe(86_399);
    expect(secondsInUtcDay(table, newYear)).toBe(86_400);
    const newYearTaiS = newYear * 86_400 + 10;
    expect(utcDayAt(table, newYearTaiS - 1)).toEqual({ day: newYear - 1, secondOfDay: 86_398 });
    expect(utcDayAt(table, newYearTaiS)).toEqual({ day: newYear, secondOfDay: 0 });
  });

  it('may have one row only', () => {
    expect(tableOf(listOf([FIRST])).steps).toHaveLength(1);
  });

  const good = listOf([FIRST, ['2287785600', '11']]);
  it.each([
    ['is empty', '', 'line 1', /without a row/],
    ['has only comments', '# nothing\n#\n', 'line 3', /without a row/],
    ['has one digit changed', good.replace('2287785600', '2287872000'), 'line 6', /hash to .* the #h line says/],
    ['has another expiry', good.replace('4023129600', '4023129601'), 'line 6', /the list is damaged/],
    ['has no update', good.replace('#$ 3992312697', '#'), 'line 6', /#\$ and NTP seconds/],
    ['has no expiry', good.replace('#@', '# @'), 'line 6', /#@ and NTP seconds/],
    ['has no hash', good.replace('#h', '# h'), 'line 6', /#h and five words/],
    ['has two updates', `#$ 3992312697\n${good}`, 'line 2', /second #\$ line/],
    ['has two expiries', good.replace('#@', '#@ 1\n#@'), 'line 3', /second #@ line/],
    ['has two hashes', `${good}#h a b c d e\n`, 'line 6', /second #h line/],
    ['has an update that is no number', good.replace('3992312697', 'soon'), 'line 1', /"soon"; it takes one whole number/],
    ['has an expiry of two words', good.replace('4023129600', '4023129600 0'), 'line 2', /one whole number/],
    ['has a hash of four words', good.replace(/#h \w+/, '#h'), 'line 5', /five words/],
    ['has a hash that is not hex', good.replace(/#h \w+/, '#h wxyz'), 'line 5', /hex digits/],
    ['has a row of words', good.replace('2287785600\t11', 'July 1972'), 'line 4', /"July 1972" is no row/],
    ['has a row of one number', good.replace('\t11', ''), 'line 4', /is no row/],
    ['has a fraction of a second', good.replace('\t11', '\t11.5'), 'line 4', /is no row/],
    ['has a row within a day', listOf([FIRST, ['2287785601', '11']]), 'line 4', /multiple of 86400/],
    ['has rows out of order', listOf([FIRST, ['2303683200', '11'], ['2287785600', '12']]), 'line 5', /not later than the row before/],
    ['has a row twice', listOf([FIRST, FIRST]), 'line 4', /not later/],
    ['steps by two', listOf([FIRST, ['2287785600', '12']]), 'line 4', /from 10 to 12 s; a step is one second/],
    ['does not step', listOf([FIRST, ['2287785600', '10']]), 'line 4', /one second up or down/],
    ['begins elsewhere', listOf([['2287785600', '11']]), 'line 3', /must be 2272060800 10/],
    ['begins with another difference', listOf([['2272060800', '9']]), 'line 3', /must be 2272060800 10/],
    ['is far too long', '#'.repeat(500_001), 'line 1', /at most 500000/],
  ])('is refused when it %s', (_name, text, where, reason) => {
    const table = parseLeapSeconds(text);
    expect(table.ok ? undefined : table.problem).toMatchObject({ code: 'leap-seconds', where });
    expect(table.ok ? '' : table.problem.text).toMatch(reason);
  });

  it('is refused when its dates lie before 1972 and its hash fits', () => {
    for (const [updated, expires, mark] of [
      ['2272060799', '4023129600', '#$'],
      ['3992312697', '0', '#@'],
    ] as const) {
      const hash = (sha1OfAscii(updated + expires + FIRST.join('')).match(/.{8}/g) ?? []).join(' ');
      const table = parseLeapSeconds(`#$ ${updated}\n#@ ${expires}\n${FIRST.join(' ')}\n#h ${hash}\n`);
      expect(table.ok ? '' : table.problem.text).toContain(`${mark} ${mark === '#$' ? updated : expires} lies before the first row`);
    }
  });
});
