import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { createTaiWriter, timeText } from './format';
import { instantOf, PS_PER_S } from './instant';
import { createReadingParser } from './reading';
import { SCALES } from './scales';
import { shippedLeapSeconds } from './shipped-leap-seconds';

const table = shippedLeapSeconds();
const LAST = { taiS: 1_483_228_836, ps: 999_999_999_999 }; // the end of the leap second of 2016

describe('a written instant', () => {
  it('has 12 decimals and no suffix unless told otherwise', () => {
    expect(createTaiWriter()({ taiS: 1_772_366_400, ps: 0 })).toBe('2026-03-01T12:00:00.000000000000');
    expect(timeText({ taiS: 1_772_366_400, ps: 7 }, 'TAI', table)).toEqual({
      ok: true,
      value: '2026-03-01T12:00:00.000000000007',
      warnings: [],
    });
  });

  it.each([
    [0, '2016-12-31T23:59:60'],
    [1, '2016-12-31T23:59:60.9'],
    [6, '2016-12-31T23:59:60.999999'],
    [7, '2016-12-31T23:59:60.9999999'],
    [12, '2016-12-31T23:59:60.999999999999'],
  ])('with %i decimals is cut off, not rounded into the next year', (decimals, text) => {
    expect(timeText(LAST, 'UTC', table, decimals)).toMatchObject({ value: text });
  });

  it.each([
    [-62_167_219_200, '0000-01-01T00:00:00'],
    [-62_167_219_201, '-000001-12-31T23:59:59'],
    [253_402_300_799, '9999-12-31T23:59:59'],
    [253_402_300_800, '+010000-01-01T00:00:00'],
    [-1, '1969-12-31T23:59:59'],
  ])('of TAI second %i is %s', (taiS, text) => {
    expect(createTaiWriter(0)({ taiS, ps: 0 })).toBe(text);
  });

  it('is the problem before-1972 in UTC before 1972', () => {
    expect(timeText({ taiS: 0, ps: 0 }, 'UTC', table)).toMatchObject({ problem: { code: 'before-1972' } });
  });

  it.each([-1, 13, 1.5, NaN])('cannot have %d decimals', (decimals) => {
    expect(() => createTaiWriter(decimals)).toThrow(/whole number from 0 to 12/);
  });

  it('does not depend on what was written before it', () => {
    const write = createTaiWriter();
    const instants = fc.record({ taiS: fc.integer({ min: -1e6, max: 1e6 }), ps: fc.integer({ min: 0, max: PS_PER_S - 1 }) });
    fc.assert(
      fc.property(instants, (instant) => {
        expect(write(instant)).toBe(createTaiWriter()(instant));
      }),
    );
  });

  it('leads back to its instant on each scale, around every leap second', () => {
    const around = fc.record({
      step: fc.constantFrom(...table.steps),
      aheadPs: fc.oneof(fc.integer({ min: -3 * PS_PER_S, max: 3 * PS_PER_S }), fc.integer({ min: -2, max: 2 })),
    });
    for (const scale of SCALES) {
      const parse = createReadingParser(scale, table);
      fc.assert(
        fc.property(around, ({ step, aheadPs }) => {
          const instant = instantOf(step.fromTaiS, aheadPs);
          fc.pre(scale !== 'UTC' || instant.taiS >= table.steps[0]!.fromTaiS);
          const text = timeText(instant, scale, table);
          expect(parse(text.ok ? text.value : '')).toEqual({ ...instant, decimals: 12 });
        }),
        { numRuns: 500 },
      );
    }
  });

  it('leads back to its instant on each scale, at any time from 1972 to 2100', () => {
    const any = fc.record({ taiS: fc.integer({ min: 63_072_010, max: 4_102_444_800 }), ps: fc.integer({ min: 0, max: PS_PER_S - 1 }) });
    for (const scale of SCALES) {
      const parse = createReadingParser(scale, table);
      fc.assert(
        fc.property(any, (instant) => {
          const text = timeText(instant, scale, table);
          expect(parse(text.ok ? text.value : '')).toEqual({ ...instant, decimals: 12 });
        }),
      );
    }
  });
});
