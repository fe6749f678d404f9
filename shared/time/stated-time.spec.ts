import { describe, expect, it } from 'vitest';
import { shippedLeapSeconds } from './shipped-leap-seconds';
import { parseStatedTime } from './stated-time';

const table = shippedLeapSeconds();
const NOON_TAI_S = 1_772_366_400; // 2026-03-01T12:00:00 TAI

describe('a stated time', () => {
  it.each([
    ['2026-03-01T12:00:00Z', 'UTC', NOON_TAI_S + 37, 0],
    ['2026-03-01T12:00:00', 'UTC', NOON_TAI_S + 37, 0],
    ['2026-03-01 12:00:00 UTC', 'UTC', NOON_TAI_S + 37, 0],
    ['2026-03-01T12:00:00 TAI', 'TAI', NOON_TAI_S, 0],
    ['2026-03-01T12:00:00 GPS', 'GPS', NOON_TAI_S + 19, 0],
    ['2026-03-01T12:00:32.184000000001 TT', 'TT', NOON_TAI_S, 1],
    ['2016-12-31T23:59:60.5Z', 'UTC', 1_483_228_836, 500_000_000_000],
  ])('%s', (text, scale, taiS, ps) => {
    expect(parseStatedTime(text, 'run.from', table)).toEqual({ ok: true, value: { instant: { taiS, ps }, scale }, warnings: [] });
  });

  it.each([
    ['', 'time-empty'],
    ['2026-03-01', 'time-form'],
    ['2026-03-01T12:00:00Z UTC', 'time-form'],
    ['2026-03-01T12:00:00Z TAI', 'time-form'],
    ['2026-03-01T12:00:00  TAI', 'time-form'],
    ['2026-03-01T12:00:00TAI', 'time-form'],
    ['2026-03-01T12:00:00 tai', 'time-form'],
    ['2026-03-01T12:00:00 TDB', 'time-form'],
    ['2026-03-01T12:00:00 TAI ', 'time-form'],
    ['2026-03-01T12:00:00.1234567890123Z', 'time-form'],
    [' TAI', 'time-form'],
    ['2026-02-30T12:00:00 TT', 'date'],
    ['2026-03-01T24:00:00Z', 'time-of-day'],
    ['2016-12-31T23:59:60 TAI', 'no-leap-second'],
    ['2015-12-31T23:59:60Z', 'no-leap-second'],
    ['1971-12-31T00:00:00', 'before-1972'],
  ])('"%s" is the problem %s', (text, code) => {
    const outcome = parseStatedTime(text, 'clocks[0].segments[1].from', table);
    expect(outcome.ok ? undefined : outcome.problem).toMatchObject({ code, where: 'clocks[0].segments[1].from' });
    expect(outcome.ok ? '' : outcome.problem.text).toContain(text);
  });

  it('in UTC after the expiry of the list has a warning, in TAI none', () => {
    expect(parseStatedTime('2030-01-01T00:00:00Z', 'run.to', table)).toMatchObject({ ok: true, warnings: [{ where: 'run.to' }] });
    expect(parseStatedTime('2030-01-01T00:00:00 TAI', 'run.to', table)).toMatchObject({ ok: true, warnings: [] });
  });
});
