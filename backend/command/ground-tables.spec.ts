import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type Instant } from '#shared/time/instant';
import { type GroundTables, loadGroundTables } from './ground-tables';

/** TAI - UTC from 2017 on, s. Source: IERS leap-second list. */
const LEAP_S = 37;

/** Rows for 0 h UTC of 2020-01-02 to 05 in the columns of the IERS's readme.finals2000A; the last two are predictions. Numbers are invented. */
const FINALS = [
  '20 1 2 58850.00 I  0.076600 0.000030  0.282300 0.000030  I-0.1771000 0.0000052',
  '20 1 3 58851.00 I  0.075200 0.000030  0.282600 0.000030  I-0.1774000 0.0000052',
  '20 1 4 58852.00 P  0.073900 0.000250  0.283000 0.000210  P-0.1777000 0.0000410',
  '20 1 5 58853.00 P  0.072500 0.000410  0.283500 0.000330  P-0.1780000 0.0000760',
].join('\n');

/** An instant given as UTC, with picoseconds after it. */
const utc = (text: string, ps = 0): Instant => ({ taiS: Date.parse(`${text}Z`) / 1000 + LEAP_S, ps });

let folder: string;
let tables: GroundTables;
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'ground-tables-'));
  writeFileSync(join(folder, 'finals.txt'), FINALS);
  tables = loadGroundTables({ earthOrientation: join(folder, 'finals.txt') });
});
afterAll(() => {
  rmSync(folder, { recursive: true });
});

describe('the account of an Earth-orientation table', () => {
  const flags = (from: Instant, end: Instant): unknown => {
    const { orientation } = tables.accountOf({ from, end });
    if (!orientation.loaded) throw new Error('the table is not loaded');
    const { before, expired, predicted } = orientation;
    return [before && 'before', expired && 'expired', predicted && 'predicted'].filter((word) => word !== false);
  };
  const JAN_2 = utc('2020-01-02T00:00:00');
  const JAN_3 = utc('2020-01-03T00:00:00');
  const JAN_5 = utc('2020-01-05T00:00:00');

  it.each<[string, Instant, Instant, string[]]>([
    ['within the measured days', JAN_2, JAN_3, []],
    ['from a second before the table on', { ...JAN_2, taiS: JAN_2.taiS - 1 }, JAN_3, ['before']],
    ['to a picosecond after the last measured day', JAN_2, { ...JAN_3, ps: 1 }, ['predicted']],
    ['to the last day', JAN_3, JAN_5, ['predicted']],
    ['to a picosecond after the last day', JAN_2, { ...JAN_5, ps: 1 }, ['expired', 'predicted']],
    ['wholly before the table', utc('2019-01-01T00:00:00'), utc('2019-01-02T00:00:00'), ['before']],
    ['wholly after the table', utc('2021-01-01T00:00:00'), utc('2021-01-02T00:00:00'), ['expired', 'predicted']],
    ['longer than the table', utc('2019-01-01T00:00:00'), utc('2021-01-02T00:00:00'), ['before', 'expired', 'predicted']],
  ])('of a run %s', (_what, from, end, words) => {
    expect(flags(from, end)).toEqual(words);
    expect(tables.accountOf({ from, end }).warnings).toHaveLength(words.length);
  });

  it('names the ends of the table and of the run', () => {
    const { orientation, warnings } = tables.accountOf({ from: utc('2019-12-31T00:00:00'), end: utc('2020-01-06T12:00:00') });
    expect(orientation).toMatchObject({ first_tai: '2020-01-02T00:00:37.000000000000', last_tai: '2020-01-05T00:00:37.000000000000' });
    expect(warnings).toEqual([
      'earth orientation: the table begins at 2020-01-02T00:00:37 TAI, the run at 2019-12-31T00:00:37 TAI: before the table its first values are held',
      'earth orientation: the table ends at 2020-01-05T00:00:37 TAI, the run at 2020-01-06T12:00:37 TAI: after the table its last values are held',
      'earth orientation: the values are a prediction from 2020-01-04T00:00:37 TAI on, the run ends at 2020-01-06T12:00:37 TAI',
    ]);
  });

  it('says that none is loaded, without a warning', () => {
    const run = { from: utc('2020-01-02T00:00:00'), end: utc('2020-01-03T00:00:00') };
    expect(loadGroundTables({}).accountOf(run)).toMatchObject({ orientation: { loaded: false }, warnings: [] });
  });
});

describe('the account of the leap-second list', () => {
  it('warns when the run ends after the list, and not when it ends with it', () => {
    // The shipped list expires on 2027-06-28 (IERS Bulletin C; the line #@ of the list).
    const from = utc('2020-01-01T00:00:00');
    const expires = utc('2027-06-28T00:00:00');
    const list = loadGroundTables({});
    expect(list.accountOf({ from, end: expires })).toMatchObject({ leapSeconds: { expired: false }, warnings: [] });
    const late = list.accountOf({ from, end: { ...expires, ps: 1 } });
    expect(late.leapSeconds.expired).toBe(true);
    expect(late.warnings).toEqual([
      'leap seconds: the list expires at 2027-06-28T00:00:37 TAI, the run ends at 2027-06-28T00:00:37 TAI: leap seconds after that are unknown; ' +
        'give a newer list with --leap-seconds',
    ]);
  });
});
