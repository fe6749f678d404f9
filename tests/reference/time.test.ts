import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { afterAll, describe, expect, it } from 'vitest';
import { L_G, NTP_TO_1970_DAYS, S_PER_DAY, TT_MINUS_TAI_PS } from '#shared/constants';
import { daysFromCivil } from '#shared/time/calendar';
import { timeText } from '#shared/time/format';
import { gpsWeekAt } from '#shared/time/gps-week';
import { instantOf, PS_PER_S, secondsBetween, type Instant } from '#shared/time/instant';
import { julianDateOf, type JulianDate } from '#shared/time/julian-date';
import { expiryWarnings, parseLeapSeconds, secondsInUtcDay, taiMinusUtcOnDay } from '#shared/time/leap-seconds';
import { posixSecondsAt } from '#shared/time/posix';
import { createReadingParser } from '#shared/time/reading';
import { civilFromInstant, dayTimeAt, startOfDay, type DayTime, type Scale } from '#shared/time/scales';
import { sha1OfAscii } from '#shared/time/sha1';
import { SHIPPED_LEAP_SECONDS_LIST, shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { instantFromTcg, tcgAt } from '#shared/time/tcg';

// Rows on time scales; each carries its source and whether that was seen (confirmed), computed by a library or derived from the cited formula.
// Left out:
// - A-CON-04, A-ERF-07, A-ERF-08, A-ERF-09, A-TDB-01, A-TDB-02: TDB and TCB. Nothing here reckons in them: the ephemeris is asked in TT, and the 1.7 ms
//   between TT and TDB move the Earth's velocity by 1e-5 m/s. So L_B and TDB0 of A-CON-01 and TDB, TCB of A-SOFA-01 are left out too.
// - A-ERF-11, and UT1 of A-SOFA-01: UT1 belongs to the Earth's rotation.
// - A-GPS-04: a 10-bit week number unfolded with a pivot; no log is read that has one.
// - A-GPS-06, A-GPS-08, A-GPS-09, A-GPS-10: clocks in orbit, which concern platforms.

interface Row {
  readonly id: string;
  readonly inputs: Readonly<Record<string, unknown>>;
  readonly expected: unknown;
  readonly tolerance: { readonly abs?: number; readonly exact?: true };
  readonly source: string;
  readonly status: string;
}

const rows = JSON.parse(readFileSync(new URL('./checks/time.json', import.meta.url), 'utf8')) as readonly Row[];
const unused = new Set(rows.map(({ id }) => id));
const table = shippedLeapSeconds();

/** Runs a check on the rows named, each under its own source. */
function check(ids: readonly string[], behaviour: string, body: (row: Row) => void): void {
  for (const id of ids) {
    const row = rows.find((candidate) => candidate.id === id);
    if (row === undefined) throw new Error(`no row ${id}`);
    unused.delete(id);
    it(`${id} ${behaviour} (${row.status}; ${row.source})`, () => {
      body(row);
    });
  }
}

function instantOfText(text: string, scale: Scale): Instant {
  const reading = createReadingParser(scale, table)(text);
  if (typeof reading === 'string') throw new Error(`${text} ${scale}: ${reading}`);
  return { taiS: reading.taiS, ps: reading.ps };
}

function textOf(instant: Instant, scale: Scale, decimals = 6): string {
  const text = timeText(instant, scale, table, decimals);
  if (!text.ok) throw new Error(text.problem.text);
  return text.value;
}

function dayOf(date: string): number {
  const [year = NaN, month = NaN, day = NaN] = date.split('-').map(Number);
  return daysFromCivil(year, month, day);
}

/** A place on a scale from a Julian date in two parts, to the nearest 10 ps that the fraction can tell. */
function dayTimeOfJulian([midnightJd, fraction]: readonly [number, number]): DayTime {
  const seconds = fraction * S_PER_DAY;
  const secondOfDay = Math.floor(seconds);
  return { day: midnightJd - 2_440_587.5, secondOfDay, ps: Math.round((seconds - secondOfDay) * PS_PER_S) };
}

function instantOfJulian(jd: readonly [number, number], scale: 'TAI' | 'TT'): Instant {
  const { day, secondOfDay, ps } = dayTimeOfJulian(jd);
  const start = startOfDay(day, scale, table)!;
  return instantOf(start.taiS + secondOfDay, start.ps + ps);
}

function expectJulian(actual: JulianDate, row: Row): void {
  const [midnightJd, fractionOfDay] = row.expected as readonly [number, number];
  expect(actual.midnightJd).toBe(midnightJd);
  expect(Math.abs(actual.fractionOfDay - fractionOfDay)).toBeLessThanOrEqual(row.tolerance.abs!);
}

/** TCG as text, in the form of the others: it has no leap seconds, so TAI's writer serves. */
function tcgText(instant: Instant, decimals: number): string {
  const { day, secondOfDay, ps } = tcgAt(instant);
  return textOf({ taiS: day * S_PER_DAY + secondOfDay, ps }, 'TAI', decimals);
}

function tcgMinusTtS(instant: Instant): number {
  const tcg = tcgAt(instant);
  return secondsBetween(instantOf(instant.taiS, instant.ps + TT_MINUS_TAI_PS), { taiS: tcg.day * S_PER_DAY + tcg.secondOfDay, ps: tcg.ps });
}

describe('constants', () => {
  check(['A-CON-01'], 'are those of the standards', ({ expected }) => {
    const [ttMinusTaiS, lg] = expected as readonly number[];
    expect([TT_MINUS_TAI_PS / PS_PER_S, L_G]).toEqual([ttMinusTaiS, lg]);
  });

  check(['A-CON-02'], 'TCG gains on TT in a year of 365.25 days', ({ expected, tolerance }) => {
    const from = instantOfText('2026-01-01T00:00:00', 'TT');
    const gainedMs = (tcgMinusTtS(instantOf(from.taiS + 31_557_600, from.ps)) - tcgMinusTtS(from)) * 1000;
    expect(Math.abs(gainedMs - (expected as number))).toBeLessThanOrEqual(tolerance.abs!);
  });

  check(['A-CON-03'], 'TCG - TT at J2000.0', ({ expected, tolerance }) => {
    const aheadS = tcgMinusTtS(instantOfText('2000-01-01T12:00:00', 'TT'));
    expect(Math.abs(aheadS - (expected as number))).toBeLessThanOrEqual(tolerance.abs!);
  });
});

describe('the leap-second list', () => {
  check(['A-DAT-01'], 'gives TAI-UTC by date', ({ inputs, expected }) => {
    expect((inputs['dates'] as readonly string[]).map((date) => taiMinusUtcOnDay(table, dayOf(date)))).toEqual(expected);
  });

  check(['A-DAT-02'], 'gives what ERFA gives', ({ inputs, expected }) => {
    const calls = inputs['calls'] as readonly (readonly [number, number, number, number])[];
    expect(calls.map(([year, month, day]) => taiMinusUtcOnDay(table, daysFromCivil(year, month, day)))).toEqual(expected);
  });

  check(['A-DAT-03'], 'does not reach back to seconds of another length: UTC there is refused', ({ inputs, expected }) => {
    const date = inputs['date'] as string;
    expect(taiMinusUtcOnDay(table, dayOf(date))).toBeUndefined();
    for (const time of ['00:00:00', '12:00:00']) expect(createReadingParser('UTC', table)(`${date}T${time}`)).toBe('before-1972');
    expect(expected).not.toContain(10);
  });

  check(['A-LSL-01'], 'has these rows', ({ expected }) => {
    const ntpS = (fromDay: number) => (fromDay + NTP_TO_1970_DAYS) * S_PER_DAY;
    const [first, last] = [table.steps[0]!, table.steps.at(-1)!];
    expect({
      entries: table.steps.length,
      first_ntp: ntpS(first.fromDay),
      first_offset: first.taiMinusUtcS,
      last_ntp: ntpS(last.fromDay),
      last_offset: last.taiMinusUtcS,
    }).toEqual(expected);
  });

  check(['A-LSL-02'], 'has this hash', ({ expected }) => {
    expect(table.sha1).toBe(expected);
  });

  check(['A-LSL-03'], 'with its last number changed does not match its hash', ({ expected }) => {
    // 38 is also a step of two seconds; 35 is a possible step, so there only the hash can tell.
    for (const [digits, reason] of [
      ['38', /one second up or down/],
      ['35', /the list is damaged/],
    ] as const) {
      const changed = SHIPPED_LEAP_SECONDS_LIST.replace(/^(3692217600\s+)37/m, `$1${digits}`);
      const outcome = parseLeapSeconds(changed);
      expect(outcome.ok).toBe(expected);
      expect(outcome.ok ? '' : outcome.problem.text).toMatch(reason);
    }
  });

  check(['A-LSL-04'], 'expires', ({ inputs, expected }) => {
    const { utc, unix } = expected as { readonly utc: string; readonly unix: number };
    expect(SHIPPED_LEAP_SECONDS_LIST).toContain(`#@\t${String(inputs['ntp_seconds'])}`);
    expect(textOf(table.expires, 'UTC', 0)).toBe(utc);
    expect(posixSecondsAt(table.expires, table)).toBe(unix);
    expect(expiryWarnings(table, instantOf(table.expires.taiS + 1, 0), 'now')).toHaveLength(1);
  });

  check(['A-LSL-05'], 'counts from 1900', ({ expected }) => {
    expect(NTP_TO_1970_DAYS * S_PER_DAY).toBe(expected);
    expect(daysFromCivil(1970, 1, 1) - daysFromCivil(1900, 1, 1)).toBe(NTP_TO_1970_DAYS);
  });

  check(['A-LSL-06'], 'pads the words of its hash (common practice)', ({ inputs, expected }) => {
    const word = inputs['word_in_file'] as string;
    const outcome = parseLeapSeconds(SHIPPED_LEAP_SECONDS_LIST.replace(/^#h\s+\S+/m, `#h ${word}`));
    expect(outcome.ok ? '' : outcome.problem.text).toContain(`the #h line says ${String(expected)}84c31c70`);
  });
});

describe('conversions', () => {
  check(
    ['A-UTC-01', 'A-UTC-02', 'A-UTC-04', 'A-UTC-05', 'A-UTC-06', 'A-UTC-08', 'A-UTC-10'],
    'UTC to TAI and back',
    ({ inputs, expected }) => {
      const utc = inputs['utc'] as string;
      const instant = instantOfText(utc, 'UTC');
      expect(textOf(instant, 'TAI')).toBe(expected);
      expect(textOf(instantOfText(expected as string, 'TAI'), 'UTC', 3)).toBe(utc.padEnd(20, '.').padEnd(23, '0'));
    },
  );

  check(['A-UTC-20'], 'TAI to UTC through a leap second', ({ inputs, expected }) => {
    expect((inputs['tai'] as readonly string[]).map((tai) => textOf(instantOfText(tai, 'TAI'), 'UTC'))).toEqual(expected);
  });

  check(['A-UTC-21'], 'elapsed seconds across a leap second', ({ inputs, expected }) => {
    const [from, to] = [instantOfText(inputs['from'] as string, 'UTC'), instantOfText(inputs['to'] as string, 'UTC')];
    expect(secondsBetween(from, to)).toBe(expected);
    expect(posixSecondsAt(to, table)! - posixSecondsAt(from, table)!).toBe(2);
  });

  check(['A-UTC-22'], 'length of a UTC day', ({ inputs, expected }) => {
    expect((inputs['days'] as readonly string[]).map((date) => secondsInUtcDay(table, dayOf(date)))).toEqual(expected);
  });

  check(['A-UTC-23'], 'second 60 where the list has one, nowhere else', ({ inputs, expected }) => {
    const parse = createReadingParser('UTC', table);
    const verdicts = (inputs['utc'] as readonly string[]).map((utc) => (typeof parse(utc) === 'string' ? 'rejected' : 'accepted'));
    expect(verdicts).toEqual(expected);
  });

  check(['A-UTC-24'], 'POSIX seconds', ({ inputs, expected }) => {
    expect((inputs['utc'] as readonly string[]).map((utc) => posixSecondsAt(instantOfText(utc, 'UTC'), table))).toEqual(expected);
  });

  check(['A-SOFA-01'], 'UTC to TAI, TT and TCG', ({ inputs, expected }) => {
    const scales = expected as Readonly<Record<string, string>>;
    const instant = instantOfText(inputs['utc'] as string, 'UTC');
    expect([textOf(instant, 'TAI'), textOf(instant, 'TT')]).toEqual([scales['TAI'], scales['TT']]);
    // The row is rounded to a microsecond, the text here is cut off: half a microsecond later they agree.
    expect(tcgText(instantOf(instant.taiS, instant.ps + 500_000), 6)).toBe(scales['TCG']);
  });

  check(['A-ERF-02'], 'TAI to UTC', (row) => {
    const instant = instantOfJulian(row.inputs['args'] as readonly [number, number], 'TAI');
    expectJulian(julianDateOf(dayTimeAt(instant, 'UTC', table)!), row);
  });

  check(['A-ERF-03'], 'TAI to TT', (row) => {
    const instant = instantOfJulian(row.inputs['args'] as readonly [number, number], 'TAI');
    expectJulian(julianDateOf(dayTimeAt(instant, 'TT', table)!), row);
  });

  check(['A-ERF-05'], 'TT to TCG', (row) => {
    expectJulian(julianDateOf(tcgAt(instantOfJulian(row.inputs['args'] as readonly [number, number], 'TT'))), row);
  });

  check(['A-ERF-06'], 'TCG to TT', (row) => {
    const instant = instantFromTcg(dayTimeOfJulian(row.inputs['args'] as readonly [number, number]));
    expectJulian(julianDateOf(dayTimeAt(instant, 'TT', table)!), row);
  });

  check(['A-PREC-01'], 'keeps picoseconds where one double of seconds has lost them', ({ expected }) => {
    const spacingS = expected as number;
    expect(1.5e9 + spacingS / 4).toBe(1.5e9);
    const parse = createReadingParser('TAI', table);
    expect(parse('2017-07-14T02:40:00.000000000001')).toEqual({ taiS: 1.5e9, ps: 1, decimals: 12 });
  });
});

describe('GPS time', () => {
  check(['A-GPS-01'], 'begins with UTC, 19 s behind TAI', ({ inputs, expected }) => {
    const epoch = instantOfText(inputs['gps_epoch_utc'] as string, 'UTC');
    const { tai, jd_utc } = expected as { readonly tai: string; readonly jd_utc: number };
    expect(textOf(epoch, 'TAI')).toBe(tai);
    expect(textOf(epoch, 'GPS', 0)).toBe(inputs['gps_epoch_utc']);
    expect(julianDateOf(dayTimeAt(epoch, 'UTC', table)!)).toEqual({ midnightJd: jd_utc, fractionOfDay: 0 });
  });

  check(['A-GPS-02'], 'counts leap seconds', ({ inputs, expected }) => {
    const gpsS = (inputs['utc'] as readonly string[]).map((utc) => {
      const { week, secondOfWeek } = gpsWeekAt(instantOfText(utc, 'UTC'));
      return week * 604_800 + secondOfWeek;
    });
    expect(gpsS).toEqual(expected);
  });

  check(['A-GPS-03'], 'in weeks and seconds', ({ inputs, expected }) => {
    const weeks = (inputs['utc'] as readonly string[]).map((utc) => {
      const { week, secondOfWeek } = gpsWeekAt(instantOfText(utc, 'UTC'));
      return [week, secondOfWeek];
    });
    expect(weeks).toEqual(expected);
  });

  check(['A-GPS-05'], 'does not roll over', ({ inputs, expected }) => {
    const weeks = (expected as readonly string[]).map((date) => gpsWeekAt(instantOfText(date, 'GPS')));
    expect(weeks).toEqual((inputs['weeks'] as readonly number[]).map((week) => ({ week, secondOfWeek: 0, ps: 0 })));
  });
});

describe('ERFA at many instants', () => {
  const fixture = JSON.parse(readFileSync(new URL('./erfa-time.json', import.meta.url), 'utf8')) as {
    readonly library: string;
    readonly rows: readonly (readonly [string, string, string, string])[];
  };
  /** TCG is written with 9 decimals, from two doubles good to 10 ps. */
  const TCG_TOLERANCE_PS = 520;

  it(`gives the same TAI and TT for each UTC, and the same UTC for each TAI and TT (${fixture.library})`, () => {
    expect(fixture.rows).toHaveLength(200);
    for (const [utc, tai, tt] of fixture.rows) {
      const instant = instantOfText(utc, 'UTC');
      expect([utc, textOf(instant, 'TAI', 9), textOf(instant, 'TT', 9)]).toEqual([utc, tai, tt]);
      expect([textOf(instantOfText(tai, 'TAI'), 'UTC', 9), textOf(instantOfText(tt, 'TT'), 'UTC', 9)]).toEqual([utc, utc]);
    }
  });

  it(`gives the same TCG (${fixture.library})`, () => {
    for (const [utc, , , tcg] of fixture.rows) {
      const read = instantOfText(tcg, 'TAI'); // TCG's own seconds, counted as TAI's are
      const { day, secondOfDay, ps } = tcgAt(instantOfText(utc, 'UTC'));
      expect(Math.abs(secondsBetween(read, { taiS: day * S_PER_DAY + secondOfDay, ps })) * PS_PER_S).toBeLessThanOrEqual(TCG_TOLERANCE_PS);
    }
  });

  it('has rows in leap seconds, at beginnings of days and elsewhere', () => {
    const utcs = fixture.rows.map(([utc]) => utc);
    for (const kind of [/:60\./, /T00:00:00\./, /-15T/]) expect(utcs.some((utc) => kind.test(utc))).toBe(true);
  });
});

describe('exact arithmetic at many instants', () => {
  const fixture = JSON.parse(readFileSync(new URL('./mpmath-time.json', import.meta.url), 'utf8')) as {
    readonly source: string;
    readonly rows: readonly (readonly [tai: string, tt: string, gps: string, tcg: string])[];
  };
  /** The resolution of an instant: TCG - TT is no whole number of picoseconds, and the fixture rounds it once. */
  const TCG_TOLERANCE_PS = 1;
  const apartPs = (a: Instant, b: Instant): number => Math.abs((a.taiS - b.taiS) * PS_PER_S + a.ps - b.ps);

  it(`gives TT and GPS time for TAI, and TAI for them, to the picosecond (${fixture.source})`, () => {
    expect(fixture.rows).toHaveLength(42);
    for (const [tai, tt, gps] of fixture.rows) {
      const instant = instantOfText(tai, 'TAI');
      expect([textOf(instant, 'TT', 12), textOf(instant, 'GPS', 12)]).toEqual([tt, gps]);
      expect([textOf(instantOfText(tt, 'TT'), 'TAI', 12), textOf(instantOfText(gps, 'GPS'), 'TAI', 12)]).toEqual([tai, tai]);
    }
  });

  it(`gives TCG for TT, and TT for TCG, to the picosecond (${fixture.source})`, () => {
    for (const [tai, tt, , tcg] of fixture.rows) {
      const read = instantOfText(tcg, 'TAI'); // TCG's own seconds, counted as TAI's are
      const { day, secondOfDay, ps } = tcgAt(instantOfText(tt, 'TT'));
      expect(apartPs({ taiS: day * S_PER_DAY + secondOfDay, ps }, read)).toBeLessThanOrEqual(TCG_TOLERANCE_PS);
      const dayOfTcg = Math.floor(read.taiS / S_PER_DAY);
      const back = instantFromTcg({ day: dayOfTcg, secondOfDay: read.taiS - dayOfTcg * S_PER_DAY, ps: read.ps });
      expect(apartPs(back, instantOfText(tai, 'TAI'))).toBeLessThanOrEqual(TCG_TOLERANCE_PS);
    }
  });
});

describe('SHA-1', () => {
  it('is that of the platform for any ASCII text', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary-ascii', maxLength: 300 }), (text) => {
        expect(sha1OfAscii(text)).toBe(createHash('sha1').update(text, 'ascii').digest('hex'));
      }),
    );
  });
});

describe('every leap second of the list', () => {
  it('is second 60 of the day before its row, and each picosecond of it comes back from text', () => {
    for (const step of table.steps.slice(1)) {
      const leap = { taiS: step.fromTaiS - 1, ps: 999_999_999_999 };
      const civil = civilFromInstant(leap, 'UTC', table, 'leap');
      expect(civil.ok && civil.value).toMatchObject({ hour: 23, minute: 59, second: 60, ps: leap.ps });
      expect(instantOfText(textOf(leap, 'UTC', 12), 'UTC')).toEqual(leap);
    }
  });
});

afterAll(() => {
  expect([...unused], 'rows that no test has used').toEqual([]);
});
