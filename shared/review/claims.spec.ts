import { describe, expect, it } from 'vitest';
import { C_M_S } from '../constants';
import { orderFrom, turningOf } from '../relativity/order';
import { type Pair } from '../relativity/pair';
import { verdictOf } from '../relativity/verdict';
import {
  type Claim,
  CLAIM_KINDS,
  clockErrorThatUndoes,
  isOfSet,
  type NumbersOfSet,
  numbersOf,
  type PairNumbers,
  proposedClaims,
  whyNotSupported,
} from './claims';

const SIGMAS = 3;
const LIGHT_US_M = C_M_S / 1e6;
const unbounded = (value: number): number | 'Infinity' | '-Infinity' =>
  value === Infinity ? 'Infinity' : value === -Infinity ? '-Infinity' : value;

/** The pair (1, 2) of two sites 1,000 light-microseconds apart, b later by some microseconds; a frame moves from a to b at 0.6 c. */
function pairOf(dtUs: number, sigmaNs = 100): PairNumbers {
  const distanceM = 1000 * LIGHT_US_M;
  const pair: Pair = { dtPs: dtUs * 1e6, dtNs: dtUs * 1e3, dxM: [distanceM, 0, 0], distanceM, radiiM: 0, sigmaDtNs: sigmaNs, sigmaDM: 0 };
  const verdict = verdictOf(pair, SIGMAS);
  // gamma (dt - 0.6 x 1000 us), gamma 1.25
  const frame = { dtNs: 1.25 * (dtUs - 600) * 1e3, sigmaNs: 1.25 * sigmaNs };
  return {
    ...{ a: 1, b: 2, class: verdict.class, dtNs: pair.dtNs, distanceM, sigmaDtNs: sigmaNs, sigmaGapNs: verdict.sigmaGapNs },
    marginSigma: unbounded(verdict.marginSigma),
    reverseMarginSigma: unbounded(verdict.reverseMarginSigma),
    turning: verdict.class === 'spacelike' ? turningOf(pair) : null,
    terms: [
      { name: 'reading-a', sigmaNs: 1 },
      { name: 'clock-a', sigmaNs: sigmaNs * 0.6 },
      { name: 'clock-b', sigmaNs: sigmaNs * 0.8 },
    ],
    orders: [
      { dtNs: pair.dtNs, sigmaNs, order: orderFrom(pair.dtNs, sigmaNs, SIGMAS) },
      { ...frame, order: orderFrom(frame.dtNs, frame.sigmaNs, SIGMAS) },
    ],
  };
}

const setOf = (pair: PairNumbers): NumbersOfSet => ({
  sigmas: SIGMAS,
  events: [{ name: 'ORL:17' }, { name: 'VES:3' }],
  frames: [
    { code: 'geocentric', gamma: 1 },
    { code: 'fast', gamma: 1.25 },
  ],
  pairs: [pair],
});

const claim = (kind: Claim['kind'], a: number | null = 1, b: number | null = 2, frame: string | null = null): Claim => ({
  kind,
  a,
  b,
  frame,
});

/** By how many microseconds b is later: causes it, on the light cone within errors, seen late, seen together, turned in the fast frame. */
const TIMELIKE = 1500;
const UNDECIDED = 1000.1;
const LATE = 800;
const EARLY = 300;
const TOGETHER = 0.1;

describe('a claim is carried', () => {
  it.each([
    ['before-in-every-frame', TIMELIKE],
    ['before-in-frame', TIMELIKE],
    ['before-in-frame', UNDECIDED],
    ['before-in-frame', LATE],
    ['before-in-frame', EARLY],
    ['did-not-cause', TIMELIKE],
    ['did-not-cause', UNDECIDED], // light from b comes 2,000 us too late for a, whatever the class
    ['did-not-cause', TOGETHER],
    ['no-common-order', LATE],
    ['no-common-order', TOGETHER],
  ] as const)('%s, with b later by %d us', (kind, dtUs) => {
    expect(whyNotSupported(setOf(pairOf(dtUs)), claim(kind))).toBeUndefined();
  });

  it.each([
    ['fast', 1, 2, LATE],
    ['fast', 2, 1, EARLY], // turned: 300 us are less than 0.6 of 1,000 us
  ])('before-in-frame %s of %d and %d, with b later by %d us', (frame, a, b, dtUs) => {
    expect(whyNotSupported(setOf(pairOf(dtUs)), claim('before-in-frame', a, b, frame))).toBeUndefined();
  });

  it('did-not-cause by the earlier of a spacelike pair', () => {
    expect(whyNotSupported(setOf(pairOf(LATE)), claim('did-not-cause', 2, 1))).toBeUndefined();
  });

  it.each([TIMELIKE, UNDECIDED, LATE, TOGETHER])('undecided always: %d us', (dtUs) => {
    expect(whyNotSupported(setOf(pairOf(dtUs)), claim('undecided'))).toBeUndefined();
    expect(whyNotSupported(setOf(pairOf(dtUs)), claim('undecided', 2, 1))).toBeUndefined();
  });

  it('of the whole where some pair is spacelike', () => {
    expect(whyNotSupported(setOf(pairOf(LATE)), claim('no-common-order', null, null))).toBeUndefined();
  });
});

describe('a claim says more than its numbers carry', () => {
  it.each([
    ['before-in-every-frame', 2, 1, null, TIMELIKE, '-25000 standard errors of 100 ns, and more than 3 are needed; the pair is timelike'],
    [
      'before-in-every-frame',
      1,
      2,
      null,
      UNDECIDED,
      'holds by 1 standard errors of 100 ns, and more than 3 are needed; the pair is undecided',
    ],
    ['before-in-every-frame', 1, 2, null, LATE, 'the pair is spacelike'],
    ['before-in-frame', 2, 1, null, LATE, 'VES:3 and ORL:17, that the first is before the second in the geocentric frame holds by -8000'],
    ['before-in-frame', 1, 2, null, TOGETHER, 'holds by 1 standard errors'],
    ['before-in-frame', 1, 2, 'fast', EARLY, 'in fast holds by -3000'],
    ['before-in-frame', 1, 2, 'gone', LATE, 'the frame gone is not among those of the candidate: geocentric, fast'],
    ['did-not-cause', 2, 1, null, TIMELIKE, 'light from the second comes too late for the first holds by -5000'],
    ['did-not-cause', 2, 1, null, UNDECIDED, 'holds by -1 standard errors'],
    ['no-common-order', 1, 2, null, TIMELIKE, 'they lie outside of the light cone holds by -5000'],
    ['no-common-order', 1, 2, null, UNDECIDED, 'holds by -1'],
    ['no-common-order', null, null, null, TIMELIKE, 'none of the 1 pairs is spacelike'],
    ['undecided', null, null, null, TIMELIKE, 'undecided is said of a pair'],
    ['undecided', 1, 3, null, TIMELIKE, 'the places 1 and 3 are no pair'],
    ['undecided', 1, 1, null, TIMELIKE, 'the places 1 and 1 are no pair'],
    ['undecided', 1, null, null, TIMELIKE, 'the places 1 and none are no pair'],
    ['no-common-order', 1, 2, 'fast', LATE, 'a frame belongs to the claim before-in-frame alone'],
  ] as const)('%s of %s and %s in %s, with b later by %d us', (kind, a, b, frame, dtUs, why) => {
    expect(whyNotSupported(setOf(pairOf(dtUs)), claim(kind, a, b, frame))).toContain(why);
  });

  it('although its sign is right: a decision needs more than the standard errors asked for, and infinitely many will do', () => {
    const carried = (dtUs: number, sigmaNs: number) =>
      whyNotSupported(setOf(pairOf(dtUs, sigmaNs)), claim('before-in-every-frame')) === undefined;
    expect(carried(1000.31, 100)).toBe(true);
    expect(carried(1000.29, 100)).toBe(false);
    expect(carried(1000.001, 0)).toBe(true);
    expect(carried(1000, 0)).toBe(false);
  });
});

describe('proposed', () => {
  it.each([
    [TIMELIKE, [claim('before-in-every-frame')]],
    [UNDECIDED, [claim('undecided')]],
    [LATE, [claim('no-common-order'), claim('no-common-order', null, null)]],
  ])('is the strongest claim that is carried: %d us', (dtUs, claims) => {
    const set = setOf(pairOf(dtUs));
    expect(proposedClaims(set)).toEqual(claims);
    for (const one of claims) expect(whyNotSupported(set, one)).toBeUndefined();
  });
});

describe('the clock error that undoes', () => {
  it.each([
    ['before-in-every-frame', 1, 2, null, TIMELIKE, -500_000 + 300],
    ['no-common-order', 1, 2, null, LATE, 200_000 - 300],
    ['no-common-order', 2, 1, null, LATE, -(200_000 - 300)],
    ['did-not-cause', 1, 2, null, LATE, -1_800_000 + 300],
    ['did-not-cause', 2, 1, null, LATE, -200_000 + 300],
    ['before-in-frame', 1, 2, null, LATE, -800_000 + 300],
    ['before-in-frame', 1, 2, 'fast', LATE, -200_000 + 300],
    ['before-in-frame', 2, 1, 'fast', EARLY, -300_000 + 300],
  ] as const)('%s of %d and %d in %s, with b later by %d us, is %d ns', (kind, a, b, frame, dtUs, changeNs) => {
    const error = clockErrorThatUndoes(setOf(pairOf(dtUs)), claim(kind, a, b, frame));
    expect(error?.changeNs).toBeCloseTo(changeNs, 6); // some roundings of 1e6 ns
    const [ofA, ofB] = a === 1 ? [60, 80] : [80, 60];
    expect(error?.inSigmasOf.a).toBeCloseTo(Math.abs(changeNs) / ofA, 6);
    expect(error?.inSigmasOf.b).toBeCloseTo(Math.abs(changeNs) / ofB, 6);
    expect(error?.inSigmasOf.rate).toBeNull();
  });

  it('is a change after which the claim is carried no more, and before which it is', () => {
    const of = (dtUs: number) => whyNotSupported(setOf(pairOf(dtUs)), claim('before-in-every-frame'));
    const changeUs = (clockErrorThatUndoes(setOf(pairOf(TIMELIKE)), claim('before-in-every-frame'))?.changeNs ?? 0) / 1e3;
    expect(of(TIMELIKE + changeUs * 0.9999)).toBeUndefined();
    expect(of(TIMELIKE + changeUs * 1.0001)).toBeDefined();
  });

  it('is none of an exact clock, of what is undecided, and of the whole', () => {
    expect(clockErrorThatUndoes(setOf(pairOf(LATE, 0)), claim('no-common-order'))?.inSigmasOf).toEqual({ a: null, b: null, rate: null });
    expect(clockErrorThatUndoes(setOf(pairOf(UNDECIDED)), claim('undecided'))).toBeNull();
    expect(clockErrorThatUndoes(setOf(pairOf(LATE)), claim('no-common-order', null, null))).toBeNull();
  });
});

describe('the numbers of a claim', () => {
  it('are from its a to its b', () => {
    const set = setOf(pairOf(LATE));
    expect(numbersOf(set, claim('no-common-order'))).toMatchObject({
      class: 'spacelike',
      dtNs: 800_000,
      sigmaNs: 100,
      marginSigma: 2000,
      turningSpeedC: 0.8,
    });
    expect(numbersOf(set, claim('did-not-cause', 2, 1))).toMatchObject({ dtNs: -800_000, marginSigma: 2000 });
    expect(numbersOf(set, claim('before-in-frame', 1, 2, 'fast'))).toMatchObject({ dtNs: 250_000, sigmaNs: 125, marginSigma: 2000 });
    expect(numbersOf(setOf(pairOf(UNDECIDED)), claim('undecided'))).toMatchObject({ class: 'undecided', undoneBy: null });
  });

  it('of the whole count its pairs', () => {
    const whole = claim('no-common-order', null, null);
    expect(numbersOf(setOf(pairOf(LATE)), whole)).toEqual({
      sigmas: 3,
      pairs: 1,
      spacelikePairs: 1,
      marginSigma: 2000,
      leastTurningSpeedC: 0.8,
    });
    expect(numbersOf(setOf(pairOf(TIMELIKE)), whole)).toMatchObject({ spacelikePairs: 0, marginSigma: null, leastTurningSpeedC: null });
  });

  it('are none of what the set does not have', () => {
    for (const kind of CLAIM_KINDS) {
      expect(isOfSet(setOf(pairOf(LATE)), claim(kind, 1, 3))).toBe(false);
      expect(() => numbersOf(setOf(pairOf(LATE)), claim(kind, 1, 3))).toThrow('no numbers of the claim');
    }
    expect(isOfSet(setOf(pairOf(LATE)), claim('before-in-frame', 1, 2, 'gone'))).toBe(false);
    expect(isOfSet(setOf(pairOf(LATE)), claim('undecided', null, null))).toBe(false);
  });
});
