import { describe, expect, it } from 'vitest';
import { daysFromCivil } from './calendar';
import { timeText } from './format';
import { gpsWeekAt } from './gps-week';
import { julianDateOf } from './julian-date';
import { parseLeapSeconds } from './leap-seconds';
import { posixSecondsAt } from './posix';
import { civilFromInstant, dayTimeAt, instantFromCivil, SCALES, secondsInDay, startOfDay, type CivilTime, type Scale } from './scales';
import { sha1OfAscii } from './sha1';
import { shippedLeapSeconds } from './shipped-leap-seconds';

const table = shippedLeapSeconds();
const leapDay = { year: 2016, month: 12, day: 31 };

function instantOn(scale: Scale, civil: CivilTime) {
  const outcome = instantFromCivil(civil, scale, table, 'time');
  if (!outcome.ok) throw new Error(outcome.problem.text);
  return outcome.value;
}

describe('civil time', () => {
  it('keeps the leap second when a day is split', () => {
    const instants = [59, 60].map((second) => instantOn('UTC', { ...leapDay, hour: 23, minute: 59, second, ps: 5 }));
    const next = instantOn('UTC', { year: 2017, month: 1, day: 1, hour: 0, minute: 0, second: 0, ps: 5 });
    expect(instants[1]?.taiS).toBe(instants[0]!.taiS + 1);
    expect(next.taiS).toBe(instants[0]!.taiS + 2);
    expect(civilFromInstant(instants[1]!, 'UTC', table, 'time')).toEqual({
      ok: true,
      value: { ...leapDay, hour: 23, minute: 59, second: 60, ps: 5 },
      warnings: [],
    });
  });

  it('carries the fraction of a second between TT and TAI', () => {
    const noon = { year: 2026, month: 3, day: 1, hour: 12, minute: 0, second: 0, ps: 0 };
    expect(civilFromInstant(instantOn('TAI', noon), 'TT', table, 't')).toMatchObject({ value: { second: 32, ps: 184_000_000_000 } });
    expect(civilFromInstant(instantOn('TT', noon), 'TAI', table, 't')).toMatchObject({
      value: { hour: 11, minute: 59, second: 27, ps: 816_000_000_000 },
    });
    expect(instantOn('GPS', noon).taiS - instantOn('TAI', noon).taiS).toBe(19);
  });

  it.each([
    ['date', { ...leapDay, day: 32 }],
    ['time-of-day', { ...leapDay, hour: 24 }],
    ['time-of-day', { ...leapDay, hour: 23, minute: 59, second: 61 }],
    ['no-leap-second', { ...leapDay, second: 60 }],
    ['before-1972', { ...leapDay, year: 1971 }],
  ])('is the problem %s', (code, civil) => {
    const outcome = instantFromCivil({ hour: 0, minute: 0, second: 0, ps: 0, ...civil }, 'UTC', table, 'run.from');
    expect(outcome.ok ? undefined : outcome.problem).toMatchObject({ code, where: 'run.from' });
  });

  it('before 1972 has no UTC, but every other scale', () => {
    const instant = { taiS: 63_072_009, ps: 999_999_999_999 };
    for (const scale of SCALES) expect(civilFromInstant(instant, scale, table, 't').ok).toBe(scale !== 'UTC');
    expect(startOfDay(729, 'UTC', table)).toBeUndefined();
    expect(startOfDay(0, 'TAI', table)).toEqual({ taiS: 0, ps: 0 });
  });

  it('after the expiry of the list is a value with a warning, in UTC only', () => {
    const late = { year: 2030, month: 1, day: 1, hour: 0, minute: 0, second: 0, ps: 0 };
    for (const scale of SCALES) {
      const there = instantFromCivil(late, scale, table, 'run.to');
      expect(there).toMatchObject({ ok: true, warnings: scale === 'UTC' ? [{ code: 'leap-seconds-expired', where: 'run.to' }] : [] });
      expect(civilFromInstant(instantOn(scale, late), scale, table, 'run.to')).toMatchObject({
        value: late,
        warnings: there.ok && there.warnings,
      });
      expect(timeText(instantOn(scale, late), scale, table, 0)).toMatchObject({ warnings: scale === 'UTC' ? [{}] : [] });
    }
  });

  it('knows days of a second more or less in UTC only', () => {
    const digits = '39923126974023129600227206080010228778560011230368320010';
    const hash = (sha1OfAscii(digits).match(/.{8}/g) ?? []).join(' ');
    const shortened = parseLeapSeconds(`#$ 3992312697\n#@ 4023129600\n2272060800 10\n2287785600 11\n2303683200 10\n#h ${hash}\n`);
    if (!shortened.ok) throw new Error(shortened.problem.text);
    const lastDay = daysFromCivil(1972, 12, 31);
    expect(SCALES.map((scale) => secondsInDay(lastDay, scale, shortened.value))).toEqual([86_399, 86_400, 86_400, 86_400]);
    const last = { year: 1972, month: 12, day: 31, hour: 23, minute: 59, ps: 0 };
    expect(instantFromCivil({ ...last, second: 58 }, 'UTC', shortened.value, 't').ok).toBe(true);
    expect(instantFromCivil({ ...last, second: 59 }, 'UTC', shortened.value, 't')).toMatchObject({ problem: { code: 'time-of-day' } });
    expect(instantFromCivil({ ...last, second: 60 }, 'UTC', shortened.value, 't')).toMatchObject({ problem: { code: 'no-leap-second' } });
  });
});

describe('counts of time', () => {
  it('give a Julian date in two parts, the midnight exact', () => {
    expect(julianDateOf(dayTimeAt({ taiS: 946_728_000, ps: 0 }, 'TAI', table)!)).toEqual({ midnightJd: 2_451_544.5, fractionOfDay: 0.5 });
    expect(julianDateOf({ day: -1, secondOfDay: 0, ps: 0 })).toEqual({ midnightJd: 2_440_586.5, fractionOfDay: 0 });
  });

  it('give GPS weeks, negative before 1980', () => {
    expect(gpsWeekAt({ taiS: 3657 * 86_400 + 19, ps: 3 })).toEqual({ week: 0, secondOfWeek: 0, ps: 3 });
    expect(gpsWeekAt({ taiS: 3657 * 86_400 + 18, ps: 0 })).toEqual({ week: -1, secondOfWeek: 604_799, ps: 0 });
  });

  it('give no POSIX seconds before 1972', () => {
    expect(posixSecondsAt({ taiS: 63_072_009, ps: 0 }, table)).toBeUndefined();
    expect(posixSecondsAt({ taiS: 63_072_010, ps: 0 }, table)).toBe(63_072_000);
  });
});
