import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { EXACT_CLOCK, type ClockSegment } from './clock-record';
import { daysSinceAt, eventInstant, prepareClock, restOfDaysSinceAt, segmentAt } from './correction';
import { addPicoseconds, instantOf, picosecondsBetween, PS_PER_S, type Instant } from './instant';

const START: Instant = { taiS: 1_772_323_237, ps: 0 };

function segmentOf(fields: Partial<ClockSegment>): ClockSegment {
  const none = { offsetNs: 0, offsetSigmaNs: 0, rateNsPerDay: 0, rateSigmaNsPerDay: 0, covarianceNs2PerDay: 0 };
  return { from: START, at: START, ...none, ...fields };
}

function eventOf(fields: Partial<ClockSegment>, delayNs: number, reading: Instant): Instant {
  return eventInstant(prepareClock([segmentOf(fields)], delayNs)[0]!, reading);
}

/** The same formula in whole numbers of 1e-20 ps, from the decimals of a few places that the property draws. */
function exactEvent(segment: ClockSegment, delayNs: number, reading: Instant): bigint {
  const scale = 10n ** 20n;
  const of = (value: number) => BigInt(Math.round(value * 1e6)) * (scale / 10n ** 6n); // at most 6 decimals
  const ps = (instant: Instant) => (BigInt(instant.taiS) * 10n ** 12n + BigInt(instant.ps)) * scale;
  const sinceAt = ps(reading) - of(delayNs) * 1000n - ps(segment.at);
  const gained = (of(segment.rateNsPerDay) * 1000n * sinceAt) / (86_400n * 10n ** 12n * scale);
  return ps(reading) - of(delayNs) * 1000n - of(segment.offsetNs) * 1000n - gained;
}

describe('the instant of an event', () => {
  it('is the reading for an exact clock without delay', () => {
    const [exact] = prepareClock(EXACT_CLOCK, 0);
    expect(eventInstant(exact!, { taiS: 5, ps: 7 })).toEqual({ taiS: 5, ps: 7 });
    expect(eventInstant(exact!, { taiS: -1e10, ps: 7 })).toEqual({ taiS: -1e10, ps: 7 });
  });

  it.each<[string, Partial<ClockSegment>, number, number]>([
    ['a delay takes off', {}, 412.5, -412_500],
    ['a clock that is ahead read too much', { offsetNs: 1830.2 }, 0, -1_830_200],
    ['a clock that is behind read too little', { offsetNs: -1830.2 }, 0, 1_830_200],
    ['both together', { offsetNs: 1830.2 }, 412.5, -2_242_700],
    ['an offset of 20 s loses nothing', { offsetNs: 20_000_000_000.123 }, 0.001, -20_000_000_000_124],
    ['decimals are those written: 0.1 + 0.2 ps', { offsetNs: 0.0001 }, 0.0002, 0],
    ['below one half stays', { offsetNs: 0.0004 }, 0, 0],
    ['above one half goes', { offsetNs: 0.0006 }, 0, -1],
    ['one half goes to the even picosecond', { offsetNs: 0.0005 }, 0, 0],
    ['three halves too', { offsetNs: 0.001 }, 0.0005, -2],
    ['one half of decimals that doubles cannot add (0.3 + 0.2 ps)', { offsetNs: 0.0003 }, 0.0002, 0],
    ['two numbers are rounded once, not one by one', { offsetNs: 0.0004 }, 0.0004, -1],
    ['an absurdly small offset is nothing', { offsetNs: 1e-300 }, 0, 0],
  ])('%s', (_name, fields, delayNs, movedPs) => {
    const reading = addPicoseconds(START, 500);
    const event = eventOf(fields, delayNs, reading);
    expect(picosecondsBetween(reading, event)).toBe(movedPs);
  });

  it('counts the rate from `at` to the reading less the delay, in days of 86,400 s', () => {
    const reading = instantOf(START.taiS + 86_400 + 1, 0);
    expect(picosecondsBetween(reading, eventOf({ rateNsPerDay: -35.1 }, 1e9, reading))).toBe(-PS_PER_S + 35_100);
    const before = instantOf(START.taiS - 43_200, 0);
    expect(picosecondsBetween(before, eventOf({ rateNsPerDay: -35.1 }, 0, before))).toBe(-17_550);
  });

  it('decides halves of the rate term by exact numbers: 35.1 ns/day is 13/32 ps/s', () => {
    for (let halves = 1; halves < 200; halves += 2) {
      const reading = { taiS: START.taiS + 16 * halves, ps: 0 };
      const gained = 6.5 * halves;
      const toEven = Math.floor(gained) % 2 === 0 ? Math.floor(gained) : Math.ceil(gained);
      expect(picosecondsBetween(reading, eventOf({ rateNsPerDay: 35.1 }, 0, reading))).toBe(-toEven);
      expect(picosecondsBetween(reading, eventOf({ rateNsPerDay: -35.1 }, 0, reading))).toBe(toEven);
    }
  });

  it('holds for offsets and rates beyond what doubles hold to a picosecond', () => {
    expect(eventOf({ offsetNs: 1e18 }, 0, START)).toEqual({ taiS: START.taiS - 1e9, ps: 0 });
    const reading = { taiS: START.taiS + 864_000_000, ps: 0 };
    expect(eventOf({ rateNsPerDay: 1e9 }, 0, reading)).toEqual({ taiS: reading.taiS - 10_000, ps: 0 });
  });

  it('is that of exact arithmetic, within the rounding to a picosecond', () => {
    const decimal = (size: number) => fc.integer({ min: -size * 1000, max: size * 1000 }).map((thousandths) => thousandths / 1000);
    fc.assert(
      fc.property(
        fc.record({ offsetNs: decimal(3e9), rateNsPerDay: decimal(1e6), atS: fc.integer({ min: -1e7, max: 1e7 }) }),
        decimal(1e6),
        fc.record({ taiS: fc.integer({ min: -1e7, max: 1e7 }), ps: fc.integer({ min: 0, max: PS_PER_S - 1 }) }),
        ({ offsetNs, rateNsPerDay, atS }, delayNs, since) => {
          const segment = segmentOf({ offsetNs, rateNsPerDay, at: { taiS: START.taiS + atS, ps: 123 } });
          const reading = { taiS: START.taiS + since.taiS, ps: since.ps };
          const event = eventInstant(prepareClock([segment], delayNs)[0]!, reading);
          const scale = 10n ** 20n;
          const awayE20 = (BigInt(event.taiS) * 10n ** 12n + BigInt(event.ps)) * scale - exactEvent(segment, delayNs, reading);
          expect(awayE20 <= scale / 2n + 1n && awayE20 >= -scale / 2n - 1n).toBe(true);
        },
      ),
      { numRuns: 2000 },
    );
  });

  it('is recovered from the reading of a simulated clock', () => {
    // Here the clock's t is the corrected time, in the formula the reading less delay: they differ by offset x rate.
    const TOLERANCE_PS = 2; // the rounding of the simulated reading, and of the event
    const record = { offsetNs: 1830.2, rateNsPerDay: -35.1 };
    const delayNs = 412.5;
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 2_000_000 }), fc.integer({ min: 0, max: PS_PER_S - 1 }), (afterS, ps) => {
        const event = { taiS: START.taiS + afterS, ps };
        const gainedPs = ((record.rateNsPerDay * 1000) / 86_400) * (afterS + ps / PS_PER_S);
        const reading = addPicoseconds(event, Math.round(record.offsetNs * 1000 + delayNs * 1000 + gainedPs));
        expect(Math.abs(picosecondsBetween(event, eventOf(record, delayNs, reading)))).toBeLessThanOrEqual(TOLERANCE_PS);
      }),
    );
  });
});

describe('the segment of a reading', () => {
  const next = { taiS: START.taiS + 100, ps: 500 };
  const last = { taiS: START.taiS + 200, ps: 0 };
  const record = [segmentOf({}), segmentOf({ from: next }), segmentOf({ from: last })];

  it.each([
    [0, START, 0],
    [0, addPicoseconds(START, -1), -1],
    [0, addPicoseconds(next, -1), 0],
    [0, next, 1],
    [0, addPicoseconds(last, -1), 1],
    [0, last, 2],
    [0, { taiS: 1e10, ps: 0 }, 2],
    [0.5, addPicoseconds(next, 499), 0],
    [0.5, addPicoseconds(next, 500), 1],
    [0.0005, next, 0], // less half a picosecond, not there yet
    [0.0005, addPicoseconds(next, 1), 1],
    [-0.0005, addPicoseconds(next, -1), 0],
    [-0.0005, next, 1],
    [-0.001, addPicoseconds(next, -1), 1],
    [1e9, addPicoseconds(next, PS_PER_S - 1), 0],
    [1e9, addPicoseconds(next, PS_PER_S), 1],
  ])('goes by the reading less a delay of %d ns', (delayNs, reading, index) => {
    expect(segmentAt(prepareClock(record, delayNs), reading)).toBe(index);
  });

  it('of an empty record does not exist, of an exact clock always', () => {
    expect(segmentAt([], START)).toBe(-1);
    expect(segmentAt(prepareClock(EXACT_CLOCK, 412.5), { taiS: -1e12, ps: 0 })).toBe(0);
  });

  it('tells the days since its `at`', () => {
    const [prepared] = prepareClock([segmentOf({})], 1e9);
    expect(daysSinceAt(prepared!, { taiS: START.taiS + 1 + 43_200, ps: 0 })).toBe(0.5);
    expect(daysSinceAt(prepared!, { taiS: START.taiS + 1 - 86_400, ps: 0 })).toBe(-1);
  });

  it('tells them so that two readings a picosecond apart, years after `at`, are a picosecond apart', () => {
    // One rounding of a second to 1e-16 s each: 1e-4 ps.
    const ROUNDING_PS = 1e-3;
    fc.assert(
      fc.property(
        fc.integer({ min: -5 * 365 * 86_400, max: 5 * 365 * 86_400 }),
        fc.integer({ min: 0, max: PS_PER_S - 1 }),
        fc.integer({ min: 1, max: 10_000_000 }),
        (sinceS, ps, apartPs) => {
          const [prepared] = prepareClock([segmentOf({})], 0.25);
          const first = { taiS: START.taiS + sinceS, ps };
          const second = addPicoseconds(first, apartPs);
          const [a, b] = [daysSinceAt(prepared!, first), daysSinceAt(prepared!, second)];
          const rest = restOfDaysSinceAt(prepared!, second, b) - restOfDaysSinceAt(prepared!, first, a);
          expect(Math.abs((b - a + rest) * 86_400 * PS_PER_S - apartPs)).toBeLessThan(ROUNDING_PS);
          expect(Math.abs(rest)).toBeLessThan(1e-12);
        },
      ),
    );
  });
});
