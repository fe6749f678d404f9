import { describe, expect, it } from 'vitest';
import { parseStatedTime } from '#shared/time/stated-time';
import { LEAP_SECONDS } from './server-instant';
import { typedInstant } from './typed-instant';

describe('an instant in a form', () => {
  it('is written without the decimals that say nothing, in the scale that is asked for', () => {
    expect(typedInstant({ taiS: 1_772_323_237, ps: 0 }, 'UTC')).toBe('2026-03-01T00:00:00 UTC');
    expect(typedInstant({ taiS: 1_772_323_237, ps: 500_000_000_000 }, 'TAI')).toBe('2026-03-01T00:00:37.5 TAI');
  });

  it('is read as the same instant, to the picosecond', () => {
    const instant = { taiS: 1_772_323_237, ps: 123_456_789_012 };
    for (const scale of ['UTC', 'TAI', 'GPS', 'TT'] as const) {
      const read = parseStatedTime(typedInstant(instant, scale), 'from', LEAP_SECONDS);
      expect(read.ok && read.value.instant).toEqual(instant);
    }
  });
});
