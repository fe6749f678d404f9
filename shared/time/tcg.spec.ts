import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { PS_PER_S, type Instant } from './instant';
import { instantFromTcg, tcgAt } from './tcg';

const EPOCH: Instant = { taiS: 220_924_800, ps: 0 };
const CENTURY_S = 36_525 * 86_400;
/** The resolution of an instant: the definition (IAU 2000 Resolution B1.9) is exact, and each side is rounded to a picosecond once. */
const ACCURACY_PS = 1;

/** L_G / (1 - L_G) of the time since 1977 in whole numbers; L_G has 19 decimals. */
function gainedPs(instant: Instant): number {
  const sincePs = BigInt(instant.taiS - EPOCH.taiS) * BigInt(PS_PER_S) + BigInt(instant.ps);
  const lg = 6_969_290_134n;
  return Number((sincePs * lg * 1000n) / (10n ** 19n - lg)) / 1000;
}

describe('geocentric coordinate time', () => {
  it('read the same as TT when 1977 began in TAI', () => {
    expect(tcgAt(EPOCH)).toEqual({ day: 2557, secondOfDay: 32, ps: 184_000_000_000 });
    expect(instantFromTcg({ day: 2557, secondOfDay: 32, ps: 184_000_000_000 })).toEqual(EPOCH);
  });

  it('is ahead of TT as exact arithmetic says, and leads back, for a century either way', () => {
    const seconds = fc.integer({ min: EPOCH.taiS - CENTURY_S, max: EPOCH.taiS + CENTURY_S });
    fc.assert(
      fc.property(seconds, fc.integer({ min: 0, max: PS_PER_S - 1 }), (taiS, ps) => {
        const instant = { taiS, ps };
        const tcg = tcgAt(instant);
        const aheadPs = (tcg.day * 86_400 + tcg.secondOfDay - taiS) * PS_PER_S + tcg.ps - ps - 32.184 * PS_PER_S;
        expect(Math.abs(aheadPs - gainedPs(instant))).toBeLessThanOrEqual(ACCURACY_PS);
        const back = instantFromTcg(tcg);
        expect(Math.abs((back.taiS - taiS) * PS_PER_S + back.ps - ps)).toBeLessThanOrEqual(ACCURACY_PS);
      }),
    );
  });
});
